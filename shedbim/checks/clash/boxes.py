"""Boxes that lie any way in the building, and how far two of them are apart at least."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from shedbim.geometry.placements import Placements, apply

__all__ = ["apart", "boxes_around"]

Floats = NDArray[np.float64]

#: Edges that are nearer to parallel than this, sine of their angle, give no direction to look along: in double
#: precision the noise of a length of 30 m over this sine is a millionth of a millimetre, and grows beyond it.
_PARALLEL = 1e-5


def boxes_around(local: Floats, placement: Placements, margin: float = 0.0) -> tuple[Floats, Floats]:
    """Give the boxes along the building's axes around boxes that lie any way: corners (n, 3), (n, 3), mm.

    Args:
        local: (n, 2, 3) least and greatest corner of each in its own frame, mm.
        placement: (n, 3, 4) where it lies.
        margin: how much wider to make them on each side, mm.
    """
    low, high = local[:, 0], local[:, 1]
    centre = apply(placement, (low + high)[:, None] / 2)[:, 0] if len(local) else low
    reach = np.einsum("nij,nj->ni", np.abs(placement[:, :, :3]), (high - low) / 2) + margin
    return centre - reach, centre + reach


def apart(a: Floats, b: Floats, turn: Floats, offset: Floats, enough: float = np.inf) -> Floats:
    """Give how far boxes are apart at least, mm, a pair in each row (m,).

    The separating axis theorem: the greatest gap along the normals of the faces of either and along the common
    normals of an edge of each. It is above 0 exactly where the boxes are apart, and never more than their true
    distance. Where they meet it is less than 0 by how far one would have to be moved.

    Args:
        a, b: (m, 3) half of the sizes of the first and of the second box along their own axes, mm.
        turn: (m, 3, 3) the axes of the second as columns, as seen along the axes of the first.
        offset: (m, 3) from the middle of the first to that of the second, along the axes of the first, mm.
        enough: pairs that faces alone show to be so far apart are looked at no further.
    """
    size = np.abs(turn)
    gap = (np.abs(offset) - a - np.einsum("mik,mk->mi", size, b)).max(axis=1)
    back = np.einsum("mik,mi->mk", turn, offset)
    gap = np.maximum(gap, (np.abs(back) - b - np.einsum("mik,mi->mk", size, a)).max(axis=1))
    near = np.flatnonzero(gap <= enough)
    gap[near] = np.maximum(gap[near], _edges(a[near], b[near], turn[near], offset[near]))
    return np.asarray(gap)


def _edges(a: Floats, b: Floats, turn: Floats, offset: Floats) -> Floats:
    """The greatest gap (m,) along the common normals of two edges."""
    size = np.abs(turn)
    gap = np.full(len(offset), -np.inf)
    for k in range(3):
        k1, k2 = (k + 1) % 3, (k + 2) % 3
        for n in range(3):
            n1, n2 = (n + 1) % 3, (n + 2) % 3
            # The normal is the cross product of edge k of the first, a unit vector there, and edge n of the second.
            length = np.hypot(turn[:, k1, n], turn[:, k2, n])
            along = np.abs(offset[:, k2] * turn[:, k1, n] - offset[:, k1] * turn[:, k2, n])
            reach = a[:, k1] * size[:, k2, n] + a[:, k2] * size[:, k1, n]
            reach += b[:, n1] * size[:, k, n2] + b[:, n2] * size[:, k, n1]
            found = np.full(len(gap), -np.inf)
            np.divide(along - reach, length, out=found, where=length > _PARALLEL)
            np.maximum(gap, found, out=gap)
    return gap
