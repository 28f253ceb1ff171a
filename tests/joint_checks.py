"""What must hold of any joint, asked of its solids: a second opinion on the kinds of ``expand.joints``."""

from __future__ import annotations

from collections.abc import Iterator
from itertools import combinations

import numpy as np
from joint_solids import apart, overlapping, scene
from manifold3d import Manifold

from shedbim.expand.joints.contract import Bolting, Connection, Joint, Ref
from shedbim.expand.joints.shaping import frame_of
from shedbim.fasteners.distances import least_edge, least_pitch, wrench_pitch, wrench_wall
from shedbim.fasteners.holes import hole_diameter
from shedbim.model.joints import At

__all__ = ["faults", "shape_of", "wrenches"]

#: Solids share less than this, mm3: the chords that stand for arcs touch one another.
_SHARED = 60.0
#: A weld bridges less than this, mm.
_BRIDGED = 0.6


def faults(joint: Joint, made: Connection, *, walls: bool = True) -> list[str]:
    """What is wrong with a joint, in words; nothing where all is well."""
    solids = scene(joint, made)
    whole = scene(joint, Connection(made.fittings, (), (), made.works))
    found = [f"{a} and {b} share {volume:.0f} mm3" for a, b, volume in overlapping(solids, _SHARED)]
    for weld in made.welds:
        gap = apart(*(whole[ref] for ref in weld.between))
        if gap > _BRIDGED:
            found.append(f"the weld of {weld.between} bridges {gap:.1f} mm")
        if weld.throat < 3.0 or weld.length < 30.0:
            found.append(f"the weld of {weld.between} is too small")
    for bolting in made.boltings:
        found += _bolts(bolting, whole)
        found += wrenches(bolting, whole) if walls else []
    found += _loose(joint, made)
    for number, met in enumerate(joint.neighbours):
        place = met.frame[:, 3] + met.into * 5.0
        body = Manifold.cube([400.0, met.section.width, met.section.height], True).translate(
            [205.0, 0.0, 0.0]
        )
        side = np.cross(met.z, met.into)
        body = body.transform(np.column_stack([met.into, side, met.z, place])) if met.at != At.ALONG else None
        for name, solid in solids.items():
            if body is not None and isinstance(name, str) and (solid ^ body).volume() > _SHARED:
                found.append(f"{name} hits neighbour {number}")
    return found


def _drill(point: np.ndarray, axis: np.ndarray, radius: float, length: float) -> Manifold:
    across = np.cross(axis, [0.3, 0.5, 0.81])
    place = frame_of(point, across, np.cross(axis, across))
    return Manifold.cylinder(length, radius, circular_segments=64).transform(place)


def _bolts(bolting: Bolting, whole: dict[Ref, Manifold]) -> Iterator[str]:
    """Grip, edges and pitches."""
    d = bolting.fastener.diameter
    d0 = hole_diameter(d)
    if abs(bolting.fastener.grip - sum(layer.thickness for layer in bolting.layers)) > 1e-9:
        yield f"{bolting.name}: the grip is not the layers"
    for a, b in combinations(bolting.points, 2):
        if np.linalg.norm(a - b) < max(least_pitch(d0), wrench_pitch(d)) - 1e-6:
            yield f"{bolting.name}: two bolts {np.linalg.norm(a - b):.1f} mm apart"
    for point in bolting.points:
        depth = 0.0
        for layer in bolting.layers:
            ring = _drill(point + bolting.axis * depth, bolting.axis, least_edge(d0) - 0.01, layer.thickness)
            if (ring ^ whole[layer.of]).volume() < 0.9995 * ring.volume():
                yield f"{bolting.name}: too near to an edge of {layer.of}"
            depth += layer.thickness


def wrenches(bolting: Bolting, whole: dict[Ref, Manifold]) -> Iterator[str]:
    """What stands in the way of a socket over a head or nut, in words."""
    d = bolting.fastener.diameter
    through = sum(layer.thickness for layer in bolting.layers)
    high = 0.4 * d + 20.0 / d
    for point in bolting.points:
        for start, way in ((point, -bolting.axis), (point + bolting.axis * through, bolting.axis)):
            # Above root fillets and weld toes, which a socket does not reach down to.
            socket = _drill(start + way * high, way, wrench_wall(d) - 0.01, 1.2 * d)
            for ref, body in whole.items():
                if (socket ^ body).volume() > _SHARED:
                    yield f"{bolting.name}: no wrench beside {ref}"


def _loose(joint: Joint, made: Connection) -> Iterator[str]:
    """Everything hangs together by welds and bolts."""
    groups: dict[Ref, set[Ref]] = {
        ref: {ref} for ref in [*range(len(joint.members)), *(each.name for each in made.fittings)]
    }
    ties = [weld.between for weld in made.welds]
    ties += [(a.of, b.of) for bolting in made.boltings for a, b in combinations(bolting.layers, 2)]
    for a, b in ties:
        merged = groups[a] | groups[b]
        for ref in merged:
            groups[ref] = merged
    if len(groups[0]) != len(groups):
        yield f"loose: {set(groups) - groups[0]}"


def shape_of(joint: Joint, made: Connection, flip: tuple[int, ...] = ()) -> Manifold:
    """All plates and bolts as one solid, mirrored along the axes in ``flip``."""
    solids = scene(joint, made)
    body = sum((solid for ref, solid in solids.items() if isinstance(ref, str)), Manifold())
    for axis in flip:
        normal = [0.0, 0.0, 0.0]
        normal[axis] = 1.0
        body = body.mirror(normal)
    return body
