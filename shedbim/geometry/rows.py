"""Which rows of a table of integers are equal."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

__all__ = ["distinct_rows"]

Integers = NDArray[np.int64]

#: Odd multipliers that mix a row of integers into one; any will do, fixed ones keep the order of the file.
_MIX = (np.uint64(0x9E3779B97F4A7C15), np.uint64(0xBF58476D1CE4E5B9))


def distinct_rows(rows: Integers) -> tuple[Integers, Integers]:
    """Find equal rows of (n, k) integers: the first row of each kind, in order, and each row's kind (n,)."""
    mixed = np.zeros(len(rows), np.uint64)
    for column in rows.T.astype(np.uint64):
        mixed = (mixed ^ column) * _MIX[0]
        mixed ^= mixed >> np.uint64(29)
        mixed *= _MIX[1]
    _, first, kind = np.unique(mixed, return_index=True, return_inverse=True)
    if not np.array_equal(rows[first][kind], rows):  # two kinds mixed into one number
        _, first, kind = np.unique(rows, axis=0, return_index=True, return_inverse=True)
    order = np.argsort(first)
    rank = np.empty_like(order)
    rank[order] = np.arange(len(order))
    return first[order], rank[kind.reshape(-1)]
