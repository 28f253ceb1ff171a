"""The solids of one joint as its kind made it: members cut and drilled, plates, fasteners; joint axes, mm.

Drills holes by its own rule, straight through every layer, so that it is a second opinion on the program's.
"""

from __future__ import annotations

from itertools import combinations

import numpy as np
from manifold3d import Manifold

from shedbim.expand.joints.contract import FAR, Bolting, Connection, Joint, Layer, Met, Ref
from shedbim.expand.joints.shaping import frame_of
from shedbim.fasteners.fit import Fit
from shedbim.fasteners.holes import hole_diameter, slot_travel
from shedbim.geometry.placements import Placements
from shedbim.model.bars import Bar, bar_on_axis
from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.joints import At
from shedbim.model.roles import Role
from shedbim.model.solids import solid

__all__ = ["apart", "met", "overlapping", "scene"]


def met(
    role: Role,
    bar: Bar,
    place: Placements,
    at: At,
    point: np.ndarray,
    grade: str = "S355",
    finish: str = "painted",
) -> Met:
    """A bar placed by ``stick`` as a joint at ``point`` (3,) sees it."""
    first, last = bar.axis
    x = float((point - place[:, 3]) @ place[:, 0])
    x = {At.START: first, At.END: last, At.ALONG: x}[at]
    frame = place.copy()
    frame[:, 3] += frame[:, 0] * x - point
    return Met(
        role,
        bar.section,
        grade,
        finish,
        at,
        frame,
        min(x - first, FAR),
        min(last - x, FAR),
        bar.start,
        bar.end,
    )


def scene(joint: Joint, made: Connection) -> dict[Ref, Manifold]:
    """The solids by member number, fitting name and bolting name."""
    solids: dict[Ref, Manifold] = {}
    for number, member in enumerate(joint.members):
        moved = sum(work.set_back for work in made.works if work.of == number)
        solids[number] = _member(member, moved)
    for fitting in made.fittings:
        solids[fitting.name] = solid(fitting.shape).transform(fitting.frame)
    for bolting in made.boltings:
        for layer in bolting.layers:
            for hole in _drills(bolting, layer):
                solids[layer.of] -= hole
    for bolting in made.boltings:
        solids[bolting.name] = _bolts(bolting)
    return solids


def _member(member: Met, moved: float) -> Manifold:
    start, end = -member.to_start, member.to_end
    start, end = (start + moved, end) if member.at == At.START else (start, end - moved)
    bar = bar_on_axis(member.section, end - start, member.start, member.end)
    place = member.frame.copy()
    place[:, 3] += place[:, 0] * (start - bar.axis[0])
    return solid(bar).transform(place)


def _axes(bolting: Bolting) -> Placements:
    spread = min((p - bolting.points[0] for p in bolting.points[1:]), key=np.linalg.norm)
    return frame_of(bolting.points[0], spread, np.cross(bolting.axis, spread))


def _drills(bolting: Bolting, layer: Layer) -> list[Manifold]:
    """Drills as deep as the layer and a little more either way, so that they cut nothing but it."""
    before = 0.0
    for each in bolting.layers:
        if each is layer:
            break
        before += each.thickness
    d = bolting.fastener.diameter
    reach = slot_travel(d, layer.fit) / 2 if layer.fit in (Fit.SHORT_SLOT, Fit.LONG_SLOT) else 0.0
    frame = _axes(bolting)
    drills = []
    for point in bolting.points:
        for shift in np.linspace(-reach, reach, 9 if reach else 1):
            place = frame.copy()
            place[:, 3] = point + bolting.axis * (before - 0.1)
            if reach:
                place[:, 3] += layer.along * shift
            drill = Manifold.cylinder(
                layer.thickness + 0.2, hole_diameter(d, layer.fit) / 2, circular_segments=64
            )
            drills.append(drill.transform(place))
    return drills


def _bolts(bolting: Bolting) -> Manifold:
    frame = _axes(bolting)
    local = (bolting.points - bolting.points[0]) @ frame[:, :2]
    group = BoltGroup(bolting.fastener, tuple((float(x), float(y)) for x, y in local))
    return solid(group).transform(frame)


def overlapping(solids: dict[Ref, Manifold], most: float = 1.0) -> list[tuple[Ref, Ref, float]]:
    """Pairs that share more than ``most`` mm3."""
    shared = [(a, b, (solids[a] ^ solids[b]).volume()) for a, b in combinations(solids, 2)]
    return [each for each in shared if each[2] > most]


def apart(one: Manifold, other: Manifold) -> float:
    """Least distance of two solids, mm."""
    return one.min_gap(other, 50.0)
