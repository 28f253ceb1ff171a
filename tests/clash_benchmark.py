"""What the clash check costs at about 10,000 and 100,000 pieces in unequal bays, beside other ways to the same end.

    python tests/benchmark.py --clash             members alone
    python tests/benchmark.py --clash --fittings  with every plate, bolt and hole besides

The machine is shared: figures are processor seconds, the least of a few runs; quote their ratios. The other ways
are run once, on the smaller shed: they say which pieces collide or what they share, while the check here gives
volumes, depths, gaps, and the findings from them. A library that is not installed is left out with a word.
"""

from __future__ import annotations

import io
import math
import time
from collections.abc import Callable
from typing import Any

import numpy as np
from manifold3d import Manifold

from shedbim.checks.clash.bolt_access import bolt_access
from shedbim.checks.clash.boxes import boxes_around
from shedbim.checks.clash.clashes import clashes
from shedbim.checks.clash.near_pairs import near_pairs
from shedbim.checks.subject import Subject
from shedbim.description import read_text
from shedbim.expand import expand
from shedbim.geometry.placements import compose, inverse
from shedbim.limits import criteria
from shedbim.model.levels import at_level
from shedbim.model.shed import Shed
from shedbim.model.solids import solid
from shedbim.writers.ifc import write

__all__ = ["clash_costs"]

#: Spans and bays that come to about 10,000 and 100,000 pieces: members alone, and with all that joins them.
_MEMBERS, _ALL = ((1, 96), (6, 205)), ((1, 24), (4, 92))
_CHORD_ERROR = 0.25


def unequal(text: Callable[[int, int], str], spans: int, bays: int) -> Shed:
    """The building of the benchmark with bays that all differ."""
    widths = np.random.default_rng(3).uniform(4.8, 6.9, bays - 2)
    listed = ", ".join(f"{width:.2f} m" for width in widths)
    return expand(read_text(text(spans, 3).replace("3 x 5.75 m", listed)))


def seconds(work: Callable[[], Any], runs: int = 1) -> tuple[float, Any]:
    """Least processor seconds of a piece of work, and what it gave."""
    least, result = math.inf, None
    for _ in range(runs):
        start = time.process_time()
        result = work()
        least = min(least, time.process_time() - start)
    return least, result


def ours(shed: Shed, *, wrenches: bool) -> int:
    """All checks of clashes; gives the number of hits."""
    subject = Subject(shed, criteria())
    return sum(1 for _ in clashes(subject)) + (sum(1 for _ in bolt_access(subject)) if wrenches else 0)


def _bodies(shed: Shed) -> list[Manifold]:
    return [solid(part.shape, _CHORD_ERROR) for part in shed.parts]


def _meshes(shed: Shed) -> list[tuple[np.ndarray, np.ndarray]]:
    meshes = [body.to_mesh() for body in _bodies(shed)]
    return [(np.array(m.vert_properties, float)[:, :3], np.array(m.tri_verts, np.int64)) for m in meshes]


def _scene_manager(shed: Shed) -> int:
    """A general mesh library's collision manager, a mesh for each piece."""
    import trimesh  # noqa: PLC0415 - only this figure needs it
    from trimesh.collision import CollisionManager  # noqa: PLC0415

    meshes = [trimesh.Trimesh(points, faces, process=False) for points, faces in _meshes(shed)]
    manager = CollisionManager()
    for key, part, placement in zip(
        shed.pieces.keys, shed.pieces.part.tolist(), shed.pieces.placement, strict=True
    ):
        manager.add_object(key, meshes[part], np.vstack([placement, [0.0, 0.0, 0.0, 1.0]]))
    return len(manager.in_collision_internal(return_names=True)[1])


def _broad_phase_manager(shed: Shed) -> int:
    """The collision library's own broad phase over one tree of triangles for each part."""
    import fcl  # noqa: PLC0415 - only this figure needs it

    models = []
    for points, faces in _meshes(shed):
        model = fcl.BVHModel()
        model.beginModel(len(points), len(faces))
        model.addSubModel(points, faces)
        model.endModel()
        models.append(model)
    objects = [
        fcl.CollisionObject(models[part], fcl.Transform(placement[:, :3], placement[:, 3]))
        for part, placement in zip(shed.pieces.part.tolist(), shed.pieces.placement, strict=True)
    ]
    manager = fcl.DynamicAABBTreeCollisionManager()
    manager.registerObjects(objects)
    manager.setup()
    found = fcl.CollisionData(request=fcl.CollisionRequest(num_max_contacts=1_000_000, enable_contact=True))
    manager.collide(found, fcl.defaultCollisionCallback)
    return len(found.result.contacts)


def _every_boolean(shed: Shed) -> int:
    """Exact booleans of all pairs whose boxes meet, one by one."""
    bodies, pieces = _bodies(shed), shed.pieces
    local = np.array([part.shape.box for part in shed.parts])
    i, j = near_pairs(*boxes_around(local[pieces.part], pieces.placement))
    between = compose(inverse(pieces.placement[i]), pieces.placement[j])
    one, other = pieces.part[i].tolist(), pieces.part[j].tolist()
    volumes = [
        (bodies[a] ^ bodies[b].transform(at)).volume() for a, b, at in zip(one, other, between, strict=True)
    ]
    return len(volumes)


def _model_search(shed: Shed) -> int:
    """The model file's own library: its tree of triangles and its search for collisions; reading not counted."""
    import ifcopenshell  # noqa: PLC0415 - only this figure needs it
    import ifcopenshell.geom  # noqa: PLC0415

    sink = io.BytesIO()
    write(shed, sink)
    file = ifcopenshell.file.from_string(sink.getvalue().decode())
    tree = ifcopenshell.geom.tree(backend="opencascade.trianglebvh")
    iterator = ifcopenshell.geom.iterator(ifcopenshell.geom.settings(), file, 1)
    more = iterator.initialize()
    while more:
        tree.add_element(iterator.get())
        more = iterator.next()
    elements = [each for each in file.by_type("IfcElement") if each.Representation]
    return len(tree.clash_collision_many(elements, elements, allow_touching=False))


_OTHERS: tuple[tuple[str, Callable[[Shed], int]], ...] = (
    ("collision manager of the mesh library", _scene_manager),
    ("broad phase of the collision library", _broad_phase_manager),
    ("exact boolean of every candidate", _every_boolean),
    ("search of the model file's library", _model_search),
)


def clash_costs(text: Callable[[int, int], str], *, fittings: bool) -> None:
    """Print the costs.

    Args:
        text: gives the description for so many spans and bays.
        fittings: whether to look at sheds with all their plates and bolts too.
    """
    sheds = [at_level(unequal(text, *size), "outline") for size in _MEMBERS]
    small = _printed("members alone", sheds, wrenches=False)
    for name, work in _OTHERS:
        try:
            cost, count = seconds(lambda work=work: work(sheds[0]))
        except ImportError as error:
            print(f"  {name:40} left out: {error}")
            continue
        print(f"  {name:40} {cost:8.2f} s  {cost / small:8.0f} times ours  ({count} found or looked at)")
    if fittings:
        _printed("with fittings, bolts and wrenches", [unequal(text, *size) for size in _ALL], wrenches=True)


def _printed(name: str, sheds: list[Shed], *, wrenches: bool) -> float:
    """Print what ours costs on a smaller and a larger shed; gives the former."""
    costs = [seconds(lambda shed=shed: ours(shed, wrenches=wrenches), 3)[0] for shed in sheds]
    numbers = [len(shed.pieces) for shed in sheds]
    growth = math.log(costs[1] / costs[0]) / math.log(numbers[1] / numbers[0])
    print(f"clash check, {name}, all bays unequal:")
    for number, cost in zip(numbers, costs, strict=True):
        print(f"  {number:8} pieces {cost:8.3f} s  {cost / number * 1e6:6.1f} us a piece")
    print(f"  exponent {growth:.2f}")
    return costs[0]
