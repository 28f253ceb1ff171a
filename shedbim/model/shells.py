"""Closed shells of flat triangles round parts, in the part's own frame, mm."""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache

import numpy as np
from manifold3d import triangulate
from numpy.typing import NDArray

from shedbim.geometry.outlines import Outline
from shedbim.geometry.rows import distinct_rows
from shedbim.model.bars import Bar, EndCut
from shedbim.model.solids import solid
from shedbim.tolerance import NOISE

__all__ = ["Shell", "shell"]

Floats = NDArray[np.float64]
Integers = NDArray[np.int64]

#: Normals that agree to this many parts of one are those of one plane: above the noise of a short triangle,
#: far below the turn from one chord of an arc to the next.
_NORMAL_STEPS = 1e3
#: Added before rounding down: takes the boundary off the halves, where plain numbers lie.
_HALF = 0.501


@dataclass(frozen=True, eq=False)
class Shell:
    """The surface of a body whose faces are flat.

    Attributes:
        points: (v, 3) float, mm.
        triangles: (t, 3) int, indices into ``points``, anticlockwise seen from outside.
        normals: (t, 3) float, unit, outwards.
        faces: (t,) int, which flat face each triangle is part of; parallel faces may share a number.
    """

    points: Floats
    triangles: Integers
    normals: Floats
    faces: Integers


@dataclass(frozen=True, eq=False)
class _Slice:
    """A section cut into chords: all loops, one after another.

    Attributes:
        points: (n, 2) float, y and z.
        following: (n,) int, the next point on the same loop.
        triangles: (m, 3) int, anticlockwise seen from where x points to.
        outwards: (n, 2) float, unit, square to the chord from each point to the following one.
    """

    points: Floats
    following: Integers
    triangles: Integers
    outwards: Floats


def shell(bar: Bar, chord_error: float) -> Shell:
    """Give the shell of a bar, its arcs cut into chords that leave them by ``chord_error`` mm at most."""
    made = _prism(bar, chord_error)
    return _of_solid(bar, chord_error) if made is None else made


def _prism(bar: Bar, chord_error: float) -> Shell | None:
    """The shell of a bar whose ends are plane and do not meet within it; None for another one.

    It has no cut to compute: each corner of the section runs from one plane to the other.
    """
    if len(bar.start.slopes) > 1 or len(bar.end.slopes) > 1:
        return None
    cut = _slice(bar.section.outline, chord_error)
    first, last = bar.axis
    start = first + bar.start.offsets(cut.points, at_end=False)
    end = last + bar.end.offsets(cut.points, at_end=True)
    if not (end - start > NOISE).all():
        return None
    count = len(cut.points)
    here = np.arange(count)
    there = cut.following
    triangles = np.vstack(
        [
            np.column_stack([here, there, there + count]),
            np.column_stack([here, there + count, here + count]),
            cut.triangles[:, ::-1],
            cut.triangles + count,
        ]
    )
    sides = np.column_stack([np.zeros(count), cut.outwards])
    ends = np.stack([-_square_to(bar.start), _square_to(bar.end)])
    faces = np.concatenate([here, here, np.repeat([count, count + 1], len(cut.triangles))])
    points = np.empty((2 * count, 3))
    points[:count, 0], points[count:, 0] = start, end
    points[:, 1:] = np.tile(cut.points, (2, 1))
    return Shell(points, triangles, np.vstack([sides, ends])[faces], faces)


def _square_to(cut: EndCut) -> Floats:
    """The unit normal (3,) of a plane cut, towards +x."""
    ((a, b),) = cut.slopes
    normal = np.array([1.0, -a, -b])
    unit: Floats = normal / np.linalg.norm(normal)
    return unit


@lru_cache(maxsize=512)
def _slice(outline: Outline, chord_error: float) -> _Slice:
    """An outline cut into chords; kept, since many parts have the same section."""
    loops = outline.polygons(chord_error)
    points = np.vstack(loops)
    following = np.arange(1, len(points) + 1)
    begin = 0
    for loop in loops:
        following[begin + len(loop) - 1] = begin
        begin += len(loop)
    chord = points[following] - points
    # Steel lies on the left of every loop.
    outwards = np.column_stack([chord[:, 1], -chord[:, 0]]) / np.hypot(*chord.T)[:, None]
    return _Slice(points, following, np.asarray(triangulate(loops), np.int64), outwards)


def _of_solid(bar: Bar, chord_error: float) -> Shell:
    """The shell of a bar with ends of any shape, from its solid."""
    mesh = solid(bar, chord_error).to_mesh64()
    points = np.asarray(mesh.vert_properties, float)[:, :3]
    triangles = np.asarray(mesh.tri_verts, np.int64)
    a, b, c = points[triangles[:, 0]], points[triangles[:, 1]], points[triangles[:, 2]]
    cross = np.cross(b - a, c - a)
    length = np.linalg.norm(cross, axis=1)
    sound = length > 0
    triangles, normals = triangles[sound], cross[sound] / length[sound, None]
    _, faces = distinct_rows(np.floor(normals * _NORMAL_STEPS + _HALF).astype(np.int64))
    return Shell(points, triangles, normals, faces)
