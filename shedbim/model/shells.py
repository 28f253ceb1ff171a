"""Closed shells of flat triangles round parts, in the part's own frame, mm."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from manifold3d import Manifold
from numpy.typing import NDArray

from shedbim.geometry.rows import distinct_rows
from shedbim.model.bars import Bar
from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.end_cuts import EndCut
from shedbim.model.plates import Plate
from shedbim.model.polygons import disc_polygons, plate_polygons
from shedbim.model.shapes import Shape
from shedbim.model.slices import Slice, creased, section_slice, slice_of
from shedbim.model.solids import solid
from shedbim.tolerance import NOISE

__all__ = ["Shell", "shell", "shell_of"]

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


def shell(shape: Shape, chord_error: float) -> Shell:
    """Give the shell of a part, its arcs cut into chords that leave them by ``chord_error`` mm at most.

    That of a bolt group is a closed shell for each prism of its fasteners; faces at which these touch stay.
    """
    if isinstance(shape, Plate):
        return _upright(slice_of(plate_polygons(shape, chord_error)), 0.0, shape.thickness)
    if isinstance(shape, BoltGroup):
        return _bolts(shape, chord_error)
    worked = shape.holes or shape.notches or shape.pressed != (None, None)
    made = None if worked else _prism(shape, chord_error)
    return shell_of(solid(shape, chord_error)) if made is None else made


def _upright(cut: Slice, low: float, high: float) -> Shell:
    """The shell of a prism over a slice in x and y from z = ``low`` to ``high``."""
    count, chords, flat = len(cut.points), len(cut.outwards), len(cut.triangles)
    points = np.column_stack([np.tile(cut.points, (2, 1)), np.repeat([low, high], count)])
    faces = np.concatenate([cut.chord, cut.chord, np.repeat([chords, chords + 1], flat)])
    normals = np.zeros((chords + 2, 3))
    normals[:chords, :2] = cut.outwards
    normals[chords:, 2] = -1.0, 1.0
    return Shell(points, _triangles(cut), normals[faces], faces)


def _bolts(group: BoltGroup, chord_error: float) -> Shell:
    """The shell of a bolt group, a prism after the other."""
    prisms = [
        _upright(slice_of(disc_polygons(disc, chord_error)), disc.start, disc.end)
        for disc in group.fastener.stack
    ]
    points = np.concatenate([each.points for each in prisms])
    begin = np.cumsum([0] + [len(each.points) for each in prisms])
    triangles = np.concatenate([each.triangles + at for each, at in zip(prisms, begin, strict=False)])
    first = np.cumsum([0] + [int(each.faces.max()) + 1 for each in prisms])
    faces = np.concatenate([each.faces + at for each, at in zip(prisms, first, strict=False)])
    normals = np.concatenate([each.normals for each in prisms])
    places = np.column_stack([np.array(group.points), np.zeros(group.count)])
    shifts = np.arange(group.count)[:, None, None] * len(points)
    return Shell(
        (places[:, None] + points).reshape(-1, 3),
        (shifts + triangles).reshape(-1, 3),
        np.tile(normals, (group.count, 1)),
        np.tile(faces, group.count),
    )


def _triangles(cut: Slice) -> Integers:
    """The triangles (t, 3) of a prism over a slice, whose points stand twice: those of its foot come first.

    Its sides come first, then its foot, then its top.
    """
    count = len(cut.points)
    here, there = cut.rim.T
    return np.vstack(
        [
            np.column_stack([here, there, there + count]),
            np.column_stack([here, there + count, here + count]),
            cut.triangles[:, ::-1],
            cut.triangles + count,
        ]
    )


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
    chords = len(cut.outwards)
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
    return Shell(points, _triangles(cut), normals[faces], faces)


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


def shell_of(body: Manifold) -> Shell:
    """Give the shell of a solid."""
    mesh = body.to_mesh64()
    points = np.asarray(mesh.vert_properties, float)[:, :3]
    triangles = np.asarray(mesh.tri_verts, np.int64)
    a, b, c = points[triangles[:, 0]], points[triangles[:, 1]], points[triangles[:, 2]]
    cross = np.cross(b - a, c - a)
    length = np.linalg.norm(cross, axis=1)
    sound = length > 0
    triangles, normals = triangles[sound], cross[sound] / length[sound, None]
    _, faces = distinct_rows(np.floor(normals * _NORMAL_STEPS + _HALF).astype(np.int64))
    return Shell(points, triangles, normals, faces)
