"""Where the gussets of roof braces stand in front of a column's flange: bolts of end plates keep clear of them.

Such a gusset comes out between strut and flange in the plane of the braces, before the heads of bolts in the flange.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence

import numpy as np
from numpy.typing import NDArray

from shedbim.description.connections import Connections
from shedbim.expand.clearances import GUSSET
from shedbim.expand.joints.bolt_room import Zone
from shedbim.expand.joints.column_side import Side
from shedbim.expand.joints.contract import Met
from shedbim.expand.joints.flattened import FLATTENED
from shedbim.expand.joints.standing import flange
from shedbim.model.joints import At
from shedbim.model.roles import Role
from shedbim.sections.profiles import Angle, Pipe

__all__ = ["gusset_levels", "middle_of_gusset"]

Array = NDArray[np.float64]

#: Heads and nuts with their wrenches reach so far behind the flange, mm: up to M24 with a little air.
_REACH = 30.0
#: Braces run across to the column's side: cosine of the angle to it, at least.
_ACROSS = 0.1


def middle_of_gusset(brace: Met, fin: float) -> float:
    """Give the level along the brace's z axis of the middle of its gusset, in joint axes, mm.

    Half its thickness under the leg of an angle, or beside the fin of a tube, which is ``fin`` thick.
    """
    is_angle = isinstance(brace.section.profile, Angle)
    below = -brace.section.outline.bounds[1] if is_angle else fin / 2
    return float(brace.origin @ brace.z) - below - GUSSET / 2


def gusset_levels(side: Side, neighbours: Sequence[Met], options: Connections) -> list[Zone]:
    """Give from where to where gussets of roof braces stand behind the flange of a column; none where it is a tube."""
    if not side.is_flange:
        return []
    return [_zone(side, met, options) for met in _on_column(side, neighbours)]


def _on_column(side: Side, neighbours: Sequence[Met]) -> Iterator[Met]:
    """The roof braces whose axes run from the column's own out over this side of it."""
    for met in neighbours:
        if met.role is not Role.ROOF_BRACE or met.at == At.ALONG:
            continue
        out, aside, _ = side.plane.seen(met.origin)
        depth, run = side.column.section.height, float(met.into @ side.plane.aside)
        outwards = float(met.into @ side.plane.out)
        if abs(run) < _ACROSS or outwards <= 0:
            continue
        there = out - aside * outwards / run
        if abs(there + depth / 2) < depth:
            yield met


def _zone(side: Side, brace: Met, options: Connections) -> Zone:
    """Lowest and highest level of one gusset behind the flange, over the width of the column."""
    plane, profile = side.plane, brace.section.profile
    pressed = options.tube_ends.braces == FLATTENED and isinstance(profile, Pipe)
    fin = 2 * profile.thickness if pressed else options.struts.thickness
    normal = brace.z
    away = middle_of_gusset(brace, fin) - float(plane.origin @ normal)
    upright = float(normal @ plane.up)
    levels = [
        (away - out * float(normal @ plane.out) - aside * float(normal @ plane.aside)) / upright
        for out in (0.0, -flange(side.column.section) - _REACH)
        for aside in (0.0, float(np.copysign(side.half_width, plane.seen(brace.origin)[1])))
    ]
    thick = GUSSET / 2 / abs(upright)
    return Zone(min(levels) - thick, max(levels) + thick)
