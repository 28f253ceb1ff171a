"""Pairs of pieces that lie alike, found at once, and what is measured of each kind of pair, worked out once.

Two steps. Pairs of the same two shapes that lie alike are one kind. Kinds whose bars are the same within reach of one
another, wherever along which bar that is, are one configuration: see ``lengths``.

Placements are told apart to a thousandth of a millimetre. A tenth would be too coarse here, for touching is the rule
in a steel building: over a plate of 300 by 300 mm it is nine cubic centimetres. What comes out so near to a limit that
even a thousandth may turn it is worked out for each pair by itself.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from manifold3d import Manifold
from numpy.typing import NDArray

from shedbim.checks.clash.boxes import apart
from shedbim.checks.clash.lengths import Lengths
from shedbim.checks.clash.windows import stretches
from shedbim.geometry.placements import Placements, compose, inverse
from shedbim.geometry.rows import distinct_rows
from shedbim.model.shapes import Shape

__all__ = ["PLACE", "Pair", "Placed", "Work", "measured"]

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]

#: Steps in which places, mm, and directions are told apart: a bar of 20 m turned by one moves 0.001 mm at its end.
PLACE, _TURN = 1e-3, 1e-7


@dataclass(frozen=True, eq=False)
class Placed:
    """Things that stand somewhere.

    Attributes:
        shapes: the distinct ones.
        shape: (n,) row of the shape of each thing.
        placement: (n, 3, 4) where it lies.
    """

    shapes: Sequence[Shape]
    shape: Ints
    placement: Placements

    @cached_property
    def boxes(self) -> Floats:
        """Least and greatest corner of each shape (p, 2, 3), mm, in its own frame."""
        return np.array([shape.box for shape in self.shapes]).reshape(-1, 2, 3)


@dataclass(frozen=True, eq=False)
class Pair:
    """A pair of one configuration, for those who measure it.

    Attributes:
        row: a pair that stands for the configuration.
        first, second: the solids, true within reach of one another, in the frame of the first's.
        placement: (3, 4) where that frame lies, in the frame of the first thing's shape.
        turn: (3, 3) the axes of the second thing as columns, in the frame of the first's.
        reach: within which the solids are true, mm.
    """

    row: int
    first: Manifold
    second: Manifold
    placement: Placements
    turn: Floats
    reach: float


#: What is measured of a pair: always as many numbers.
Work = Callable[[Pair], Sequence[float]]
#: Which rows of measured numbers (m, k) are too near to a limit to be taken from a pair that lies alike.
Unsure = Callable[[Floats], NDArray[np.bool_]]


def measured(
    placed: Placed,
    i: Ints,
    j: Ints,
    reach: Floats,
    work: Work,
    otherwise: Sequence[float],
    unsure: Unsure = lambda found: np.zeros(len(found), bool),
) -> Floats:
    """Give what ``work`` measures of each pair (m, k), once for each configuration.

    Args:
        placed: the things.
        i, j: (m,) the pairs.
        reach: (p, p) by the shapes of a pair, how near is near, mm; negative where that is of no interest.
        work: measures a pair.
        otherwise: the numbers of pairs that are not so near.
        unsure: which numbers are to be worked out for their pair itself.
    """
    if not len(i):
        return np.tile(np.asarray(otherwise, float), (0, 1))
    apart_by = compose(inverse(placed.placement[i]), placed.placement[j])
    a, b = placed.shape[i], placed.shape[j]

    def of(rows: Ints, *, alike: bool) -> Floats:
        kinds = _Kinds(placed, a[rows], b[rows], apart_by[rows], reach[a[rows], b[rows]])
        values = np.tile(np.asarray(otherwise, float), (len(rows), 1))
        for members, pair in kinds.configurations(rows, alike=alike):
            values[members] = work(pair)
        return values

    first, kind = distinct_rows(_rounded(a, b, apart_by))
    found = of(first, alike=True)[kind]
    alone = np.flatnonzero(unsure(found))
    found[alone] = of(alone, alike=False)
    return found


def _rounded(a: Ints, b: Ints, placement: Placements) -> Ints:
    """Rows of integers that are equal where pairs lie alike."""
    rows = np.empty((len(a), 14), np.int64)
    rows[:, 0], rows[:, 1] = a, b
    rows[:, 2:11] = np.rint(placement[:, :, :3].reshape(-1, 9) / _TURN)
    rows[:, 11:] = np.rint(placement[:, :, 3] / PLACE)
    return rows


class _Kinds:
    """Kinds of pairs: the second shape of each lies at ``placement`` in the frame of the first."""

    def __init__(self, placed: Placed, a: Ints, b: Ints, placement: Placements, reach: Floats) -> None:
        boxes = placed.boxes
        half, middle = (boxes[:, 1] - boxes[:, 0]) / 2, boxes.mean(axis=1)
        turn = placement[:, :, :3]
        offset = np.einsum("mij,mj->mi", turn, middle[b]) + placement[:, :, 3] - middle[a]
        gap = apart(half[a], half[b], turn, offset, float(reach.max(initial=0.0)))
        back = np.swapaxes(turn, 1, 2)
        along_a = stretches(half[a], half[b], back, -np.einsum("mij,mj->mi", back, offset), reach)
        along_b = stretches(half[b], half[a], turn, offset, reach)
        near = (gap <= reach) & (along_a[:, 0] <= along_a[:, 1]) & (along_b[:, 0] <= along_b[:, 1])
        self._near = np.flatnonzero(near & (reach >= 0))
        self._reach, self._placement = reach, placement
        self._a, self._b = a, b
        self._along = (along_a + middle[a, :1], along_b + middle[b, :1])
        self._shapes = placed.shapes

    def configurations(self, pairs: Ints, *, alike: bool) -> list[tuple[Ints, Pair]]:
        """Give the kinds (k,) of each configuration, with the pair that stands for it.

        Args:
            pairs: the pair that stands for each kind.
            alike: whether kinds that are alike are one configuration, or each is its own.
        """
        near = self._near
        if not len(near):
            return []
        lengths = Lengths(self._shapes)
        along_a, along_b = (along[near] for along in self._along)
        number_a, origin_a = lengths.numbered(self._a[near], along_a)
        number_b, origin_b = lengths.numbered(self._b[near], along_b)
        placement = self._placement[near].copy()
        placement[:, :, 3] += placement[:, :, 0] * origin_b[:, None]
        placement[:, 0, 3] -= origin_a
        first = kind = np.arange(len(near))
        if alike:
            first, kind = distinct_rows(_rounded(number_a, number_b, placement))
        members = np.split(np.argsort(kind, kind="stable"), np.cumsum(np.bincount(kind))[:-1])
        found = []
        for k, rows in zip(first.tolist(), members, strict=True):
            one = lengths.solid(int(number_a[k]), *(along_a[k] - origin_a[k]).tolist())
            other = lengths.solid(int(number_b[k]), *(along_b[k] - origin_b[k]).tolist())
            frame = np.hstack([np.eye(3), np.array([[origin_a[k]], [0.0], [0.0]])])
            row = near[k]
            other, turn = other.transform(placement[k]), placement[k, :, :3]
            pair = Pair(int(pairs[row]), one, other, frame, turn, float(self._reach[row]))
            found.append((near[rows], pair))
        return found
