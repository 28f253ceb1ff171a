"""Site splices of truss chords: an end plate on each of two hollow bars, bolted together beside the chord.

Bolts are beside the chord alone, so that nothing stands out above a top chord, where purlins are, nor below a bottom
chord. No resistance is computed.
"""

from __future__ import annotations

import numpy as np

from shedbim.description.connections import Connections
from shedbim.expand.joints.bolt_room import STEP, Room, Zone, rows, sizes
from shedbim.expand.joints.contract import Bolting, Connection, Fitting, Joint, Layer, Welding, Work
from shedbim.expand.joints.standing import Standing, line_of
from shedbim.expand.joints.truss_node import girth
from shedbim.fasteners.bolts import bolt
from shedbim.fasteners.plate_stock import rounded_up
from shedbim.fasteners.welds import leg, throat_for
from shedbim.model.roles import Role

__all__ = ["chord_splice"]

#: How far the plates stand out on the side of the webs: room for the weld, mm (common practice).
_EXTENSION = 15.0
#: Diameters by rule, and the depth of chord above which the larger is taken, mm (common practice).
_USUAL, _LARGE, _DEEP = 20.0, 24.0, 160.0
_SAME = 1e-6
_NAMES = ("end plate left", "end plate right")


def chord_splice(joint: Joint, options: Connections) -> Connection:
    """Give the two end plates and their bolts."""
    own, members = options.splices, joint.members
    planes = [Standing.square_to(np.zeros(3), met.into) for met in members]
    depth = members[0].section.height
    width = members[0].section.width
    top = members[0].role is Role.TOP_CHORD
    throat = throat_for(min(own.thickness, members[0].section.profile.thickness), members[0].grade, sides=1)
    room = Room(next(sizes(own.bolt, _LARGE if depth > _DEEP else _USUAL)))
    aside = rounded_up(width / 2 + room.from_wall(leg(throat)), STEP)
    height = rounded_up(max(depth + _EXTENSION, room.pitch + 2 * room.edge))
    high = depth / 2 if top else height - depth / 2
    low = high - height
    half = rounded_up(2 * (aside + room.edge)) / 2
    levels = rows([Zone(low + room.edge, high - room.edge)], room)
    corners = [(-half, low), (half, low), (half, high), (-half, high)]
    fittings: list[Fitting] = []
    welds, works = [], []
    for i, (met, plane) in enumerate(zip(members, planes, strict=True)):
        fittings.append(plane.facing(_NAMES[i], Role.END_PLATE, 0.0, corners, own.thickness, i))
        welds.append(Welding((i, _NAMES[i]), throat, girth(met), all_round=True))
        more = own.thickness - line_of(met, plane).end
        if abs(more) > _SAME:
            works.append(Work(i, set_back=more))
    first = planes[0]
    points = np.array([first.at(own.thickness, a, level) for level in levels for a in (-aside, aside)])
    layers = tuple(Layer(name, own.thickness) for name in _NAMES)
    fastener = bolt(room.diameter, options.bolts.grade, 2 * own.thickness, washers=(0, 1))
    bolts = Bolting("bolts", fastener, points, -first.out, layers)
    return Connection(tuple(fittings), (bolts,), tuple(welds), tuple(works))
