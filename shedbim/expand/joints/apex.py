"""Rafters at the apex: an end plate on each, bolted together; a haunch below by option.

The plates are flush with the rafters' faces above and below, and hardly wider: purlins and their sag bars, struts,
braces and the heads of gable posts come close. Rows keep a wrench's distance from the fins of struts. No resistance is
computed.
"""

from __future__ import annotations

from itertools import product

import numpy as np

from shedbim.description.connections import Connections
from shedbim.description.connections.end_plates import ApexOptions
from shedbim.expand.impossible import impossible
from shedbim.expand.joints.bolt_lines import tube_line
from shedbim.expand.joints.bolt_room import Room, Zone, beside, rows, sizes, spread
from shedbim.expand.joints.contract import Bolting, Connection, Fitting, Joint, Layer, Met, Welding, Work
from shedbim.expand.joints.haunch import Haunch, haunch_plates, plan
from shedbim.expand.joints.rafter_column import EXTENSION, GAUGE, custom_size, rafter_length, zones_between
from shedbim.expand.joints.standing import Line, Standing, flange, line_of
from shedbim.expand.joints.truss_node import girth
from shedbim.fasteners.bolts import bolt
from shedbim.fasteners.plate_stock import rounded_up
from shedbim.fasteners.welds import leg, throat_for
from shedbim.model.joints import At
from shedbim.model.roles import Role

__all__ = ["apex"]

#: Length of a haunch by rule, in depths of the rafter (common practice, value from memory).
_LENGTH = 2.0
#: How much wider than the rafter the plates may be on either side: struts end 10 mm beside the rafter, mm.
_BESIDE = 5.0
_SIDES = ("left", "right")
_SAME = 1e-6


def apex(joint: Joint, options: Connections) -> Connection:
    """Give end plates, bolts and haunches.

    Raises:
        DescriptionError: when bolts have no place.
    """
    own, members = options.apex, joint.members
    planes = [Standing.square_to(np.zeros(3), _level(met.into)) for met in members]
    lines = [line_of(met, plane) for met, plane in zip(members, planes, strict=True)]
    haunches = _haunches(own, joint, planes, lines)
    fins = _fins(joint, planes[0], options)
    room, half, low, high, aside, levels = _layout(own, members, lines, haunches, fins)
    fittings: list[Fitting] = []
    welds: list[Welding] = []
    works = []
    for i, (met, plane, line) in enumerate(zip(members, planes, lines, strict=True)):
        name = f"end plate {_SIDES[i]}"
        corners = [(-half, low), (half, low), (half, high), (-half, high)]
        fittings.append(plane.facing(name, Role.END_PLATE, 0.0, corners, own.thickness, i))
        throat = throat_for(min(own.thickness, flange(met.section)), met.grade)
        welds.append(Welding((i, name), throat, girth(met), all_round=True))
        more = (own.thickness - line.end) / line.run
        if abs(more) > _SAME:
            works.append(Work(i, set_back=more))
        haunch = haunches[i]
        if haunch is not None:
            names = (f"haunch web {_SIDES[i]}", f"haunch flange {_SIDES[i]}")
            plates, joined = haunch_plates(haunch, line, plane, i, names, name, met.grade)
            fittings += plates
            welds += joined
    first = planes[0]
    points = np.array([first.at(own.thickness, a, level) for level in levels for a in (-aside, aside)])
    layers = (Layer(fittings[0].name, own.thickness), Layer(f"end plate {_SIDES[1]}", own.thickness))
    fastener = bolt(room.diameter, options.bolts.grade, 2 * own.thickness, washers=(0, 1))
    bolts = Bolting("bolts", fastener, points, -first.out, layers)
    return Connection(tuple(fittings), (bolts,), tuple(welds), tuple(works))


def _level(direction: np.ndarray) -> np.ndarray:
    return np.array([direction[0], direction[1], 0.0])


def _haunches(
    own: ApexOptions, joint: Joint, planes: list[Standing], lines: list[Line]
) -> list[Haunch | None]:
    """The haunch of each rafter; none at all where a gable post is in the way of one: it carries the apex."""
    depth = own.haunch.depth
    none: list[Haunch | None] = [None, None]
    if depth is None:
        return none
    found = list(none)
    for i, (met, plane, line) in enumerate(zip(joint.members, planes, lines, strict=True)):
        wanted = own.thickness + (own.haunch.length or _LENGTH * met.section.height) * line.run
        wanted = min(wanted, own.thickness + 0.7 * rafter_length(met) * line.run)
        if any(_under(plane, post, wanted) for post in joint.neighbours):
            return none
        found[i] = plan(met, line, own.thickness, depth, wanted)
    return found


def _under(plane: Standing, met: Met, wanted: float) -> bool:
    """Whether a member is a gable post below a haunch that runs ``wanted`` mm out, or at the ridge itself."""
    out = float(plane.seen(met.origin)[0])
    reach = plane.reach(met, plane.out)
    return met.role is Role.GABLE_POST and -reach < out < wanted + reach


def _fins(joint: Joint, plane: Standing, options: Connections) -> list[Zone]:
    """From where to where the fins of struts stand beside the plates: they reach in front of the bolts.

    A fin is as high as the distances of its bolts ask for; see ``strut_end``.
    """
    found = []
    for met in joint.neighbours:
        if met.role is not Role.STRUT or met.at == At.ALONG:
            continue
        line = tube_line(met.section, int(options.struts.bolts), options.struts.size)
        out, _, level = plane.seen(met.origin)
        if line is not None and abs(out) < met.section.width:
            found.append(Zone(level - line.side, level + line.side))
    return found


def _layout(
    own: ApexOptions,
    members: tuple[Met, ...],
    lines: list[Line],
    haunches: list[Haunch | None],
    fins: list[Zone],
) -> tuple[Room, float, float, float, float, list[float]]:
    """Bolts, half the width, lowest and highest level, bolts aside and rows: the same for both plates.

    The largest of the allowed bolts that keep clear of the fins; where none do, the largest that fit at all.
    """
    start = own.thickness
    high = min(min(line.top(0.0), line.top(start)) for line in lines)
    low = min(line.bottom(start) for line in lines)
    for haunch in haunches:
        if haunch is not None:
            low = min(low, haunch.lowest - EXTENSION)
    width = min(met.section.width for met in members)
    webs = [met.section.profile.thickness for met in members]
    webs += [haunch.web for haunch in haunches if haunch is not None]
    half = min(rounded_up(max(met.section.width for met in members)) / 2, width / 2 + _BESIDE)
    thinnest = min(flange(met.section) for met in members)
    weld_leg = leg(throat_for(min(own.thickness, thinnest), members[0].grade))
    for taken, diameter in product((fins, []), sizes(own.bolt, custom_size(members[0]))):
        room = Room(diameter)
        least = max(webs) / 2 + room.from_wall(weld_leg)
        aside = spread(room, least, half, GAUGE * width / 2, half)
        if aside is None:
            continue
        each = [
            zones_between(met, line, start, haunch, room, weld_leg)
            for met, line, haunch in zip(members, lines, haunches, strict=True)
        ]
        zones = [
            Zone(
                max(a.low, b.low, low + room.edge),
                min(a.high, b.high, high - room.edge),
            )
            for a, b in zip(*each, strict=True)
        ]  # fmt: skip
        levels = rows([part for zone in zones for part in beside(zone, taken, room)], room)
        if len(levels) >= 2:
            return room, half, low, high, aside, levels
    names = " and ".join(met.section.designation for met in members)
    if own.bolt is not None:
        raise impossible(
            "connections.apex.bolt", "no room for these bolts at the apex", given=f"{own.bolt}: {names}"
        )
    raise impossible(
        "frames.roof.section", "no room for bolts at the apex", given=names, allowed="wider or deeper rafters"
    )
