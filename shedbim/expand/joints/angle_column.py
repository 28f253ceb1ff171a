"""Ends of trusses of angles at columns: the end gusset is welded to an end plate, bolted to the column's flange.

The chord's angles stop short of the end plate, its bolts are beyond their toes: below a top chord, above a bottom one,
so that nothing stands out where purlins lie. No resistance is computed.
"""

from __future__ import annotations

import numpy as np
from manifold3d import CrossSection

from shedbim.description.connections import Connections
from shedbim.description.connections.end_plates import ChordOptions
from shedbim.expand.impossible import impossible
from shedbim.expand.joints.angle_gusset import AnglePair, chord_patch, gusset, pairs_of, web_patch
from shedbim.expand.joints.angle_node import gap_of
from shedbim.expand.joints.bolt_room import Room, sizes, spread
from shedbim.expand.joints.column_side import Side, bolted, column_side
from shedbim.expand.joints.contract import Connection, Joint, Welding
from shedbim.expand.joints.gusset_legs import RECESS, Leg
from shedbim.fasteners.plate_stock import rounded_up
from shedbim.fasteners.welds import leg, throat_for
from shedbim.model.roles import Role

__all__ = ["BEFORE_CHORD", "angle_column", "web_room"]

#: End plate to the sawn ends of a chord: room for the weld of the gusset (common practice).
BEFORE_CHORD = 15.0
#: Diameter of bolts by rule, mm (common practice), rows of them, and air before the end of a bolt.
_CUSTOM, _ROWS, _AIR = 20.0, 2, 20.0
#: The strip of a gusset along its end plate, and from there to the plate's edge, mm.
_STRIP, _EDGE = 10.0, 5.0
_FAR = 3000.0


def web_room(own: ChordOptions) -> float:
    """Give how far webs stay off an end plate: the length of its bolts and air, mm."""
    return Room(next(sizes(own.bolt, _CUSTOM))).stack + _AIR


def angle_column(joint: Joint, options: Connections) -> Connection:
    """Give gusset, end plate and bolts of a chord's end and of the webs that meet there.

    Raises:
        DescriptionError: when bolts have no place.
    """
    column, own = joint.members[0], options.chords
    pairs = pairs_of(joint, 1)
    chord = next(pair for pair in pairs if pair.is_chord)
    side = column_side(column, chord.near)
    near, far = (joint.members[number] for number in chord.numbers)
    thickness = gap_of(near, far)
    throat = throat_for(min(thickness, own.thickness), near.grade)
    room, aside = _room(side, own, thickness / 2, leg(throat), near.section.designation)
    low, high, levels = _heights(side, chord, own, room)
    half = min(rounded_up(2 * (aside + room.edge)) / 2, side.half_width)
    corners = [(-half, low), (half, low), (half, high), (-half, high)]
    end_plate = side.plane.facing(
        "end plate", Role.END_PLATE, side.face, corners, own.thickness, chord.numbers[0]
    )
    face = side.face + own.thickness
    before = abs(float(chord.leg.start[0] - side.plane.origin[0])) - face
    patches = [_flat(side, (face, face + _STRIP), (low + _EDGE, high - RECESS))]
    patches.append(chord_patch(chord.leg, options, ends=True, before=2 * before))
    patches += [web_patch(pair.leg, pair.near.section, options) for pair in pairs if not pair.is_chord]
    behind = _flat(side, (face - _FAR, face), (-_FAR, _FAR))
    plate, boltings, welds, _ = gusset(pairs, patches, thickness, options, behind)
    welds.append(Welding(("gusset", "end plate"), throat, 2 * (high - low - 2 * _EDGE)))
    bolts = bolted(side, room.diameter, options.bolts.grade, aside, levels, own.thickness)
    return Connection((plate, end_plate), (bolts, *boltings), tuple(welds))


def _room(side: Side, own: ChordOptions, half_gusset: float, weld: float, name: str) -> tuple[Room, float]:
    """The largest bolts that fit between the gusset and the edge of the flange, and how far aside they are."""
    for diameter in sizes(own.bolt, _CUSTOM):
        room = Room(diameter)
        least = max(half_gusset + room.from_wall(weld), side.least_aside(room))
        aside = spread(room, least, side.half_width, least, side.half_width)
        if aside is not None:
            return room, aside
    if own.bolt is not None:
        raise impossible(
            "connections.chords.bolt", "no room for these bolts beside the gusset of a truss", given=own.bolt
        )
    raise impossible(
        "frames.columns.section", "no room for bolts between a truss and its column",
        given=f"{name} on {side.column.section.designation}", allowed="wider columns",
    )  # fmt: skip


def _heights(side: Side, chord: AnglePair, own: ChordOptions, room: Room) -> tuple[float, float, list[float]]:
    """Lowest and highest level of the end plate, and the levels of its rows."""
    line, heel_up = chord.leg, float(chord.leg.heel[1]) > 0
    near, far = side.face, side.face + own.thickness + room.stack
    backs = [_level(side, line, out, line.back) for out in (near, far)]
    toes = [_level(side, line, out, -line.toe) for out in (near, far)]
    wall = room.from_wall()
    if heel_up:
        high = min(backs)
        first = min(toes) - wall
        first = min(first, side.head() - room.edge)
        levels = [first - room.pitch * k for k in range(_ROWS)]
        low = high - rounded_up(high - (levels[-1] - room.edge))
        return low, high, levels
    low = max(backs)
    first = max(toes) + wall
    levels = [first + room.pitch * k for k in range(_ROWS - 1, -1, -1)]
    return low, low + rounded_up(levels[0] + room.edge - low), levels


def _level(side: Side, line: Leg, out: float, up: float) -> float:
    """Level over the plane's origin of a line parallel to a chord's axis, so far out from the column's face."""
    origin = side.plane.origin
    point = line.point(0.0, up)
    run = (float(origin[0]) + float(side.plane.out[0]) * out - float(point[0])) / float(line.along[0])
    return float(point[1]) + run * float(line.along[1]) - float(origin[2])


def _flat(side: Side, outs: tuple[float, float], levels: tuple[float, float]) -> CrossSection:
    """The rectangle between two distances out and two levels, in x and z."""
    x = sorted(float(side.plane.origin[0] + side.plane.out[0] * out) for out in outs)
    z = [float(side.plane.origin[2]) + level for level in levels]
    return CrossSection([np.array([[x[0], z[0]], [x[1], z[0]], [x[1], z[1]], [x[0], z[1]]])])
