"""Holes through which zinc and air pass, at the ends of galvanized hollow members that a weld closes."""

from __future__ import annotations

import numpy as np

from shedbim.expand.impossible import impossible
from shedbim.expand.joints.contract import Connection, Joint, Met
from shedbim.fasteners.vents import vents
from shedbim.model.holes import Hole
from shedbim.model.joints import At
from shedbim.sections.profiles import Hollow, Pipe

__all__ = ["vent_holes"]

#: Edge of a hole to the end it lets out of, mm (facts of the galvanizers' guidance: no more than 10 from the weld).
_FROM_END = 10.0


def vent_holes(joint: Joint, connection: Connection) -> dict[int, tuple[Hole, ...]]:
    """Give for each member, by its number, the holes that let the zinc in and out, in its frame.

    An end is closed by a fillet weld on it, unless a notch opens it again, or by being pressed flat.

    Raises:
        DescriptionError: when no holes fit the member.
    """
    closed = {
        ref
        for weld in connection.welds
        if weld.form == "fillet" and not weld.site
        for ref in weld.between
        if isinstance(ref, int) and _may_be_closed(joint.members[ref])
    }
    closed -= {work.of for work in connection.works if work.notches}
    pressed = {work.of for work in connection.works if work.pressed is not None}
    closed |= {number for number in pressed if _may_be_closed(joint.members[number])}
    back = dict.fromkeys(closed, 0.0)
    for work in connection.works:
        if work.of in closed:
            back[work.of] += work.taken
    return {number: _holes(joint.members[number], back[number]) for number in sorted(closed)}


def _may_be_closed(met: Met) -> bool:
    is_hollow = isinstance(met.section.profile, (Hollow, Pipe))
    return is_hollow and met.finish == "galvanized" and met.at != At.ALONG


def _holes(met: Met, set_back: float) -> tuple[Hole, ...]:
    try:
        found = vents(met.section, met.to_start + met.to_end)
    except ValueError as error:
        raise impossible(
            "finish.frames", f"a {met.role.word} cannot be vented: {error}",
            given="galvanized", allowed="painted, or a larger section",
        ) from None  # fmt: skip
    wall = met.section.profile.thickness
    half = (np.array([met.section.width, met.section.height]) - wall) / 2
    inwards = -1.0 if met.at == At.END else 1.0
    holes = []
    for outwards in found.faces:
        # Holes of the two ends are diagonally opposite.
        face = inwards * np.array(outwards)
        place = half * face
        # How much the cut leans along the width of the face: the nearest point of the hole keeps its distance.
        lean = max(abs(float(np.dot(slope, (face[1], face[0])))) for slope in met.cut.slopes)
        away = _FROM_END + found.diameter / 2 * float(np.hypot(1.0, lean)) + set_back
        offset = float(met.cut.offsets(place[None], at_end=met.at == At.END)[0])
        centre = (offset + inwards * away, float(place[0]), float(place[1]))
        holes.append(Hole(centre, (0.0, float(face[0]), float(face[1])), found.diameter, wall))
    return tuple(holes)
