"""Which rows of a table of integers are equal."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from shedbim.geometry.mixing import mixed

__all__ = ["distinct_rows"]

Integers = NDArray[np.int64]


def distinct_rows(rows: Integers) -> tuple[Integers, Integers]:
    """Find equal rows of (n, k) integers: the first row of each kind, in order, and each row's kind (n,)."""
    _, first, kind = np.unique(mixed(rows), return_index=True, return_inverse=True)
    if not np.array_equal(rows[first][kind], rows):  # two kinds mixed into one number
        _, first, kind = np.unique(rows, axis=0, return_index=True, return_inverse=True)
    order = np.argsort(first)
    rank = np.empty_like(order)
    rank[order] = np.arange(len(order))
    return first[order], rank[kind.reshape(-1)]
