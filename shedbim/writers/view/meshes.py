"""The mesh of a bar as the view draws it: coarser than an exact one, round bars with few chords."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.model.bars import Bar
from shedbim.sections.profiles import Pipe, Round
from shedbim.writers.pictures.meshes import bar_mesh

__all__ = ["ViewMesh", "view_mesh"]

#: Arcs become chords this far off, mm: a rolled corner becomes two chords with an edge between them.
_CHORD_ERROR = 1.6
#: Round sections become ten-sided: this far off as a share of the radius, at most.
_ROUND_SHARE = 0.06


@dataclass(frozen=True, eq=False)
class ViewMesh:
    """A closed surface of triangles and its drawn edges.

    Attributes:
        points: (v, 3) float, mm, in the bar's own frame.
        triangles: (t, 3) int, indices into ``points``, anticlockwise seen from outside.
        edges: (e, 2) int, indices into ``points``.
    """

    points: NDArray[np.float64]
    triangles: NDArray[np.int64]
    edges: NDArray[np.int64]


def view_mesh(bar: Bar) -> ViewMesh:
    """Give the mesh of a bar; the lines along a round one are chords, not edges, and are left out."""
    is_round = isinstance(bar.section.profile, Pipe | Round)
    error = min(_CHORD_ERROR, _ROUND_SHARE * bar.section.height / 2) if is_round else _CHORD_ERROR
    mesh = bar_mesh(bar, error)
    edges = mesh.edges
    if is_round and len(edges):
        ends = mesh.points[edges]
        across = np.abs(ends[:, 0, 1:] - ends[:, 1, 1:]).max(axis=1)
        edges = edges[across > error]
    return ViewMesh(mesh.points, mesh.triangles, edges)
