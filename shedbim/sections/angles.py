"""Equal and unequal angles of EN 10056-1."""

from __future__ import annotations

from shedbim.sections.family import Family, Size, table_of
from shedbim.sections.profiles import Angle

__all__ = ["FAMILIES"]


def shape(dimensions: Size) -> Angle:
    """Give the angle from both legs, thickness, root radius and toe radius."""
    h, b, t, r1, r2 = dimensions
    return Angle(h, b, t, r1, r2)


FAMILIES = (
    Family(
        "L", "EN 10056-1", "angle with equal or unequal legs", "L leg x leg x thickness", "L 80x80x8",
        shape, table_of("l", ("h", "b", "t", "r1", "r2")), square=True,
    ),
)  # fmt: skip
