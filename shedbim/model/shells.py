"""Closed shells of flat triangles round parts, in the part's own frame, mm."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.geometry.rows import distinct_rows
from shedbim.model.bars import Bar, EndCut
from shedbim.model.slices import creased, section_slice
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


def shell(bar: Bar, chord_error: float) -> Shell:
    """Give the shell of a bar, its arcs cut into chords that leave them by ``chord_error`` mm at most."""
    made = _prism(bar, chord_error)
    return _of_solid(bar, chord_error) if made is None else made


def _prism(bar: Bar, chord_error: float) -> Shell | None:
    """The shell of a bar whose ends do not meet within it; None for another one.

    It has no solid to cut: each point of the section runs from one end to the other.
    """
    cut = section_slice(bar.section.outline, chord_error)
    for end in (bar.start, bar.end):
        if len(end.slopes) == 2 and end.slopes[0] != end.slopes[1]:
            cut = creased(cut, np.subtract(*end.slopes))
    first, last = bar.axis
    near = first + bar.start.offsets(cut.points, at_end=False)
    far = last + bar.end.offsets(cut.points, at_end=True)
    if not (far - near > NOISE).all():
        return None
    count, chords = len(cut.points), len(cut.outwards)
    here, there = cut.rim.T
    triangles = np.vstack(
        [
            np.column_stack([here, there, there + count]),
            np.column_stack([here, there + count, here + count]),
            cut.triangles[:, ::-1],
            cut.triangles + count,
        ]
    )
    # The faces are numbered: one for each chord, two for the planes of the start, two for those of the end.
    middles = cut.points[cut.triangles].mean(axis=1)
    faces = np.concatenate(
        [
            cut.chord,
            cut.chord,
            chords + _planes(bar.start, middles, at_end=False),
            chords + 2 + _planes(bar.end, middles, at_end=True),
        ]
    )
    normals = np.vstack(
        [
            np.column_stack([np.zeros(chords), cut.outwards]),
            -_square_to(bar.start),
            _square_to(bar.end),
        ]
    )
    points = np.column_stack([np.concatenate([near, far]), np.tile(cut.points, (2, 1))])
    return Shell(points, triangles, normals[faces], faces)


def _planes(cut: EndCut, points: Floats, *, at_end: bool) -> Integers:
    """Which plane of a cut the steel ends at over section points (n, 2), 0 or 1 (n,)."""
    offsets = points @ np.array(cut.slopes).T - cut.offsets(points, at_end=at_end)[:, None]
    plane: Integers = np.abs(offsets).argmin(axis=1)
    return plane


def _square_to(cut: EndCut) -> Floats:
    """The unit normals (2, 3) of the planes of a cut, towards +x; of a plane cut the same one twice."""
    normals = np.array([(1.0, -a, -b) for a, b in (cut.slopes * 2)[:2]])
    unit: Floats = normals / np.linalg.norm(normals, axis=1)[:, None]
    return unit


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
