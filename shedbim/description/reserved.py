"""The zones that a user keeps free of steel: openings in walls, and boxes anywhere."""

from __future__ import annotations

from typing import Annotated

from shedbim import units
from shedbim.fields import Choice, Options, Quantity, Text, default, left_out, required
from shedbim.fields.between import Between, Spot
from shedbim.limits.zone_kinds import ZONE_KINDS

__all__ = ["MOST_ZONES", "Reserved"]

MOST_ZONES = 200

_LABEL = Text(longest=8, pattern=r"[A-Za-z0-9.']+", words="the label of a grid line")
_BOX = "only for a box: with x and y"
_WALL = "only for a zone in a wall: with line and along"


class Reserved(Options):
    """One zone: a box by x, y and z, or an opening in the wall on a grid line by line, along and z."""

    name: Annotated[str, Text(longest=60)] = required("your word for it, another one for each zone")
    kind: Annotated[str, Choice(*ZONE_KINDS)] = required("what it is kept for")
    line: Annotated[str, _LABEL] | None = left_out(_BOX, "grid line of the wall that it is in")
    along: Annotated[tuple[Spot, Spot], Between()] | None = left_out(
        _BOX, "from where to where along the wall"
    )
    depth: Annotated[float, Quantity(units.LENGTH, "100 mm", "20 m")] = default(
        "1.2 m", "its size across the wall, half of it to either side of the line"
    )
    x: Annotated[tuple[Spot, Spot], Between()] | None = left_out(
        _WALL, "from where to where across the building"
    )
    y: Annotated[tuple[Spot, Spot], Between()] | None = left_out(
        _WALL, "from where to where along the building"
    )
    z: Annotated[tuple[Spot, Spot], Between(on_grid=False)] = required(
        "from which to which level above the floor"
    )
    clearance: Annotated[float, Quantity(units.LENGTH, "0 mm", "5 m")] | None = left_out(
        "the limit of its kind under checks.limits", "distance that steel keeps from it"
    )
