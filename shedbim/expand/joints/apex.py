"""Rafters at the apex: an end plate on each, bolted together; a haunch below by option.

The plates are flush with the rafters' faces above and below, and hardly wider: purlins and their sag bars, struts,
braces and the heads of gable posts come close. No resistance is computed.
"""

from __future__ import annotations

import numpy as np

from shedbim.description.connections import Connections
from shedbim.description.connections.end_plates import ApexOptions
from shedbim.expand.impossible import impossible
from shedbim.expand.joints.bolt_room import Room, Zone, rows, sizes, spread
from shedbim.expand.joints.contract import Bolting, Connection, Fitting, Joint, Layer, Met, Welding, Work
from shedbim.expand.joints.haunch import Haunch, clear_of_posts, haunch_plates, plan
from shedbim.expand.joints.rafter_column import EXTENSION, GAUGE, custom_size, rafter_length, zones_between
from shedbim.expand.joints.standing import Line, Standing, flange, line_of
from shedbim.expand.joints.truss_node import girth
from shedbim.fasteners.bolts import bolt
from shedbim.fasteners.plate_stock import rounded_up
from shedbim.fasteners.welds import leg, throat_for
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
        DescriptionError: when bolts have no place, or a haunch comes over a gable post.
    """
    own, members = options.apex, joint.members
    planes = [Standing.square_to(np.zeros(3), _level(met.into)) for met in members]
    lines = [line_of(met, plane) for met, plane in zip(members, planes, strict=True)]
    haunches = [_haunch(own, met, line, joint) for met, line in zip(members, lines, strict=True)]
    room, half, low, high, aside, levels = _layout(own, members, lines, haunches)
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


def _haunch(own: ApexOptions, met: Met, line: Line, joint: Joint) -> Haunch | None:
    if own.haunch.depth is None:
        return None
    plane = Standing.square_to(np.zeros(3), _level(met.into))
    wanted = own.thickness + (own.haunch.length or _LENGTH * met.section.height) * line.run
    wanted = min(wanted, own.thickness + 0.7 * rafter_length(met) * line.run)
    under = any(
        each.role is Role.GABLE_POST
        and abs(plane.seen(each.origin)[0]) < wanted + plane.reach(each, plane.out)
        for each in joint.neighbours
    )
    if under or clear_of_posts(plane, wanted, joint.neighbours, 0.0) < wanted:
        raise impossible(
            "connections.apex.haunch.depth",
            "a haunch at the apex comes over a gable post",
            allowed="leave it out",
        )
    return plan(met, line, own.thickness, own.haunch.depth, wanted)


def _layout(
    own: ApexOptions, members: tuple[Met, ...], lines: list[Line], haunches: list[Haunch | None]
) -> tuple[Room, float, float, float, float, list[float]]:
    """Bolts, half the width, lowest and highest level, bolts aside and rows: the same for both plates."""
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
    for diameter in sizes(own.bolt, custom_size(members[0])):
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
        levels = rows(zones, room)
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
