"""Pairs of boxes that meet, all at once: boxes along the building's axes, by the cells of a grid that they lie in.

A pair that shares several cells is looked at in one of them: that in which the later of the two begins along each
axis. What is compared grows with the number of boxes, however long the building is.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

__all__ = ["near_pairs", "near_pairs_between"]

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]
Pairs = tuple[Ints, Ints]

#: Cells are so many times as large along each axis as the boxes are on average: found by trying on buildings.
_CELL = 2.0
#: A cell is this large at least, mm, and an axis has so many cells at most.
_SMALLEST, _MOST = 10.0, 2.0**20
#: Boxes lie in so many cells on average at most; larger cells are taken until that holds.
_CELLS_A_BOX = 24.0
#: So many pairs are compared at once: bounds the memory.
_BLOCK = 1 << 21


@dataclass(frozen=True, eq=False)
class _Grid:
    """Cells over all boxes: where they begin (3,), how large they are (3,), and how many there are along each axis."""

    origin: Floats
    cell: Floats
    count: Ints

    def numbers(self, points: Floats) -> Ints:
        """The cell along each axis (n, 3) of points (n, 3)."""
        return np.asarray(np.clip(((points - self.origin) / self.cell).astype(np.int64), 0, self.count - 1))

    def key(self, x: Ints, y: Ints, z: Ints) -> Ints:
        """One number for each cell."""
        return np.asarray((x * self.count[1] + y) * self.count[2] + z)


@dataclass(frozen=True, eq=False)
class _Entries:
    """Boxes in cells, sorted by cell: the cell (e,) and the box (e,) of each entry."""

    cell: Ints
    box: Ints


@dataclass(frozen=True, eq=False)
class _Side:
    """Boxes with what they are compared by: corners along each axis, and the cell each begins in along it."""

    low: tuple[Floats, ...]
    high: tuple[Floats, ...]
    first: tuple[Ints, ...]


def near_pairs(low: Floats, high: Floats) -> Pairs:
    """Give the pairs of boxes of one set that meet or touch, each once, in order: (m,) and (m,), first < second.

    Args:
        low, high: least and greatest corner of each box (n, 3), mm; widen them by half of what still counts as near.
    """
    if len(low) < 2:
        return _none()
    grid = _grid(low, high)
    entries, side = _entries(grid, low, high), _side(grid, low, high)
    start = np.arange(1, len(entries.cell) + 1)
    stop = np.searchsorted(entries.cell, entries.cell, side="right")
    found = [
        (np.minimum(a, b), np.maximum(a, b))
        for a, b in _matches(grid, (entries, side), (entries, side), start, stop)
    ]
    return _in_order(found)


def near_pairs_between(low_a: Floats, high_a: Floats, low_b: Floats, high_b: Floats) -> Pairs:
    """Give the pairs of a box of one set and a box of another that meet or touch, in order: (m,) and (m,).

    Args:
        low_a, high_a: corners of the boxes of the first set (n, 3), mm.
        low_b, high_b: of the second (k, 3).
    """
    if not len(low_a) or not len(low_b):
        return _none()
    grid = _grid(np.concatenate([low_a, low_b]), np.concatenate([high_a, high_b]))
    ours, theirs = _entries(grid, low_a, high_a), _entries(grid, low_b, high_b)
    start = np.searchsorted(theirs.cell, ours.cell, side="left")
    stop = np.searchsorted(theirs.cell, ours.cell, side="right")
    a, b = (ours, _side(grid, low_a, high_a)), (theirs, _side(grid, low_b, high_b))
    return _in_order(list(_matches(grid, a, b, start, stop)))


def _none() -> Pairs:
    return np.zeros(0, np.int64), np.zeros(0, np.int64)


def _in_order(found: list[Pairs]) -> Pairs:
    """All pairs sorted by their first, then their second box."""
    if not found:
        return _none()
    a, b = (np.concatenate([pair[k] for pair in found]) for k in (0, 1))
    order = np.argsort(a * (int(b.max(initial=0)) + 1) + b)
    return a[order], b[order]


def _grid(low: Floats, high: Floats) -> _Grid:
    """The grid for boxes: its cells follow their mean size along each axis."""
    origin, span = low.min(axis=0), high.max(axis=0) - low.min(axis=0)
    size = high - low
    cell = np.maximum(np.maximum(_CELL * size.mean(axis=0), _SMALLEST), span / _MOST)
    while np.prod(1.0 + size / cell, axis=1).mean() > _CELLS_A_BOX:
        cell = cell * 1.5
    return _Grid(origin, cell, (span / cell).astype(np.int64) + 1)


def _side(grid: _Grid, low: Floats, high: Floats) -> _Side:
    first = grid.numbers(low)
    x, y, z = (np.ascontiguousarray(first[:, k]) for k in range(3))
    lows, highs = (tuple(np.ascontiguousarray(each[:, k]) for k in range(3)) for each in (low, high))
    return _Side(lows, highs, (x, y, z))


def _entries(grid: _Grid, low: Floats, high: Floats) -> _Entries:
    """An entry for each cell that each box reaches into."""
    first, last = grid.numbers(low), grid.numbers(high)
    width = last - first + 1
    number = width.prod(axis=1)
    box = np.repeat(np.arange(len(low)), number)
    within = np.arange(len(box)) - np.repeat(np.cumsum(number) - number, number)
    wide_y, wide_z = width[box, 1], width[box, 2]
    z = first[box, 2] + within % wide_z
    within //= wide_z
    cell = grid.key(first[box, 0] + within // wide_y, first[box, 1] + within % wide_y, z)
    order = np.argsort(cell, kind="stable")
    return _Entries(cell[order], box[order])


def _matches(
    grid: _Grid, ours: tuple[_Entries, _Side], theirs: tuple[_Entries, _Side], start: Ints, stop: Ints
) -> Iterator[Pairs]:
    """Pairs that meet, in blocks: entry i of ours with those of theirs from ``start[i]`` to before ``stop[i]``."""
    (entries, side), (others, beside) = ours, theirs
    for rows in _blocks(np.maximum(stop - start, 0)):
        number = np.maximum(stop[rows] - start[rows], 0)
        mine = np.repeat(np.arange(rows.start, rows.stop), number)
        offset = start[rows] - (np.cumsum(number) - number)
        their = np.arange(len(mine)) + np.repeat(offset, number)
        a, b, cell = entries.box[mine], others.box[their], entries.cell[mine]
        for axis in (1, 0, 2):
            meet = side.low[axis][a] <= beside.high[axis][b]
            meet &= beside.low[axis][b] <= side.high[axis][a]
            a, b, cell = a[meet], b[meet], cell[meet]
        x, y, z = (np.maximum(side.first[axis][a], beside.first[axis][b]) for axis in range(3))
        here = grid.key(x, y, z) == cell
        yield a[here], b[here]


def _blocks(number: Ints) -> Iterator[slice]:
    """Slices of rows that hold about ``_BLOCK`` pairs each."""
    total = np.cumsum(number)
    row = 0
    while row < len(number):
        done = int(total[row - 1]) if row else 0
        stop = max(int(np.searchsorted(total, done + _BLOCK, side="right")), row + 1)
        yield slice(row, stop)
        row = stop
