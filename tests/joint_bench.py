"""Joints on the bench: the solids of members, plates and bolts of one joint, and what is wrong between them.

A second opinion on ``expand.joints``: it drills its own holes and measures its own distances.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from itertools import combinations

import numpy as np
from manifold3d import CrossSection, FillRule, Manifold

from shedbim.expand.joints.contract import FAR, Connection, Joint, Met, Ref
from shedbim.fasteners.holes import hole_diameter, slot_travel
from shedbim.geometry.placements import Placements
from shedbim.model.bars import Bar, EndCut
from shedbim.model.joints import At
from shedbim.model.plates import Plate
from shedbim.model.roles import Role

CHORD_ERROR = 0.02
#: Members are looked at this far from the work point, mm.
SEEN = 900.0


@dataclass(frozen=True)
class Bench:
    """Solids in joint axes: members and fittings drilled, bolt groups by name."""

    drilled: Mapping[Ref, Manifold]
    bolts: Mapping[str, Manifold]


def bench(joint: Joint, made: Connection) -> Bench:
    """Everything of one joint as solids, holes drilled by the boltings."""
    backs = {work.of: work.set_back for work in made.works}
    bodies: dict[Ref, Manifold] = {
        number: member_solid(met, backs.get(number, 0.0)) for number, met in enumerate(joint.members)
    }
    if joint.members[0].role is Role.COLUMN and joint.members[-1].role is Role.PURLIN:
        bodies[0] = capped(joint.members[0], bodies[0])
    bodies |= {each.name: fitting_solid(each.shape, each.frame) for each in made.fittings}
    bolts = {}
    for bolting in made.boltings:
        depth = 0.0
        for layer in bolting.layers:
            size = hole_diameter(bolting.fastener.diameter, layer.fit)
            assert slot_travel(bolting.fastener.diameter, layer.fit) == 0.0
            for point in bolting.points:
                start = point + bolting.axis * (depth - 0.5)
                bodies[layer.of] -= cylinder(start, bolting.axis, size, layer.thickness + 1.0)
            depth += layer.thickness
        bolts[bolting.name] = Manifold.compose(
            [
                fastener_disc(point, bolting.axis, disc)
                for point in bolting.points
                for disc in bolting.fastener.stack
            ]
        )
    return Bench(bodies, bolts)


def member_solid(met: Met, set_back: float = 0.0) -> Manifold:
    """A member near the work point, its end that meets here moved back."""
    start, end = -min(met.to_start, SEEN), min(met.to_end, SEEN)
    start += set_back if met.at == At.START else 0.0
    end -= set_back if met.at == At.END else 0.0
    section = prism(met.section.outline.polygons(CHORD_ERROR), start - 300.0, end + 300.0)
    kept = trimmed(section, met.start if met.to_start < SEEN else EndCut(), start, 1.0)
    kept = trimmed(kept, met.end if met.to_end < SEEN else EndCut(), end, -1.0)
    return kept.transform(met.frame)


def capped(column: Met, body: Manifold) -> Manifold:
    """A column closed by the cap plate that another joint gives it, its top where the column ended."""
    reach = column.to_end - 12.0
    return body + body.trim_by_plane(column.x.tolist(), float(column.point(reach, 0, 0) @ column.x)).hull()


def prism(polygons: list[np.ndarray], start: float, end: float) -> Manifold:
    """An outline in y and z, from ``start`` to ``end`` along x."""
    flat = CrossSection([loop.tolist() for loop in polygons], FillRule.EvenOdd)
    body = Manifold.extrude(flat, end - start)
    return body.transform(np.array([[0.0, 0, 1, start], [1, 0, 0, 0], [0, 1, 0, 0]]))


def trimmed(body: Manifold, cut: EndCut, x0: float, facing: float) -> Manifold:
    """What lies on the ``facing`` side of the planes of a pointed or plane cut through (x0, 0, 0)."""
    assert not cut.notched
    for a, b in cut.slopes:
        normal = np.array([1.0, -a, -b]) * facing
        body = body.trim_by_plane(normal.tolist(), float(normal[0] * x0 / np.linalg.norm(normal)))
    return body


def fitting_solid(shape: Plate | Bar, frame: Placements) -> Manifold:
    """A plate or short bar without holes."""
    if isinstance(shape, Bar):
        return prism(shape.section.outline.polygons(CHORD_ERROR), 0.0, shape.length).transform(frame)
    loops = [loop.tolist() for loop in shape.outline.polygons(CHORD_ERROR)]
    return Manifold.extrude(CrossSection(loops, FillRule.EvenOdd), shape.thickness).transform(frame)


def along(origin: np.ndarray, axis: np.ndarray) -> Placements:
    """A frame at ``origin`` with z along ``axis``; its x any way."""
    x = np.cross(axis, np.eye(3)[int(np.abs(axis).argmin())])
    x /= np.linalg.norm(x)
    return np.column_stack([x, np.cross(axis, x), axis, origin])


def cylinder(origin: np.ndarray, axis: np.ndarray, diameter: float, length: float) -> Manifold:
    """A round from ``origin`` along ``axis``."""
    return Manifold.cylinder(length, diameter / 2, circular_segments=64).transform(along(origin, axis))


def fastener_disc(point: np.ndarray, axis: np.ndarray, disc: object) -> Manifold:
    """One prism of a fastener, hexagons with a corner to x."""
    size, start, end, bore = disc.size, disc.start, disc.end, disc.bore
    sides = {"hexagon": 6, "round": 64, "square": 4}[disc.form]
    body = Manifold.cylinder(
        end - start, size / 2 / np.cos(np.pi / sides if sides < 64 else 0.0), circular_segments=sides
    )
    if bore:
        body -= Manifold.cylinder(end - start + 2.0, bore / 2, circular_segments=64).translate(
            [0.0, 0.0, -1.0]
        )
    return body.transform(along(point + axis * start, axis))


def faults(joint: Joint, made: Connection) -> Iterator[str]:
    """What is wrong with a joint: overlaps, open joints, loose welds, near edges, holes beside their plates."""
    on = bench(joint, made)
    solids = {**on.drilled, **on.bolts}
    for (a, one), (b, two) in combinations(solids.items(), 2):
        shared = (one ^ two).volume()
        if shared > 300.0:
            yield f"{a} and {b} share {shared / 1000:.2f} cm3"
    for weld in made.welds:
        gap = on.drilled[weld.between[0]].min_gap(on.drilled[weld.between[1]], 50.0)
        if gap > 0.5:
            yield f"the weld of {weld.between} bridges {gap:.2f} mm"
    yield from bolt_faults(joint, made, on)
    reached = {ref for weld in made.welds for ref in weld.between}
    reached |= {layer.of for bolting in made.boltings for layer in bolting.layers}
    threaded = {1} if any(bolting.fastener.kind == "nuts" for bolting in made.boltings) else set()
    for ref in on.drilled:
        if ref not in reached | threaded:
            yield f"nothing holds {ref}"


def bolt_faults(joint: Joint, made: Connection, on: Bench) -> Iterator[str]:
    """Grips that are not their layers, holes that take nothing away, bolts too near to an edge or to each other."""
    undrilled = {number: member_solid(met) for number, met in enumerate(joint.members)}
    undrilled |= {each.name: fitting_solid(each.shape, each.frame) for each in made.fittings}
    for bolting in made.boltings:
        total = sum(layer.thickness for layer in bolting.layers)
        if abs(total - bolting.fastener.grip) > 1e-6:
            yield f"{bolting.name} clamp {total} mm with a grip of {bolting.fastener.grip}"
        depth = 0.0
        for layer in bolting.layers:
            size = hole_diameter(bolting.fastener.diameter, layer.fit)
            for point in bolting.points:
                start = point + bolting.axis * depth
                plug = cylinder(start, bolting.axis, size, layer.thickness)
                if (plug ^ undrilled[layer.of]).volume() < 0.999 * plug.volume():
                    yield f"{bolting.name} pass beside {layer.of}"
                ring = cylinder(start, bolting.axis, 2.4 * size, layer.thickness)
                if (ring ^ undrilled[layer.of]).volume() < 0.995 * ring.volume():
                    yield f"{bolting.name} are too near to an edge of {layer.of}"
            depth += layer.thickness
        for a, b in combinations(bolting.points, 2):
            if np.linalg.norm(a - b) < 2.2 * hole_diameter(bolting.fastener.diameter):
                yield f"{bolting.name} are too near to each other"


def met(
    role: Role, made: tuple[Bar, Placements], at: At, point: object = (0.0, 0.0, 0.0), finish: str = "painted"
) -> Met:
    """A bar and its placement in joint axes as a joint at ``point`` (3,) sees it."""
    bar, placement = made
    first, last = bar.axis
    here = float((np.asarray(point, float) - placement[:, 3]) @ placement[:, 0])
    x = {At.START: first, At.END: last, At.ALONG: here}[at]
    frame = placement.copy()
    frame[:, 3] += frame[:, 0] * x
    to_start, to_end = min(x - first, FAR), min(last - x, FAR)
    return Met(
        role, bar.section, "S355", finish, at, frame, to_start, to_end,
        bar.start if to_start < FAR else EndCut(), bar.end if to_end < FAR else EndCut(),
    )  # fmt: skip


def mirrored(points: np.ndarray) -> np.ndarray:
    """Points (n, 3) mirrored across the plane x = 0."""
    return np.asarray(points) * np.array([-1.0, 1.0, 1.0])
