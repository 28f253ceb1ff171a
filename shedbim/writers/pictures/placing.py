"""Room for words on a picture: which places are free, and how much of the drawing each would cover.

Rectangles are (k, 4) left, top, right, bottom; leaders are (k, 4) x1, y1, x2, y2; all in pixels.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

__all__ = ["Room"]

Floats = NDArray[np.float64]
Flags = NDArray[np.bool_]


class Room:
    """What is taken so far.

    Args:
        busy: (height, width) bool, where something is drawn that is better not covered.
    """

    def __init__(self, busy: Flags) -> None:
        self.height, self.width = busy.shape
        self._sums = np.zeros((self.height + 1, self.width + 1), np.int64)
        np.cumsum(np.cumsum(busy, axis=0, dtype=np.int64), axis=1, out=self._sums[1:, 1:])
        self._rectangles = np.zeros((0, 4))
        self._leaders = np.zeros((0, 4))

    def take(self, rectangle: Floats, leader: Floats | None = None) -> None:
        """Keep a rectangle (4,) and its leader (4,) free of all that comes later."""
        self._rectangles = np.vstack([self._rectangles, rectangle])
        if leader is not None:
            self._leaders = np.vstack([self._leaders, leader])

    def covered(self, rectangles: Floats) -> Floats:
        """Give the share (k,) of each rectangle that covers the drawing."""
        left, right = (np.clip(np.rint(rectangles[:, i]), 0, self.width).astype(np.int64) for i in (0, 2))
        top, bottom = (np.clip(np.rint(rectangles[:, i]), 0, self.height).astype(np.int64) for i in (1, 3))
        sums = self._sums
        inside = sums[bottom, right] - sums[top, right] - sums[bottom, left] + sums[top, left]
        share: Floats = inside / np.maximum((right - left) * (bottom - top), 1)
        return share

    def free(self, rectangles: Floats) -> Flags:
        """Whether each rectangle (k,) lies inside the picture and touches nothing taken."""
        inside = (rectangles[:, :2] >= 0).all(axis=1)
        inside &= (rectangles[:, 2] <= self.width) & (rectangles[:, 3] <= self.height)
        a, b = rectangles[:, None], self._rectangles[None]
        touching = (a[..., :2] < b[..., 2:]).all(axis=2) & (b[..., :2] < a[..., 2:]).all(axis=2)
        crossed = _enters(self._leaders, rectangles)
        free: Flags = inside & ~np.any(touching, axis=1) & ~np.any(crossed, axis=0)
        return free

    def clear(self, leaders: Floats) -> Flags:
        """Whether each leader (k,) crosses nothing taken."""
        crossing = np.any(_crosses(leaders, self._leaders), axis=1)
        clear: Flags = ~crossing & ~np.any(_enters(leaders, self._rectangles), axis=1)
        return clear


def _enters(lines: Floats, rectangles: Floats) -> Flags:
    """Whether lines (m, 4) enter rectangles (k, 4): (m, k)."""
    start, step = lines[:, None, :2], lines[:, None, 2:] - lines[:, None, :2]
    step = np.where(np.abs(step) < 1e-9, 1e-9, step)
    low = (rectangles[None, :, :2] - start) / step
    high = (rectangles[None, :, 2:] - start) / step
    enter = np.minimum(low, high).max(axis=2, initial=0.0)
    leave = np.maximum(low, high).min(axis=2, initial=1.0)
    entered: Flags = enter < leave
    return entered


def _crosses(lines: Floats, others: Floats) -> Flags:
    """Whether lines (m, 4) cross other lines (k, 4): (m, k)."""
    a, b = lines[:, None, :2], lines[:, None, 2:]
    c, d = others[None, :, :2], others[None, :, 2:]
    crossed: Flags = (_side(a, b, c) * _side(a, b, d) < 0) & (_side(c, d, a) * _side(c, d, b) < 0)
    return crossed


def _side(a: Floats, b: Floats, c: Floats) -> Floats:
    """On which side of the line from a to b a point c lies: positive, negative or 0."""
    side: Floats = (b[..., 0] - a[..., 0]) * (c[..., 1] - a[..., 1]) - (b[..., 1] - a[..., 1]) * (
        c[..., 0] - a[..., 0]
    )
    return side
