"""Room that a wrench needs over the heads and nuts of bolts: cylinders over each, as shapes."""

from __future__ import annotations

from dataclasses import replace

from shedbim.fasteners.distances import wrench_wall
from shedbim.fasteners.fastener import Disc
from shedbim.model.bolt_groups import BoltGroup

__all__ = ["axes_of", "wrench_room"]


def wrench_room(group: BoltGroup, length: float) -> BoltGroup | None:
    """Give the room for wrenches over a bolt group, in the group's own frame; None where no size is listed.

    From the steel up to ``length`` mm beyond the head and beyond the tip, as wide as ``distances.wrench_wall`` asks.
    Of an anchor only the nut on top is turned.
    """
    try:
        radius = wrench_wall(group.fastener.diameter)
    except ValueError:
        return None
    low = min(disc.start for disc in group.fastener.stack) - length
    room = [Disc("round", 2 * radius, low, 0.0)]
    if group.fastener.kind != "anchor":
        high = max(disc.end for disc in group.fastener.stack) + length
        room.append(Disc("round", 2 * radius, group.fastener.grip, high))
    return _of(group, tuple(room))


def axes_of(room: BoltGroup, thickness: float) -> BoltGroup:
    """Give rods of this thickness, mm, on the axes of the cylinders."""
    return _of(room, tuple(replace(disc, size=thickness) for disc in room.fastener.stack))


def _of(group: BoltGroup, stack: tuple[Disc, ...]) -> BoltGroup:
    return replace(group, fastener=replace(group.fastener, stack=stack))
