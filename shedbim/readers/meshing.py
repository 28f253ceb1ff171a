"""A model file opened and meshed, in a process of its own: ``python -m shedbim.readers.meshing``.

The library that reads model files may end its process, or never end, for what a hostile file holds. So it runs apart
from everything else, says on standard output what it begins and what it has done, and leaves its results in a folder
batch by batch: what was done before it ended is there.

    head.json        what the file is, and its elements that may have a shape, in the order of their numbers
    batch-<k>.npz    the meshes of the elements from number k
"""

from __future__ import annotations

import json
import sys
from pathlib import Path
from typing import Any

import numpy as np

from shedbim.readers.map_places import map_place

__all__ = ["MOST_ELEMENTS", "MOST_TRIANGLES", "bound_memory", "main"]

#: More elements, or more triangles in all of their meshes, than these are refused.
MOST_ELEMENTS = 100_000
MOST_TRIANGLES = 20_000_000
#: Chords of a full circle, and the turn from one chord to the next, rad: each kernel heeds one of the two. Arcs are
#: left by half a percent, or by one percent, of their radius.
_CIRCLE, _TURN = 32, 0.3
#: Classes of IFC2X3 whose types say more.
_SAY_LESS = ("IfcFlowSegment", "IfcFlowFitting", "IfcFlowTerminal", "IfcFlowController")
#: Elements that are meshed at once.
_BATCH = 200
#: Memory that the process may take, bytes.
_MOST_MEMORY = 6 << 30

#: Kernels that make meshes: the quick one first, the other for what it leaves out. A third one, as quick, makes hollow
#: sections without the roundings of their corners.
_KERNELS = ("cgal-simple", "opencascade")


def main(path: str, folder: str, start: int = 0, single: int = 0, *skipped: int) -> None:
    """Leave the meshes of a model file in a folder; gives what is wrong with the file as a line on standard output.

    Args:
        path: the model file.
        folder: where the results go.
        start: number of the element to begin with.
        single: elements before this number are meshed one by one.
        skipped: numbers of elements to leave out.
    """
    bound_memory()
    import ifcopenshell  # noqa: PLC0415 - once the memory is bounded

    try:
        model = ifcopenshell.open(path)
        elements = _elements(model)
        head = _head(model, elements)
    except Exception as error:  # whatever the library says of a hostile file
        _say("fault", f"the library that reads model files says: {_line(error)}")
        return
    if len(elements) > MOST_ELEMENTS:
        _say(
            "fault", f"it has {len(elements):,} elements with a shape, and at most {MOST_ELEMENTS:,} are read"
        )
        return
    (Path(folder) / "head.json").write_text(json.dumps(head), encoding="utf-8")
    _say("open", str(len(elements)))
    triangles, first = 0, start
    while first < len(elements):
        last = min(first + (1 if first < single else _BATCH), len(elements))
        _say("begin", f"{first} {last}")
        batch = _batch(model, elements, [k for k in range(first, last) if k not in skipped])
        triangles += len(batch["triangles"])
        if triangles > MOST_TRIANGLES:
            _say(
                "fault",
                f"its shapes have more than {MOST_TRIANGLES:,} triangles, and at most so many are read",
            )
            return
        np.savez(Path(folder) / f"batch-{first}.npz", allow_pickle=False, **batch)
        _say("done", str(last))
        first = last
    _say("end", "")


def bound_memory() -> None:
    """Let this process take no more memory than it may, where the system can hold it to that."""
    try:
        import resource  # noqa: PLC0415 - not there on every system
    except ImportError:
        return
    resource.setrlimit(resource.RLIMIT_AS, (_MOST_MEMORY, _MOST_MEMORY))


def _say(word: str, text: str) -> None:
    print(word, text, flush=True)


def _line(error: Exception) -> str:
    """What an error says, as one line."""
    return (" ".join(str(error).split()) or type(error).__name__)[:200]


def _elements(model: Any) -> list[Any]:
    """The elements that may have a shape, by their numbers in the file; openings are no elements."""
    found = [
        each
        for each in model.by_type("IfcElement")
        if each.Representation is not None and not each.is_a("IfcFeatureElement")
    ]
    return sorted(found, key=lambda each: int(each.id()))


def _head(model: Any, elements: list[Any]) -> dict[str, Any]:
    """What the file is, in plain values."""
    try:
        place, fault = map_place(model), ""
    except (ValueError, AttributeError, TypeError) as error:
        place, fault = None, _line(error)
    named = [
        [str(each.GlobalId), _kind(each), str(each.Name or ""), each.is_a("IfcDistributionElement")]
        for each in elements
    ]
    return {"schema": str(model.schema), "place": place, "unplaced": fault, "elements": named}


def _kind(element: Any) -> str:
    """The class of an element, or that of its type where IFC2X3 knows no nearer one."""
    from ifcopenshell.util.element import get_type  # noqa: PLC0415 - heavy, and this process alone needs it

    kind: Any = get_type(element) if element.is_a("IfcDistributionElement") else None
    if kind is None or element.is_a() not in _SAY_LESS:
        return str(element.is_a())
    return str(kind.is_a()).removesuffix("Type").removesuffix("Style")


def _batch(model: Any, elements: list[Any], chosen: list[int]) -> dict[str, Any]:
    """The meshes of some elements.

    Gives element (n,) and mesh (n,) of each that has one, matrix (n, 3, 4) in metres; and of all meshes one after the
    other the points (v, 3), triangles (t, 3), and how many there are of each.
    """
    meshes: dict[str, int] = {}
    points, triangles, placed = [], [], []
    left = {int(elements[k].id()): k for k in chosen}
    for kernel in _KERNELS:
        for shape in _shapes(model, [elements[k] for k in left.values()], kernel):
            body = shape.geometry
            corners = np.array(body.verts, float).reshape(-1, 3)
            if (
                not len(corners)
                or not len(body.faces)
                or not np.isfinite(corners).all()
                or shape.id not in left
            ):
                continue
            name = f"{kernel}/{body.id}"
            if name not in meshes:
                meshes[name] = len(meshes)
                points.append(corners)
                triangles.append(np.array(body.faces, np.int64).reshape(-1, 3))
            matrix = np.array(shape.transformation.matrix, float).reshape(4, 4).T[:3]
            placed.append((left.pop(shape.id), meshes[name], matrix))
    return {
        "element": np.array([k for k, _, _ in placed], np.int64),
        "mesh": np.array([k for _, k, _ in placed], np.int64),
        "matrix": np.array([matrix for _, _, matrix in placed]).reshape(-1, 3, 4),
        "points": np.concatenate([*points, np.zeros((0, 3))]),
        "triangles": np.concatenate([*triangles, np.zeros((0, 3), np.int64)]),
        "corners": np.array([len(each) for each in points], np.int64),
        "faces": np.array([len(each) for each in triangles], np.int64),
    }


def _shapes(model: Any, elements: list[Any], kernel: str) -> Any:
    """The shapes that a kernel makes of some elements, each in its own frame, in metres."""
    import ifcopenshell.geom  # noqa: PLC0415 - as above

    if not elements:
        return
    library: Any = ifcopenshell.geom
    settings = library.settings()
    settings.set("circle-segments", _CIRCLE)
    settings.set("mesher-angular-deflection", _TURN)
    iterator = library.iterator(settings, model, 1, include=elements, geometry_library=kernel)
    if not iterator.initialize():
        return
    while True:
        yield iterator.get()
        if not iterator.next():
            return


if __name__ == "__main__":
    main(sys.argv[1], sys.argv[2], *map(int, sys.argv[3:]))
