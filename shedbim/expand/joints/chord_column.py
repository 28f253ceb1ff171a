"""Truss chords on columns: an end plate on the chord, bolted to the column's flange or to the bracket of a tube.

The plate of a top chord is flush with its upper face: purlins and their cleats come close above. Bolts are beside
the chord where the column is wide enough, else above and below it beside the webs: below alone at a top chord,
above and below at a bottom chord. No resistance is computed.
"""

from __future__ import annotations

from shedbim.description.connections import Connections
from shedbim.description.connections.end_plates import ChordOptions
from shedbim.errors import DescriptionError
from shedbim.expand.impossible import impossible
from shedbim.expand.joints.bolt_room import PlateLayout, Room, Zone, beside, rows, sizes, spread
from shedbim.expand.joints.column_side import Side, bolted, bracket, column_side, gap_left
from shedbim.expand.joints.contract import Connection, Fitting, Joint, Met, Welding
from shedbim.expand.joints.gusset_levels import gusset_levels
from shedbim.expand.joints.standing import Line, line_of
from shedbim.expand.joints.truss_node import girth
from shedbim.fasteners.plate_stock import rounded_up
from shedbim.fasteners.welds import leg, throat_for
from shedbim.model.roles import Role

__all__ = ["chord_column"]

#: How far an end plate stands out above and below a chord: room for its weld, mm (common practice).
_EXTENSION = 15.0
#: Diameter of bolts by rule, mm; seat plate: thickness, how far it stands out before the end plate (common
#: practice, values from memory).
_CUSTOM, _SEAT, _SEAT_OUT = 20.0, 15.0, 40.0
_WEBS = (Role.DIAGONAL, Role.POST)


def chord_column(joint: Joint, options: Connections) -> Connection:
    """Give end plate and bolts, the bracket on a column that is a tube, and a seat where there is one.

    Raises:
        DescriptionError: when bolts have no place.
    """
    column, chord = joint.members
    own = options.chords
    bare = column_side(column, chord)
    line = line_of(chord, bare.plane)
    side, work = gap_left(bare, line, own.thickness, options.brackets.thickness)
    layout = _layout(own, joint, line, side, gusset_levels(side, joint.neighbours, options))
    half, low, high = layout.half, layout.low, layout.high
    corners = [(-half, low), (half, low), (half, high), (-half, high)]
    fittings = [side.plane.facing("end plate", Role.END_PLATE, side.face, corners, own.thickness, 1)]
    throat = throat_for(min(own.thickness, chord.section.profile.thickness), chord.grade, sides=1)
    welds = [Welding((1, "end plate"), throat, girth(chord), all_round=True)]
    if not side.is_flange:
        more, joined = bracket(side, layout.room, layout.aside, half, low, high, line.rise)
        fittings += more
        welds += joined
    if own.seat == "plate" and chord.role is Role.BOTTOM_CHORD:
        more, joined = _seat(side, own, layout)
        fittings += more
        welds += joined
    bolts = bolted(side, layout.room.diameter, options.bolts.grade, layout.aside, layout.rows, own.thickness)
    return Connection(tuple(fittings), (bolts,), tuple(welds), () if work is None else (work,))


def _seat(side: Side, own: ChordOptions, layout: PlateLayout) -> tuple[list[Fitting], list[Welding]]:
    """A plate on the column's face that the end plate is set down on."""
    far = side.face + own.thickness + _SEAT_OUT
    half = min(layout.half, side.half_width)
    outline = [(0.0, -half), (far, -half), (far, half), (0.0, half)]
    seat = side.plane.level("seat", Role.SEAT, layout.low - _SEAT / 2, outline, _SEAT, 0)
    throat = throat_for(_SEAT, side.column.grade)
    return [seat], [Welding((0, "seat"), throat, 4 * half)]


def _layout(own: ChordOptions, joint: Joint, line: Line, side: Side, gussets: list[Zone]) -> PlateLayout:
    """Plate and bolts: the largest of the allowed bolts that fits beside the chord, else one above and below it.

    Clear of the gussets of roof braces where any are.
    """
    chord = joint.members[1]
    for taken in (gussets, []):
        for diameter in sizes(own.bolt, _CUSTOM):
            found = _beside(Room(diameter), own, chord, line, side, taken)
            if found is not None:
                return found
        for diameter in sizes(own.bolt, _CUSTOM):
            found = _above_and_below(Room(diameter), own, joint, line, side, taken)
            if found is not None:
                return found
    raise _no_place(own, chord, side)


def _highest(line: Line, start: float, near: float) -> float:
    """The level that the upper face of a chord does not go below, at the plate."""
    return min(line.top(near), line.top(start))


def _beside(
    room: Room, own: ChordOptions, chord: Met, line: Line, side: Side, taken: list[Zone]
) -> PlateLayout | None:
    """Two rows beside the chord; the plate comes out below it where a gusset leaves no room for both."""
    start = side.face + own.thickness
    half_chord = chord.section.width / 2
    least = max(half_chord + room.from_wall(_leg(own, chord)), side.least_aside(room))
    aside = spread(room, least, side.half_width, least, side.half_width)
    if aside is None:
        return None
    high = _highest(line, start, side.back)
    if chord.role is not Role.TOP_CHORD:
        high += _EXTENSION
    least_height = max(high - line.bottom(start) + _EXTENSION, room.pitch + 2 * room.edge)
    under = max([high - each.low + room.from_wall() + room.edge for each in taken], default=0.0)
    for height in (least_height, max(least_height, under), max(least_height, under + room.pitch)):
        low = high - rounded_up(height)
        zone = _on_steel(Zone(low + room.edge, high - room.edge), room, side)
        levels = rows(beside(zone, taken, room), room)
        if len(levels) >= 2:
            break
    else:
        return None
    half = min(rounded_up(2 * (aside + room.edge)) / 2, side.half_width)
    return PlateLayout(room, half, low, high, aside, levels)


def _above_and_below(
    room: Room, own: ChordOptions, joint: Joint, line: Line, side: Side, taken: list[Zone]
) -> PlateLayout | None:
    """A row above and a row below a bottom chord, two rows below a top chord; beside the webs."""
    chord = joint.members[1]
    start = side.face + own.thickness
    wall = room.from_wall(_leg(own, chord))
    webs = [met.section.width for met in joint.neighbours if met.role in _WEBS]
    off_webs = max(webs, default=0.0) / 2 + room.from_wall(0.8 * chord.section.profile.thickness)
    least = max(off_webs, side.least_aside(room))
    aside = spread(room, least, side.half_width, least, side.half_width)
    if aside is None:
        return None
    lean = room.stack * abs(line.rise)
    upper, lower = line.top(start) + wall + lean, line.bottom(start) - wall - lean
    if chord.role is Role.TOP_CHORD:
        in_the_way = [each for each in taken if each.high + room.from_wall() > lower - room.pitch]
        lower = min([lower, *(each.low - room.from_wall() for each in in_the_way)])
        levels = [lower, lower - room.pitch]
        high = _highest(line, start, side.back)
    else:
        levels = [upper, lower]
        high = upper + room.edge
    low = high - rounded_up(high - (levels[-1] - room.edge))
    if side.is_flange and levels[0] > side.head() - room.edge - _EXTENSION:
        return None
    half = min(rounded_up(2 * max(aside + room.edge, chord.section.width / 2)) / 2, side.half_width)
    return PlateLayout(room, half, low, high, aside, levels)


def _on_steel(zone: Zone, room: Room, side: Side) -> Zone:
    """A zone below the head of the column, where bolts pass through its flange."""
    return Zone(zone.low, min(zone.high, side.head() - room.edge - _EXTENSION)) if side.is_flange else zone


def _leg(own: ChordOptions, chord: Met) -> float:
    """Leg of the weld round the chord, mm."""
    return leg(throat_for(min(own.thickness, chord.section.profile.thickness), chord.grade, sides=1))


def _no_place(own: ChordOptions, chord: Met, side: Side) -> DescriptionError:
    names = f"{chord.section.designation} on {side.column.section.designation}"
    if own.bolt is not None:
        return impossible("connections.chords.bolt", "no room for these bolts", given=f"{own.bolt}: {names}")
    return impossible(
        "frames.columns.section", "no room for bolts between a chord and its column", given=names,
        allowed="wider columns or narrower chords",
    )  # fmt: skip
