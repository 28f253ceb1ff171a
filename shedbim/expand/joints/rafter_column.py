"""Rafters on columns: an end plate with bolts in rows, a haunch below, stiffeners in the column.

The end plate is flush with the rafter's upper face: purlins and their cleats come close above. It is no wider
than the wider of column and rafter: braces, rails and struts come close beside. Rows keep a wrench's distance from
flanges, stiffeners and the gussets of roof braces. No resistance is computed.
"""

from __future__ import annotations

from collections.abc import Sequence
from itertools import product
from math import floor

from shedbim.description.connections import Connections
from shedbim.description.connections.end_plates import RafterOptions
from shedbim.errors import DescriptionError
from shedbim.expand.impossible import impossible
from shedbim.expand.joints.bolt_room import PlateLayout, Room, Zone, beside, rows, sizes, spread
from shedbim.expand.joints.column_side import Side, bolted, bracket, column_side, gap_left
from shedbim.expand.joints.contract import Connection, Fitting, Joint, Met, Welding
from shedbim.expand.joints.gusset_levels import gusset_levels
from shedbim.expand.joints.haunch import Haunch, clear_of_posts, haunch_plates, plan
from shedbim.expand.joints.standing import Line, flange, line_of
from shedbim.expand.joints.stiffeners import stiffener_thickness, stiffeners
from shedbim.expand.joints.truss_node import girth
from shedbim.fasteners.plate_stock import rounded_up
from shedbim.fasteners.welds import leg, throat_for
from shedbim.model.roles import Role

__all__ = ["EXTENSION", "custom_size", "rafter_column", "zones_between"]

#: How far an end plate stands out below the lowest flange: room for its weld, mm (common practice).
EXTENSION = 15.0
#: A haunch by rule, in depths of the rafter; how far off it stays from a post (common practice).
_DEPTH, _LENGTH, _POST_AIR = 0.8, 3.5, 100.0
#: A haunch by rule is a whole number of these long; the least length is one depth of the rafter.
_STEP = 50.0
#: What a joint sees of a rafter ends here, mm.
_FARTHEST = 1400.0
#: Share of a flange's width that bolts are apart by custom (usual gauges of IPE and HE; common practice).
GAUGE = 0.55


def rafter_column(joint: Joint, options: Connections) -> Connection:
    """Give end plate, bolts, haunch and stiffeners, or the bracket on a column that is a tube.

    Raises:
        DescriptionError: when bolts have no place, or a strut is where a stiffener must be.
    """
    column, rafter = joint.members
    own = options.rafters
    bare = column_side(column, rafter)
    line = line_of(rafter, bare.plane)
    side, work = gap_left(bare, line, own.thickness, options.brackets.thickness)
    start = side.face + own.thickness
    haunch = _haunch(own, rafter, line, side, start, joint.neighbours)
    stiff = _stiffener(own, side, haunch)
    gussets = gusset_levels(side, joint.neighbours, options)
    layout = _layout(own, rafter, line, side, start, haunch, stiff, gussets)
    half, low, high = layout.half, layout.low, layout.high
    corners = [(-half, low), (half, low), (half, high), (-half, high)]
    fittings = [side.plane.facing("end plate", Role.END_PLATE, side.face, corners, own.thickness, 1)]
    throat = throat_for(min(own.thickness, flange(rafter.section)), rafter.grade)
    welds = [Welding((1, "end plate"), throat, girth(rafter), all_round=True)]
    added: list[tuple[list[Fitting], list[Welding]]] = []
    if haunch is not None:
        names = ("haunch web", "haunch flange")
        added.append(haunch_plates(haunch, line, side.plane, 1, names, "end plate", rafter.grade))
    if stiff is not None:
        added.append(stiffeners(side, "stiffener", stiff, joint.neighbours))
    if not side.is_flange:
        added.append(bracket(side, layout.room, layout.aside, half, low, high, line.rise))
    for more, joined in added:
        fittings += more
        welds += joined
    bolts = bolted(side, layout.room.diameter, options.bolts.grade, layout.aside, layout.rows, own.thickness)
    works = () if work is None else (work,)
    return Connection(tuple(fittings), (bolts,), tuple(welds), works)


def custom_size(met: Met) -> float:
    """Give the diameter of bolts by rule, mm (common practice, value from memory)."""
    return 24.0 if met.section.height > 400 else 20.0


def _haunch(
    own: RafterOptions, rafter: Met, line: Line, side: Side, start: float, neighbours: Sequence[Met]
) -> Haunch | None:
    """The haunch, where this rafter has one."""
    asked = own.haunch
    if asked.rafters == "none" or (asked.rafters == "inner" and rafter.role is Role.GABLE_RAFTER):
        return None
    height = rafter.section.height
    depth = asked.depth or rounded_up(_DEPTH * height)
    wanted = start + (asked.length or _LENGTH * height) * line.run
    wanted = min(wanted, _FARTHEST * line.run, start + 0.7 * rafter_length(rafter) * line.run)
    end = clear_of_posts(side.plane, wanted, neighbours, _POST_AIR)
    if asked.length is None:
        end = start + floor((end - start) / _STEP) * _STEP
    elif end < wanted:
        raise impossible(
            "connections.rafters.haunch.length", "a haunch comes over a gable post",
            allowed=f"at most {(end - start) / line.run:.0f} mm there",
        )  # fmt: skip
    if end - start < max(height, depth / 2):
        raise impossible(
            "connections.rafters.haunch.rafters", "no room for a haunch beside a gable post",
            allowed="none, or posts farther from the columns",
        )  # fmt: skip
    return plan(rafter, line, start, depth, end)


def rafter_length(met: Met) -> float:
    """How much of a member there is from the end that meets here, as far as it is seen, mm."""
    return max(met.to_start, met.to_end)


def _stiffener(own: RafterOptions, side: Side, haunch: Haunch | None) -> Zone | None:
    """Lower and upper level of the stiffeners behind the flange of a haunch; the cap is at the upper flange."""
    if own.stiffeners == "none" or not side.is_flange or haunch is None:
        return None
    middle, thickness = haunch.low - haunch.flange / haunch.cos / 2, stiffener_thickness(haunch.flange)
    return Zone(middle - thickness / 2, middle + thickness / 2)


def _layout(
    own: RafterOptions,
    rafter: Met,
    line: Line,
    side: Side,
    start: float,
    haunch: Haunch | None,
    stiff: Zone | None,
    gussets: list[Zone],
) -> PlateLayout:
    """Plate and bolts: the largest of the allowed bolts that keep clear of gussets, else the largest that fit."""
    high = min(line.top(side.back), line.top(start))
    lowest = line.bottom(start) if haunch is None else min(line.bottom(start), haunch.lowest)
    low = high - rounded_up(high - lowest + EXTENSION)
    widest = max(side.half_width, rafter.section.width / 2)
    web = max(rafter.section.profile.thickness, haunch.web if haunch else 0.0)
    weld_leg = leg(throat_for(min(own.thickness, flange(rafter.section)), rafter.grade))
    for taken, diameter in product((gussets, []), sizes(own.bolt, custom_size(rafter))):
        room = Room(diameter)
        least = max(side.least_aside(room), web / 2 + room.from_wall(weld_leg))
        custom = GAUGE * min(rafter.section.width, 2 * side.half_width) / 2
        most = widest - room.least_edge
        aside = spread(room, least, side.half_width, custom, most)
        if aside is None:
            continue
        half = min(max(rounded_up(2 * max(aside + room.edge, rafter.section.width / 2)) / 2, 0.0), widest)
        zones = [
            part
            for zone in zones_between(rafter, line, start, haunch, room, weld_leg)
            for part in beside(_shortened(zone, room, side, high, low, stiff), taken, room)
        ]
        levels = rows(zones, room)
        if len(levels) >= 2:
            return PlateLayout(room, half, low, high, aside, levels)
    raise _no_place(own, rafter, side)


def zones_between(
    rafter: Met, line: Line, start: float, haunch: Haunch | None, room: Room, weld_leg: float
) -> list[Zone]:
    """Give the stretches of an end plate at ``start`` between flanges, a wrench's distance from each.

    A flange that leans towards the bolts stands nearer to the nuts than to the plate.
    """
    wall, lean = room.from_wall(weld_leg), room.stack
    thick = flange(rafter.section) / line.run
    zones = [
        Zone(
            line.bottom(start) + thick + wall + max(0.0, line.rise) * lean,
            line.top(start) - thick - wall - max(0.0, -line.rise) * lean,
        )
    ]
    if haunch is not None:
        zones.append(
            Zone(
                haunch.low + wall + max(0.0, haunch.rise) * lean,
                line.bottom(start) - wall - max(0.0, -line.rise) * lean,
            )
        )
    return zones


def _shortened(zone: Zone, room: Room, side: Side, high: float, low: float, stiff: Zone | None) -> Zone:
    """A zone clear of the ends of plate and column, and of stiffeners."""
    bottom, top = max(zone.low, low + room.edge), min(zone.high, high - room.edge)
    if side.is_flange:
        top = min(top, side.head() - room.edge - EXTENSION)
    if stiff is not None:
        bottom = max(bottom, stiff.high + room.from_wall(0.8 * (stiff.high - stiff.low)))
    return Zone(bottom, top)


def _no_place(own: RafterOptions, rafter: Met, side: Side) -> DescriptionError:
    names = f"{rafter.section.designation} on {side.column.section.designation}"
    if own.bolt is not None:
        return impossible("connections.rafters.bolt", "no room for these bolts", given=f"{own.bolt}: {names}")
    field = "frames.columns.section"
    return impossible(
        field,
        "no room for bolts between a rafter and its column",
        given=names,
        allowed="wider or deeper sections",
    )
