"""How much of a bar lies within reach of the piece beside it: a stretch of its axis."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

__all__ = ["stretches"]

Floats = NDArray[np.float64]

#: Directions this near to square to one another cut nothing off the axis.
_SQUARE = 1e-9


def stretches(half: Floats, other: Floats, turn: Floats, offset: Floats, reach: Floats) -> Floats:
    """Give from where to where a box can be within reach of another: (m, 2), mm, along its x from its middle.

    Beyond that stretch no point of the box is so near to the other. It is turned over, the first more than the last,
    where no point is at all.

    Args:
        half, other: (m, 3) half of the sizes of the box and of the other one along their own axes, mm.
        turn: (m, 3, 3) the axes of the box as columns, as seen along the axes of the other.
        offset: (m, 3) from the middle of the other to that of the box, along the axes of the other, mm.
        reach: (m,) how near is near, mm.
    """
    low, high = -half[:, 0], half[:, 0].copy()
    size = np.abs(turn)
    for axis in range(3):
        # A point of the box at x along it lies within this of the middle of the other, along this axis of the other.
        most = other[:, axis] + reach + size[:, axis, 1] * half[:, 1] + size[:, axis, 2] * half[:, 2]
        flat = size[:, axis, 0] < _SQUARE
        slope = np.where(flat, 1.0, turn[:, axis, 0])
        one, two = (-most - offset[:, axis]) / slope, (most - offset[:, axis]) / slope
        low = np.where(flat, low, np.maximum(low, np.minimum(one, two)))
        high = np.where(flat, high, np.minimum(high, np.maximum(one, two)))
    return np.stack([low, high], axis=1)
