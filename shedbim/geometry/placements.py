"""Rigid motions, held so that numpy works on all of them at once.

A placement is a (3, 4) float array ``[x | y | z | o]``: the three axes of the local frame and its
origin, as columns in the outer frame. Many placements are an (n, 3, 4) array. Lengths are mm.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

__all__ = [
    "IDENTITY",
    "Placements",
    "apply",
    "compose",
    "cross",
    "inverse",
    "placement",
    "relative",
    "rotation",
    "translation",
]

Placements = NDArray[np.float64]

IDENTITY: Placements = np.hstack([np.eye(3), np.zeros((3, 1))])
IDENTITY.setflags(write=False)


def cross(a: NDArray[np.float64], b: NDArray[np.float64]) -> NDArray[np.float64]:
    """Give the cross product of two vectors (3,).

    Written out: numpy's own costs thirty times as much on single vectors.
    """
    return np.array((a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]))


def placement(origin: ArrayLike, x: ArrayLike, z: ArrayLike) -> Placements:
    """Give the (3, 4) placement with local x along ``x`` and local z as near to ``z`` as that allows.

    Args:
        origin: (3,) mm.
        x: (3,) direction of the local x axis, any length but zero.
        z: (3,) direction that local z leans to; not parallel to ``x``.
    """
    ex = np.asarray(x, float)
    ex = ex / (ex @ ex) ** 0.5
    ez = np.asarray(z, float)
    ez = ez - ex * (ez @ ex)
    ez = ez / (ez @ ez) ** 0.5
    result = np.empty((3, 4))
    result[:, 0] = ex
    result[:, 1] = cross(ez, ex)
    result[:, 2] = ez
    result[:, 3] = origin
    return result


def translation(offset: ArrayLike) -> Placements:
    """Give the placements that only move: ``offset`` (..., 3) mm gives (..., 3, 4)."""
    shift = np.asarray(offset, float)
    result = np.empty((*shift.shape[:-1], 3, 4))
    result[..., :3] = np.eye(3)
    result[..., 3] = shift
    return result


def rotation(axis: ArrayLike, angle: float) -> Placements:
    """Give the (3, 4) rotation about ``axis`` (3,) through the origin by ``angle`` radians, right-handed."""
    k = np.asarray(axis, float)
    k = k / np.linalg.norm(k)
    cross = np.array([[0, -k[2], k[1]], [k[2], 0, -k[0]], [-k[1], k[0], 0]])
    turn = np.eye(3) + np.sin(angle) * cross + (1 - np.cos(angle)) * (cross @ cross)
    return np.hstack([turn, np.zeros((3, 1))])


def compose(outer: Placements, inner: Placements) -> Placements:
    """Give the placement that applies ``inner`` first, then ``outer``; leading shapes broadcast."""
    turn = outer[..., :3] @ inner[..., :3]
    origin = np.einsum("...ij,...j->...i", outer[..., :3], inner[..., 3]) + outer[..., 3]
    return np.concatenate([turn, origin[..., None]], axis=-1)


def inverse(motion: Placements) -> Placements:
    """Give the placement that undoes ``motion`` (..., 3, 4)."""
    back = np.swapaxes(motion[..., :3], -1, -2)
    origin = -np.einsum("...ij,...j->...i", back, motion[..., 3])
    return np.concatenate([back, origin[..., None]], axis=-1)


def relative(outer: Placements, inner: Placements, owner: NDArray[np.int64]) -> Placements:
    """Give ``inner`` (n, 3, 4) as seen from the rows of ``outer`` that ``owner`` (n,) names; -1: as it is."""
    result = inner.copy()
    owned = np.flatnonzero(owner >= 0)
    if len(owned):
        result[owned] = compose(inverse(outer)[owner[owned]], inner[owned])
    return result


def apply(motion: Placements, points: ArrayLike) -> NDArray[np.float64]:
    """Carry ``points`` (m, 3) by one placement (3, 4), or by many (n, 3, 4) to give (n, m, 3)."""
    turned = np.asarray(points, float) @ np.swapaxes(motion[..., :3], -1, -2)
    moved: NDArray[np.float64] = turned + motion[..., None, :, 3]
    return moved
