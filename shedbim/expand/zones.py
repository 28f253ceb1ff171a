"""The reserved zones of a description, as boxes in building axes."""

from __future__ import annotations

from collections.abc import Mapping

from shedbim.description.reserved import Reserved
from shedbim.expand.impossible import impossible
from shedbim.fields.between import Spot
from shedbim.model.shed import Grid
from shedbim.model.zones import Zone
from shedbim.units import format_length

__all__ = ["zones"]


def zones(reserved: tuple[Reserved, ...], grid: Grid) -> tuple[Zone, ...]:
    """Give the zones in the order of the description.

    Raises:
        DescriptionError: when a zone names a line that the grid does not have, or has no size.
    """
    return tuple(_zone(each, f"reserved[{number}]", grid) for number, each in enumerate(reserved))


def _zone(reserved: Reserved, field: str, grid: Grid) -> Zone:
    letters = dict(zip(grid.letters, grid.x, strict=True))
    numbers = dict(zip(grid.numbers, grid.y, strict=True))
    z = _extent(reserved.z, {}, f"{field}.z")
    if reserved.x is not None and reserved.y is not None:
        x = _extent(reserved.x, letters, f"{field}.x")
        y = _extent(reserved.y, numbers, f"{field}.y")
    else:
        assert reserved.line is not None  # a rule of the description: a box or a wall
        assert reserved.along is not None
        across = _place(Spot(0.0, reserved.line), letters | numbers, f"{field}.line")
        half = reserved.depth / 2
        through = (across - half, across + half)
        if reserved.line in letters:
            x, y = through, _extent(reserved.along, numbers, f"{field}.along")
        else:
            x, y = _extent(reserved.along, letters, f"{field}.along"), through
    low, high = (x[0], y[0], z[0]), (x[1], y[1], z[1])
    return Zone(reserved.name, reserved.kind, low, high, reserved.clearance)


def _extent(spots: tuple[Spot, Spot], lines: Mapping[str, float], field: str) -> tuple[float, float]:
    """From where to where, mm."""
    first, last = (_place(spot, lines, field) for spot in spots)
    if not first < last:
        given = f"{format_length(first)} to {format_length(last)}"
        raise impossible(field, "the zone has no size here", given=given, allowed="the lesser place first")
    return first, last


def _place(spot: Spot, lines: Mapping[str, float], field: str) -> float:
    """Where a place is, mm."""
    try:
        return spot.on(lines)
    except KeyError:
        known = ", ".join(lines)
        raise impossible(field, "there is no such line", given=spot.line, allowed=known) from None
