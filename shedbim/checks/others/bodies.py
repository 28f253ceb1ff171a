"""Solids of what steel is held against, from boxes and from surfaces that may be open."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from manifold3d import Error, Manifold, Mesh64
from numpy.typing import NDArray

from shedbim.geometry.placements import Placements
from shedbim.model.other_trades import Mesh

__all__ = ["Bodies", "Body", "body_of_box", "body_of_mesh", "local_boxes"]

Floats = NDArray[np.float64]

#: An open surface is held against steel as a skin of this thickness, mm.
_SKIN = 0.1
_FLAT = 1e-9


@dataclass(frozen=True, eq=False)
class Body:
    """A solid in its own frame, mm; ``closed`` is False where it is the skin of an open surface."""

    solid: Manifold
    closed: bool


@dataclass(frozen=True, eq=False)
class Bodies:
    """Placed bodies: which box and placement each of n has, and how far steel keeps from it.

    Attributes:
        box: (n, 2, 3) least and greatest corner in the body's own frame, mm.
        placement: (n, 3, 4) in building axes.
        shape: (n,) number of the body's shape: equal for equal bodies.
        around: (n,) distance all round that steel is looked for in, mm.
        above: (n,) the same above, mm.
    """

    box: Floats
    placement: Placements
    shape: NDArray[np.int64]
    around: Floats
    above: Floats


def local_boxes(meshes: Sequence[Mesh]) -> Floats:
    """Give the least and greatest corner of each mesh (m, 2, 3) in its own frame, mm."""
    boxes = [(mesh.points.min(axis=0), mesh.points.max(axis=0)) for mesh in meshes]
    return np.array(boxes, float).reshape(-1, 2, 3)


def body_of_box(low: Sequence[float], high: Sequence[float]) -> Body:
    """Give the body of a box by its corners, mm."""
    size = np.subtract(high, low)
    return Body(Manifold.cube(size.tolist()).translate(list(low)), closed=True)


def body_of_mesh(mesh: Mesh) -> Body:
    """Give the body of a surface: a solid where it is closed, else its skin."""
    for triangles in (mesh.triangles, mesh.triangles[:, ::-1]):
        raw = Mesh64(np.array(mesh.points, order="C"), np.array(triangles, np.uint64, order="C"))
        raw.merge()
        solid = Manifold(raw)
        if solid.status() == Error.NoError and solid.volume() > 0:
            return Body(solid, closed=True)
    return Body(_skin(mesh), closed=False)


def _skin(mesh: Mesh) -> Manifold:
    """The skin of a surface: a thin prism on each triangle, half of it to either side."""
    corners = mesh.points[mesh.triangles]
    normal = np.cross(corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 0])
    length = np.linalg.norm(normal, axis=1)
    sound = length > _FLAT
    shift = normal[sound] / length[sound, None] * (_SKIN / 2)
    prisms = np.concatenate([corners[sound] + shift[:, None], corners[sound] - shift[:, None]], axis=1)
    return Manifold.compose([Manifold.hull_points(prism) for prism in prisms])
