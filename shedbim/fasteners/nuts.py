"""Nuts of a threaded bar: a nut and a washer on either side of what the bar passes through."""

from __future__ import annotations

from shedbim.fasteners.bolts import strength
from shedbim.fasteners.fastener import Disc, Fastener
from shedbim.fasteners.rows import listed

__all__ = ["bar_nuts"]


def bar_nuts(diameter: float, grade: str, grip: float) -> Fastener:
    """Give the nuts and washers on a threaded bar that is a piece of its own.

    Nuts are bored as their washers are (ISO 7089), so that the bar passes both clear; the steel of the nut's
    thread lies within the bar, which is drawn at its nominal diameter.

    Args:
        diameter: nominal, of the bar, mm.
        grade: property class.
        grip: thickness between the washers, mm.

    Raises:
        ValueError: for a diameter or class that is not listed, or no grip.
    """
    strength(grade)
    diameter, grip = float(diameter), float(grip)
    if not grip > 0:
        raise ValueError(f"a grip of {grip:g} mm clamps nothing")
    row = listed("bolts", diameter)
    s, m, bore, d2, h = row["s"], row["m"], row["washer_d1"], row["washer_d2"], row["washer_h"]
    stack = (
        Disc("hexagon", s, -h - m, -h, bore),
        Disc("round", d2, -h, 0.0, bore),
        Disc("round", d2, grip, grip + h, bore),
        Disc("hexagon", s, grip + h, grip + h + m, bore),
    )
    return Fastener("nuts", diameter, 0.0, grade, grip, (1, 1), 2, stack)
