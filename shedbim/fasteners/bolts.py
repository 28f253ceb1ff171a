"""Bolts with nut and washers as they sit in a joint, and the length to buy.

Hexagon bolts of ISO 4014 (with shank) or ISO 4017 (threaded up to the head), nuts of ISO 4032, washers of
ISO 7089. Threads are drawn at the nominal diameter and washers without the play round the bolt, so that a bolt
is a few per cent heavier here than on the scales (common practice).
"""

from __future__ import annotations

from dataclasses import dataclass

from shedbim.fasteners.fastener import Disc, Fastener
from shedbim.fasteners.rows import by_diameter, listed, rows_of

__all__ = [
    "DIAMETERS",
    "GRADES",
    "LENGTHS",
    "Strength",
    "bolt",
    "bolt_length",
    "clear_threads",
    "shank_length",
    "strength",
    "thread_is_clear",
]

#: Nominal diameters there are, mm.
DIAMETERS: tuple[float, ...] = tuple(by_diameter("bolts"))
#: Nominal lengths there are, mm.
LENGTHS: tuple[float, ...] = tuple(float(row["length"]) for row in rows_of("lengths"))
#: Property classes there are.
GRADES: tuple[str, ...] = tuple(row["grade"] for row in rows_of("grades"))

#: Bolts up to this length have the shorter thread, mm (ISO 4014).
_SHORT = 125.0
#: Noise of sums of thicknesses, mm.
_NOISE = 1e-6


@dataclass(frozen=True)
class Strength:
    """Yield and ultimate strength of a property class, N/mm² (ISO 898-1). Data for lists; nothing is designed."""

    yielding: float
    ultimate: float


def strength(grade: str) -> Strength:
    """Give the nominal strengths of a property class; raises ValueError for one that is not listed."""
    for row in rows_of("grades"):
        if row["grade"] == grade:
            return Strength(float(row["yield"]), float(row["ultimate"]))
    raise ValueError(f"no property class {grade} among {', '.join(GRADES)}")


def bolt(diameter: float, grade: str, grip: float, washers: tuple[int, int] = (0, 1)) -> Fastener:
    """Give the bolt of a joint, its length by the length rule.

    Args:
        diameter: nominal, mm.
        grade: property class.
        grip: total thickness of the layers it clamps, mm.
        washers: number under the head and under the nut.

    Raises:
        ValueError: for a diameter or class that is not listed, no grip, or a grip beyond the longest bolt.
    """
    strength(grade)
    diameter, grip = float(diameter), float(grip)
    row = listed("bolts", diameter)
    length = bolt_length(diameter, grip, sum(washers))
    s, d2, h = row["s"], row["washer_d2"], row["washer_h"]
    head, nut = -washers[0] * h, grip + washers[1] * h
    stack = [Disc("hexagon", s, head - row["k"], head)]
    if washers[0]:
        stack.append(Disc("round", d2, head, 0.0))
    stack.append(Disc("round", diameter, 0.0, grip))
    if washers[1]:
        stack.append(Disc("round", d2, grip, nut))
    stack += [
        Disc("hexagon", s, nut, nut + row["m"]),
        Disc("round", diameter, nut + row["m"], head + length),
    ]
    return Fastener("bolt", diameter, length, grade, grip, washers, 1, tuple(stack))


def bolt_length(diameter: float, grip: float, washers: int = 1) -> float:
    """Give the length to buy, mm: grip, washers, nut and one thread, rounded up to the next there is.

    EN 1090-2 8.2.2: the length of protrusion shall be at least the length of one thread pitch measured from the
    outer surface of the nut to the end of the bolt. For bolts that are not preloaded at least one full thread, in
    addition to the thread run out, shall remain clear between the bearing surface of the nut and the unthreaded
    part of the shank: see ``clear_threads``.

    Args:
        diameter: nominal, mm.
        grip: total thickness of the layers, mm.
        washers: number of them, under head and nut together.

    Raises:
        ValueError: for a diameter that is not listed, no grip, or a grip beyond the longest bolt.
    """
    row = listed("bolts", diameter)
    if not grip > 0:
        raise ValueError(f"a grip of {grip:g} mm clamps nothing")
    least = grip + washers * row["washer_h"] + row["m"] + row["pitch"]
    for length in LENGTHS:
        if length >= least - _NOISE:
            return length
    longest = LENGTHS[-1] - (least - grip)
    raise ValueError(
        f"M{diameter:g} through {grip:g} mm wants {least:.1f} mm; the longest bolt of {LENGTHS[-1]:g} mm "
        f"clamps up to {longest:.1f} mm"
    )


def shank_length(diameter: float, length: float) -> float:
    """Give the length without thread under the head, mm (ISO 4014); 0 where it is threaded up to the head."""
    row = listed("bolts", diameter)
    threaded = row["b_short"] if length <= _SHORT else row["b_long"]
    return max(length - threaded, 0.0)


def clear_threads(fastener: Fastener) -> float:
    """Give how many threads lie between the shank of a bolt and the bearing face of its nut.

    Less than one (EN 1090-2 8.2.2; four for preloaded bolts) and the nut may run on to the shank.
    """
    row = listed("bolts", fastener.diameter)
    under_head, under_nut = (count * row["washer_h"] for count in fastener.washers)
    shank = shank_length(fastener.diameter, fastener.length)
    return (under_head + fastener.grip + under_nut - shank) / row["pitch"]


def thread_is_clear(fastener: Fastener) -> bool:
    """Whether the shank ends one thread or more before the nut; bolts threaded up to the head have none."""
    if not shank_length(fastener.diameter, fastener.length):
        return True
    return clear_threads(fastener) >= 1.0 - _NOISE
