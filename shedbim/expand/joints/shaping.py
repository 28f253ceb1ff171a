"""Plates laid where a joint wants them: from points in joint axes to a shape and its frame."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import ArrayLike, NDArray

from shedbim.geometry.placements import Placements, cross
from shedbim.model.plates import Plate

__all__ = ["frame_of", "plate_at"]

Array = NDArray[np.float64]


def frame_of(origin: ArrayLike, x: ArrayLike, y: ArrayLike) -> Placements:
    """Give the frame (3, 4) at ``origin`` with its x axis along ``x`` and its y axis as near to ``y`` as can be."""
    ex = np.asarray(x, float)
    ex = ex / np.linalg.norm(ex)
    ey = np.asarray(y, float)
    ey = ey - ex * float(ey @ ex)
    ey = ey / np.linalg.norm(ey)
    return np.column_stack([ex, ey, cross(ex, ey), np.asarray(origin, float)])


def plate_at(
    origin: ArrayLike,
    x: ArrayLike,
    y: ArrayLike,
    corners: Sequence[tuple[float, float]],
    thickness: float,
    *,
    below: float = 0.0,
) -> tuple[Plate, Placements]:
    """Give a plate and its frame: corners in the axes ``x``, ``y`` about ``origin``, anticlockwise.

    Args:
        below: how much of the thickness lies on the far side of the plane, against x cross y; half of it puts
            the plate's middle in the plane.
    """
    frame = frame_of(origin, x, y)
    frame[:, 3] -= frame[:, 2] * below
    return Plate(tuple((float(a), float(b)) for a, b in corners), thickness), frame
