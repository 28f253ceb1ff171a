"""Rows of integers mixed into one 64-bit number each: equal rows give equal numbers, others hardly ever do."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

__all__ = ["mixed"]

#: Odd multipliers that mix a row of integers into one; any will do, fixed ones keep the order of the file.
_MIX = (np.uint64(0x9E3779B97F4A7C15), np.uint64(0xBF58476D1CE4E5B9))


def mixed(rows: NDArray[np.int64]) -> NDArray[np.uint64]:
    """Give one number for each of (n, k) rows."""
    state = np.zeros(len(rows), np.uint64)
    for column in rows.T.astype(np.uint64):
        state = (state ^ column) * _MIX[0]
        state ^= state >> np.uint64(29)
        state *= _MIX[1]
    return state
