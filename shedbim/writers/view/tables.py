"""What the page is told of a shed: texts, and columns of parts, pieces, assemblies and joints.

Distances travel as hundredths of mm, lengths of parts as thousandths, surfaces as square centimetres, and the
entries of a turn as billionths; masses as text, for they are multiplied before they are rounded. Places are in
building axes; the page moves them to the middle of the building itself.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.plates import Plate
from shedbim.model.shapes import Shape
from shedbim.model.shed import Shed
from shedbim.writers.described import described, figures, kind_word
from shedbim.writers.imprint import CAUTIONS, Imprint
from shedbim.writers.palette import PALETTE
from shedbim.writers.view.columns import scaled
from shedbim.writers.view.meshes import sizes, surface_of, view_shell
from shedbim.writers.view.shown import ShownChange, ShownFinding

__all__ = ["columns", "texts"]

#: The entries of a turn are at most 1: this many units keep the far end of any bar within a micrometre.
_TURN_UNITS = 1e9
#: Any large odd number: its powers mix the entries of a row into one number.
_MIX = 0x9E3779B97F4A7C15


def texts(
    shed: Shed, imprint: Imprint, findings: Sequence[ShownFinding], changes: Sequence[ShownChange]
) -> dict[str, Any]:
    """Give all that is text, or small enough to travel as JSON."""
    project = shed.project
    roles = list(dict.fromkeys(part.role for part in shed.parts))
    return {
        "project": {"name": project.name, "number": project.number, "revision": project.revision},
        "imprint": {"time": imprint.stamp, "version": imprint.version, "digest": imprint.digest},
        "cautions": CAUTIONS,
        "notes": shed.notes,
        "defaults": shed.defaults,
        "grid": {
            "letters": shed.grid.letters,
            "x": shed.grid.x,
            "numbers": shed.grid.numbers,
            "y": shed.grid.y,
        },
        "roles": [[role.word, PALETTE[role], role.sort.value] for role in roles],
        "parts": [
            [
                part.mark,
                roles.index(part.role),
                described(part.shape),
                part.grade,
                part.finish,
                ", ".join(marks),
            ]
            for part, marks in zip(shed.parts, shed.part_assembly_marks, strict=True)
        ],
        "masses": [round(part.shape.mass, 6) for part in shed.parts],
        "kinds": [kind_word(part.shape) for part in shed.parts],
        "figures": [figures(part.shape) for part in shed.parts],
        "keys": shed.pieces.keys,
        "assemblies": [
            [
                key,
                shed.assembly_types[kind].mark,
                shed.assembly_types[kind].kind,
                shed.assembly_types[kind].made,
            ]
            for key, kind in zip(shed.assemblies.keys, shed.assemblies.type.tolist(), strict=True)
        ],
        "joints": [[run.kind.word, run.kind.fastening] for run in shed.joints],
        "findings": [[each.code, each.severity, each.text, each.point, each.pieces] for each in findings],
        "changes": [[each.word, each.pieces] for each in changes],
    }


def columns(shed: Shed) -> dict[str, ArrayLike]:
    """Give all that is many whole numbers, each (n,) or (n, w)."""
    pieces = shed.pieces
    turns, turn = _distinct(scaled(pieces.placement[:, :, :3].reshape(-1, 9), _TURN_UNITS))
    result: dict[str, ArrayLike] = {
        "part sizes": [
            [
                int(scaled(_length(part.shape), 1000.0)),
                int(scaled(part.shape.surface, 1e-2)),
                *scaled(sizes(part.body)).tolist(),
            ]
            for part in shed.parts
        ],
        "turns": turns,
        "piece part": pieces.part,
        "piece turn": turn,
        "piece place": scaled(pieces.placement[:, :, 3]),
        "piece assembly": pieces.assembly,
        "assembly parent": shed.assemblies.parent,
    }
    result |= _mesh_columns(shed)
    for number, run in enumerate(shed.joints):
        result[f"joint {number} pieces"] = run.pieces
        result[f"joint {number} at"] = run.at
        if run.fittings.size:
            result[f"joint {number} fittings"] = run.fittings
    return result


def _length(shape: Shape) -> float:
    """A length for the schedule: a bar's own, a plate's longer side, a bolt's nominal one; mm."""
    if isinstance(shape, BoltGroup):
        return shape.fastener.length
    return shape.size[0] if isinstance(shape, Plate) else shape.length


def _mesh_columns(shed: Shed) -> dict[str, ArrayLike]:
    """The meshes of all parts, one after another: how much of each and its kind of surface, points, triangles."""
    meshes = [view_shell(part.body) for part in shed.parts]
    none = np.empty((0, 3))
    return {
        "mesh counts": [
            [len(mesh.points), len(mesh.triangles), int(surface_of(part.body))]
            for mesh, part in zip(meshes, shed.parts, strict=True)
        ],
        "mesh points": scaled(np.vstack([none, *(mesh.points for mesh in meshes)])),
        "mesh triangles": np.vstack([none.astype(np.int64), *(mesh.triangles for mesh in meshes)]),
    }


def _distinct(rows: NDArray[np.int64]) -> tuple[NDArray[np.int64], NDArray[np.int64]]:
    """The different rows (t, w), and which of them each row is (n,)."""
    # One number a row sorts ten times as fast as whole rows; rows that share it by chance are told apart after.
    weights = np.array([pow(_MIX, power, 2**61) for power in range(rows.shape[1])], np.int64)
    _, first, which = np.unique(rows @ weights, return_index=True, return_inverse=True)
    different = rows[first]
    if np.array_equal(different[which], rows):
        return different, which
    different, which = np.unique(rows, axis=0, return_inverse=True)
    return different, which.reshape(-1)
