"""Parallel projection: where points of the building fall on a picture, and how deep they lie.

Picture frame: x pixels to the right, y pixels down from the upper left corner, z mm away from the eye.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.geometry.placements import Placements

__all__ = ["Border", "Box", "Projection", "View", "box_corners", "fitted"]

Floats = NDArray[np.float64]
#: Least and greatest x, y and z in building axes, mm.
Box = tuple[tuple[float, float, float], tuple[float, float, float]]
#: Pixels kept free at the left, the top, the right and the bottom.
Border = tuple[float, float, float, float]
#: No border takes more than this share of a side.
_MOST_BORDER = 0.6


@dataclass(frozen=True)
class View:
    """How a building is looked at.

    Attributes:
        direction: the way the eye looks, in building axes, any length but zero.
        up: what points up the picture, as near as the direction allows; not parallel to it.
        margin: white border on each side, as a share of the picture.
        box: what fills the picture, in building axes, mm; None to fit all that is drawn.
    """

    direction: tuple[float, float, float]
    up: tuple[float, float, float] = (0.0, 0.0, 1.0)
    margin: float = 0.04
    box: Box | None = None


@dataclass(frozen=True, eq=False)
class Projection:
    """A view fitted to a picture.

    Attributes:
        turn: (3, 3) float, rows right, down and away from the eye in building axes, unit vectors.
        scale: pixels per mm.
        shift: (2,) float, pixels added to x and y.
    """

    turn: Floats
    scale: float
    shift: Floats

    def finer(self, times: int) -> Projection:
        """Give the projection onto a picture of so many times the pixels along each side."""
        return Projection(self.turn, self.scale * times, self.shift * times)

    def points(self, points: Floats) -> Floats:
        """Carry points (..., 3) in building axes, mm, to picture frame (..., 3): pixels, pixels, mm."""
        turned: Floats = points @ self.turn.T
        turned[..., :2] = turned[..., :2] * self.scale + self.shift
        return turned

    def placed(self, placements: Placements, points: Floats) -> Floats:
        """Carry a part's own points (v, 3) by its placements (n, 3, 4) to picture frame (n, v, 3)."""
        matrix = self.turn @ placements
        matrix[:, :2] *= self.scale
        matrix[:, :2, 3] += self.shift
        placed: Floats = points @ np.swapaxes(matrix[:, :, :3], 1, 2) + matrix[:, None, :, 3]
        return placed


def fitted(
    view: View, targets: Floats, width: int, height: int, border: Border = (0.0, 0.0, 0.0, 0.0)
) -> Projection:
    """Give the projection that brings ``targets`` (n, 3), building axes, mm, inside a picture's margins.

    Where ``view.box`` is given its corners are brought inside instead. The border is kept free besides the
    margins, as far as the picture has room for it.
    """
    away = np.array(view.direction) / np.linalg.norm(view.direction)
    right = np.cross(away, view.up)
    right = right / np.linalg.norm(right)
    turn = np.stack([right, np.cross(away, right), away])
    flat = (box_corners(*view.box) if view.box is not None else targets) @ turn[:2].T
    low, high = flat.min(axis=0), flat.max(axis=0)
    size = np.array([width, height])
    start, end = np.array(border[:2]), np.array(border[2:])
    taken = np.minimum((start + end) / size, _MOST_BORDER) * size / np.maximum(start + end, 1e-9)
    start, end = start * taken, end * taken
    room = size * (1 - 2 * view.margin) - start - end
    scale = float((room / np.maximum(high - low, 1.0)).min())
    return Projection(turn, scale, (size + start - end) / 2 - (low + high) / 2 * scale)


def box_corners(low: tuple[float, float, float], high: tuple[float, float, float]) -> Floats:
    """Give the corners (8, 3) of a box."""
    pick = np.indices((2, 2, 2)).reshape(3, 8)
    ends = np.array([low, high])
    return np.stack([ends[pick[axis], axis] for axis in range(3)], axis=1)
