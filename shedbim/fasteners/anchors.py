"""Anchors cast into a foundation: rods with a plate washer over the base plate and another at the bottom."""

from __future__ import annotations

from math import ceil

from shedbim.fasteners.bolts import strength
from shedbim.fasteners.fastener import Disc, Fastener
from shedbim.fasteners.rows import listed

__all__ = ["anchor", "plate_washer"]

#: Rods are cut to multiples of this, mm; the rest stands out above the nut (common practice).
_STEP = 10.0


def plate_washer(diameter: float) -> tuple[float, float]:
    """Give side and thickness of the square plate washer, mm (common practice); ValueError where not listed."""
    row = listed("plate_washers", diameter)
    return row["side"], row["thickness"]


def anchor(
    diameter: float, grade: str, plate: float, below: float, embedment: float, *, nuts: int = 1
) -> Fastener:
    """Give an anchor, its axis pointing down from the top of the base plate.

    From the top: rod, nuts, plate washer; the rod through base plate, grout and concrete; a plate like the washer,
    a nut, and the end of the rod. One thread or more stands out of either nut.

    Args:
        diameter: nominal, mm.
        grade: property class of rod and nuts.
        plate: thickness of the base plate, which is the grip, mm.
        below: from the underside of the base plate to the concrete, mm.
        embedment: from the surface of the concrete to the plate at the bottom, mm.
        nuts: on top of the base plate; two where one locks the other.

    Raises:
        ValueError: for a diameter or class that is not listed, or where there is no plate or no embedment.
    """
    strength(grade)
    diameter, plate = float(diameter), float(plate)
    if not (plate > 0 and below >= 0 and embedment > 0 and nuts > 0):
        raise ValueError(
            f"no anchor through {plate:g} mm, {below:g} mm and {embedment:g} mm with {nuts} nuts"
        )
    row = listed("bolts", diameter)
    side, thick = plate_washer(diameter)
    bearing = plate + below + embedment
    above, tip = -thick - nuts * row["m"], bearing + thick + row["m"] + row["pitch"]
    length = _STEP * ceil((tip - above + row["pitch"]) / _STEP - 1e-9)
    stack = (
        Disc("round", diameter, tip - length, above),
        Disc("hexagon", row["s"], above, -thick),
        Disc("square", side, -thick, 0.0),
        Disc("round", diameter, 0.0, bearing),
        Disc("square", side, bearing, bearing + thick),
        Disc("hexagon", row["s"], bearing + thick, tip - row["pitch"]),
        Disc("round", diameter, tip - row["pitch"], tip),
    )
    return Fastener("anchor", diameter, length, grade, plate, (1, 1), nuts + 1, stack)
