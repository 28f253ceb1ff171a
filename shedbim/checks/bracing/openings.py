"""Whether wall bracing crosses a door."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

from shedbim.checks.finding import Hit
from shedbim.checks.subject import Subject
from shedbim.model.roles import Role
from shedbim.model.zones import Zone

__all__ = ["openings"]

Floats = NDArray[np.float64]
Bools = NDArray[np.bool_]

#: The kind of zone that is an opening of a wall.
_DOOR = "door"
#: A door is in the wall of a column line when its zone comes this near to the line, mm.
_IN_WALL = 1500.0


def openings(subject: Subject) -> Iterator[Hit]:
    """Give the wall braces that cross a door as the wall is looked at, whether or not the zone reaches their plane."""
    pieces = subject.having(Role.WALL_BRACE)
    ends = subject.axes[pieces]
    for zone in subject.shed.zones:
        if zone.kind != _DOOR:
            continue
        place = ends[:, :, 0].mean(axis=1)
        near = (place > zone.low[0] - _IN_WALL) & (place < zone.high[0] + _IN_WALL)
        for piece in pieces[near & _crosses(ends[:, :, 1:], zone)].tolist():
            yield Hit(
                "brace-across-opening",
                (piece,),
                subject.point(piece),
                f"A wall brace crosses the door {zone.name}.",
                "Brace another bay (bracing.bays), or move the door (reserved).",
                about=zone.name,
            )


def _crosses(ends: Floats, zone: Zone) -> Bools:
    """Whether lines (n, 2, 2) in (y, z) pass through the rectangle of a zone."""
    low, high = np.array(zone.low[1:]), np.array(zone.high[1:])
    start, run = ends[:, 0], ends[:, 1] - ends[:, 0]
    with np.errstate(divide="ignore", invalid="ignore"):
        first, second = (low - start) / run, (high - start) / run
    # A line level or upright in the wall is inside between the sides that it runs along, or nowhere.
    level = run == 0
    inside = (start > low) & (start < high)
    enters = np.where(level, np.where(inside, -np.inf, np.inf), np.minimum(first, second))
    leaves = np.where(level, np.where(inside, np.inf, -np.inf), np.maximum(first, second))
    return np.asarray(np.maximum(enters.max(axis=1), 0.0) < np.minimum(leaves.min(axis=1), 1.0))
