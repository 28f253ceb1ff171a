"""The model of another trade from its file; whatever is wrong with the file ends as a remark on it."""

from __future__ import annotations

import json
from collections.abc import Callable
from pathlib import Path
from tempfile import TemporaryDirectory
from typing import Any

import numpy as np

from shedbim.geometry.placements import Placements
from shedbim.model.other_trades import MapPlace, Mesh, OtherElement, OtherModel, Remark
from shedbim.readers.supervising import supervise

__all__ = ["MOST_BYTES", "file_fault", "read_other"]

#: Larger files are refused: opening takes about ten times as much memory.
MOST_BYTES = 300_000_000

#: What model files begin with, and end with (ISO 10303-21).
_BEGIN, _END = b"ISO-10303-21", b"END-ISO-10303-21"
_METRE = 1000.0


def read_other(path: Path | str, tell: Callable[[str], None] = lambda line: None) -> OtherModel:
    """Give the model in a file; never raises for what the file holds or that it is not there.

    Args:
        path: a model file of any schema that the library reads: IFC2X3, IFC4, IFC4X3.
        tell: called with a line on how far it is.
    """
    file = Path(path)
    fault = file_fault(file)
    if fault:
        return _unread(file.name, fault)
    with TemporaryDirectory() as folder:
        fault = supervise(file, Path(folder), lambda done, of: tell(f"{file.name}: {done} of {of} elements"))
        if not (Path(folder) / "head.json").exists():
            return _unread(file.name, fault or "it cannot be opened")
        return _model(file.name, Path(folder), fault)


def _unread(name: str, fault: str) -> OtherModel:
    return OtherModel(name, remarks=(Remark("other-unread", f"{name} was not read: {fault}"),))


def file_fault(file: Path) -> str:
    """Give what is wrong with a model file at first sight; empty for nothing."""
    try:
        size = file.stat().st_size
        if not file.is_file():
            return "it is no file"
        if size > MOST_BYTES:
            return f"it has {size / 1e6:,.0f} MB, and at most {MOST_BYTES / 1e6:,.0f} MB are read"
        with file.open("rb") as opened:
            begin = opened.read(256).removeprefix(b"\xef\xbb\xbf").lstrip()
            opened.seek(max(0, size - 256))
            end = opened.read()
    except OSError as error:
        return (error.strerror or "it cannot be opened").lower()
    if not size:
        return "the file is empty"
    if not begin.startswith(_BEGIN):
        return "it is no IFC model as a STEP text file (ISO 10303-21)"
    return "" if _END in end else "it ends before its end: the file is cut short"


def _model(name: str, folder: Path, fault: str) -> OtherModel:
    """The model from what the process left."""
    head = json.loads((folder / "head.json").read_text(encoding="utf-8"))
    meshes: list[Mesh] = []
    element, mesh, placement = [], [], []
    for path in sorted(folder.glob("batch-*.npz"), key=lambda each: int(each.stem.split("-")[1])):
        with np.load(path, allow_pickle=False) as batch:
            element.append(batch["element"])
            mesh.append(batch["mesh"] + len(meshes))
            placement.append(_in_mm(batch["matrix"]))
            meshes += _meshes(batch)
    numbers = np.concatenate([*element, np.zeros(0, np.int64)])
    elements = tuple(
        OtherElement(guid, kind, title, is_service, name)
        for guid, kind, title, is_service in (head["elements"][k] for k in numbers)
    )
    remarks = _remarks(name, head, fault, len(numbers))
    if head["unplaced"]:
        return OtherModel(name, remarks=remarks)
    return OtherModel(
        name,
        elements,
        tuple(meshes),
        np.concatenate([*mesh, np.zeros(0, np.int64)]),
        np.concatenate([*placement, np.zeros((0, 3, 4))]),
        None if head["place"] is None else MapPlace(**head["place"]),
        remarks,
    )


def _in_mm(matrix: Placements) -> Placements:
    """Placements in metres as placements in mm."""
    found = matrix.copy()
    found[:, :, 3] *= _METRE
    return found


def _meshes(batch: Any) -> list[Mesh]:
    """The meshes of a batch."""
    points = np.split(batch["points"] * _METRE, np.cumsum(batch["corners"])[:-1])
    triangles = np.split(batch["triangles"], np.cumsum(batch["faces"])[:-1])
    return [Mesh(p, t) for p, t, _ in zip(points, triangles, batch["corners"], strict=False)]


def _remarks(name: str, head: dict[str, Any], fault: str, read: int) -> tuple[Remark, ...]:
    """What was not read, and why."""
    found = []
    if head["unplaced"]:
        found.append(Remark("other-unplaced", f"{name} was not looked at: {head['unplaced']}"))
    if fault:
        done = f"{read:,} of its {len(head['elements']):,} elements were looked at"
        found.append(Remark("other-unread", f"{name} was not read to its end: {fault}; {done}"))
    elif not head["elements"]:
        found.append(Remark("other-unread", f"{name} has no elements with a shape"))
    elif missing := len(head["elements"]) - read:
        said = (
            f"{missing:,} of the {len(head['elements']):,} elements of {name} have no shape that can be made"
        )
        found.append(Remark("other-unread", said))
    return tuple(found)
