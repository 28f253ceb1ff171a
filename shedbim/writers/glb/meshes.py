"""Meshes of parts as the bytes of a buffer, and the JSON texts that say where each lies in it."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.model.shapes import Shape
from shedbim.model.shed import Part
from shedbim.model.shells import shell
from shedbim.writers.coarse import coarse
from shedbim.writers.described import described, figures
from shedbim.writers.glb.text import compact

__all__ = ["CHORD_ERROR", "FlatMesh", "MeshSet", "flat_mesh", "mesh_set"]

#: Arcs become chords that leave them by this at most, mm: half of what a shop saws to, and fine enough for
#: a tube to look round.
CHORD_ERROR = 0.5

#: Codes of the standard: component types, and what a buffer view holds.
_UNSIGNED_SHORT, _UNSIGNED_INT, _FLOAT = 5123, 5125, 5126
_ARRAY_BUFFER, _ELEMENT_ARRAY_BUFFER = 34962, 34963
#: The greatest index of 16 bits stands for none (the standard forbids it).
_MOST_SHORT = 65535
_VECTOR = 12  # bytes of three 32-bit floats


Indices = NDArray[np.uint16] | NDArray[np.uint32]


@dataclass(frozen=True, eq=False)
class FlatMesh:
    """A closed surface whose faces are flat: a corner has a vertex for each plane that meets there.

    Attributes:
        points: (v, 3) 32-bit float, m, in the part's own frame.
        normals: (v, 3) 32-bit float, unit, outwards.
        indices: (3 t,) unsigned integers of 16 bits, or 32 where those do not reach; anticlockwise from outside.
    """

    points: NDArray[np.float32]
    normals: NDArray[np.float32]
    indices: Indices


@dataclass(frozen=True, eq=False)
class MeshSet:
    """The meshes of all parts.

    Attributes:
        meshes: text of each mesh, in the order of the parts.
        accessors: text of each accessor.
        views: text of each buffer view.
        data: the buffer, in blocks that are written one after another.
    """

    meshes: list[str]
    accessors: list[str]
    views: list[str]
    data: list[bytes]


def flat_mesh(shape: Shape) -> FlatMesh:
    """Give the mesh of a shape with a normal of its own for each flat face."""
    made = shell(coarse(shape), CHORD_ERROR)
    # Points that fall together in 32 bits are one, and the slivers between them are gone: it stays closed.
    points, which = np.unique((made.points / 1000 + 0.0).astype(np.float32), axis=0, return_inverse=True)
    triangles = which.reshape(-1)[made.triangles]
    sound = (triangles != np.roll(triangles, 1, axis=1)).all(axis=1)
    triangles, normals = triangles[sound], made.normals[sound]
    corner, face = triangles.reshape(-1), np.repeat(made.faces[sound], 3)
    # One number for each pair of a corner and a face.
    pairs = face * len(points) + corner
    _, first, vertex = np.unique(pairs, return_index=True, return_inverse=True)
    return FlatMesh(
        points[corner[first]],
        # Adding zero turns -0.0 into 0.0.
        (normals[first // 3] + 0.0).astype(np.float32),
        vertex.astype(np.uint16) if len(first) <= _MOST_SHORT else vertex.astype(np.uint32),
    )


def mesh_set(parts: Sequence[Part], materials: Sequence[int]) -> MeshSet:
    """Give the meshes of parts; ``materials`` names the material of each part by its index.

    The buffer holds points and normals of one part after another, then the indices in the same order.
    """
    meshes: list[str] = []
    accessors: list[str] = []
    vertices: list[bytes] = []
    indices: list[bytes] = []
    vertex_end = index_end = 0
    for part, material in zip(parts, materials, strict=True):
        mesh = flat_mesh(part.body)
        meshes.append(_mesh(part, material, len(accessors)))
        vertices.append(_little_endian(mesh.points) + _little_endian(mesh.normals))
        # A closed surface has an even number of triangles: indices of 16 bits fill whole words too.
        indices.append(_little_endian(mesh.indices))
        middle = vertex_end + len(vertices[-1]) // 2
        component = _UNSIGNED_SHORT if mesh.indices.itemsize == 2 else _UNSIGNED_INT
        accessors += [
            _accessor(0, vertex_end, _FLOAT, len(mesh.points), "VEC3", _bounds(mesh.points)),
            _accessor(0, middle, _FLOAT, len(mesh.normals), "VEC3"),
            _accessor(1, index_end, component, len(mesh.indices), "SCALAR"),
        ]
        vertex_end += len(vertices[-1])
        index_end += len(indices[-1])
    views = [
        f'{{"buffer":0,"byteLength":{vertex_end},"byteStride":{_VECTOR},"target":{_ARRAY_BUFFER}}}',
        f'{{"buffer":0,"byteOffset":{vertex_end},"byteLength":{index_end},"target":{_ELEMENT_ARRAY_BUFFER}}}',
    ]
    return MeshSet(meshes, accessors, views if meshes else [], vertices + indices)


def _mesh(part: Part, material: int, accessor: int) -> str:
    """The text of a part's mesh, whose accessors begin with ``accessor``."""
    extras = {
        "mark": part.mark,
        "section": described(part.shape),
        "role": part.role.word,
        "grade": part.grade,
        "finish": part.finish,
        **figures(part.shape),
        "mass_kg": round(part.shape.mass, 3),
    }
    return (
        f'{{"name":{compact(part.mark)},"primitives":[{{"attributes":{{"POSITION":{accessor},'
        f'"NORMAL":{accessor + 1}}},"indices":{accessor + 2},"material":{material}}}],"extras":{compact(extras)}}}'
    )


def _accessor(view: int, offset: int, component: int, count: int, kind: str, more: str = "") -> str:
    """The text of an accessor."""
    return (
        f'{{"bufferView":{view},"byteOffset":{offset},"componentType":{component},"count":{count},'
        f'"type":"{kind}"{more}}}'
    )


def _bounds(points: NDArray[np.float32]) -> str:
    """The bounds that the standard wants in the accessor of points, as the very numbers of the buffer."""
    return f',"min":{compact(points.min(axis=0).tolist())},"max":{compact(points.max(axis=0).tolist())}'


def _little_endian(values: NDArray[np.float32] | Indices) -> bytes:
    """The bytes of an array, the least first, as the standard has it on any machine."""
    return values.astype(values.dtype.newbyteorder("<"), copy=False).tobytes()
