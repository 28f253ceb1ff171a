"""The mesh of a shape and the edges a draughtsman would draw, in its own frame, mm."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from shedbim.model.shapes import Shape
from shedbim.model.shells import Shell, shell

__all__ = ["Mesh", "shape_mesh"]

Floats = NDArray[np.float64]
Indices = NDArray[np.int64]

#: Two faces that turn by more than this meet in an edge that is drawn (30 degrees: above the steps of a
#: round tube cut into a dozen chords or more, below the bevel of a mitred end).
_EDGE_COSINE = float(np.cos(np.pi / 6))


@dataclass(frozen=True, eq=False)
class Mesh(Shell):
    """A closed surface of triangles and its drawn edges, which are found when they are first asked for."""

    @property
    def edges(self) -> Indices:
        """(e, 2) int, indices into ``points``."""
        return self._sharp[0]

    @property
    def sides(self) -> Indices:
        """(e, 2) int, the two triangles at each edge."""
        return self._sharp[1]

    @cached_property
    def _sharp(self) -> tuple[Indices, Indices]:
        return _edges(self.triangles, self.normals)


def shape_mesh(shape: Shape, chord_error: float) -> Mesh:
    """Give the mesh of a shape, its arcs cut into chords that leave them by ``chord_error`` mm at most."""
    made = shell(shape, chord_error)
    return Mesh(made.points, made.triangles, made.normals, made.faces)


def _edges(triangles: Indices, normals: Floats) -> tuple[Indices, Indices]:
    """Pairs of points (e, 2) and of triangles (e, 2) where the surface turns sharply."""
    halves = np.vstack([triangles[:, [0, 1]], triangles[:, [1, 2]], triangles[:, [2, 0]]])
    owner = np.tile(np.arange(len(triangles)), 3)
    halves = np.sort(halves, axis=1)
    order = np.lexsort((owner, halves[:, 1], halves[:, 0]))
    halves, owner = halves[order], owner[order]
    # In a closed surface each edge now stands twice in a row, once for each triangle beside it.
    twin = np.flatnonzero((halves[:-1] == halves[1:]).all(axis=1))
    sides = np.stack([owner[twin], owner[twin + 1]], axis=1)
    cosine = np.einsum("ij,ij->i", normals[sides[:, 0]], normals[sides[:, 1]])
    sharp = cosine < _EDGE_COSINE
    return halves[twin][sharp], sides[sharp]
