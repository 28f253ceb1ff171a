"""Mechanisms as what a person can picture: which bars move, and which way."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.checks.stability.compatibility import Compatibility
from shedbim.checks.stability.skeleton import Skeleton, lots

__all__ = ["WAYS", "Motion", "apart", "motions"]

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]

#: The ways a motion is told by: the axis along which most of it goes.
WAYS = ("across the building", "along the building", "up and down")
#: What moves less than this share of what moves most stands still.
_STILL = 1e-4


@dataclass(frozen=True)
class Motion:
    """One way in which a part of the building moves freely.

    Attributes:
        pieces: the bars that move, those that move most first.
        point: where it moves most, mm.
        way: one of ``WAYS``: where nodes stand still and bars turn, that in which their free ends go.
    """

    pieces: tuple[int, ...]
    point: tuple[float, float, float]
    way: str


def motions(bars: Skeleton, strains: Compatibility, free: Floats) -> Iterator[Motion]:
    """Give the motions that a basis (u, m) of all mechanisms is made of, each of as few bars as is easily found."""
    moves = _taken(free, strains.moves)  # (n, 3, m)
    slopes = _taken(free, strains.slopes)  # (s, 2, m)
    turns = np.einsum("skm,skc->scm", slopes, strains.asides[bars.bar])
    size = np.linalg.norm(moves, axis=(1, 2))
    spot_size = np.maximum(size[bars.node], np.linalg.norm(turns, axis=(1, 2)))
    moving = spot_size > _STILL * spot_size.max(initial=0.0)
    spots = np.flatnonzero(moving)
    linked = spots[size[bars.node[spots]] > _STILL * spot_size.max(initial=0.0)]
    count = len(bars.points)
    pairs = np.stack([bars.node[linked], count + bars.bar[linked]], axis=1)
    lot = lots(count + len(bars.piece), _with_turns(bars, strains, spots, pairs, count))
    for each in np.unique(lot[count + bars.bar[spots]]):
        here = spots[lot[count + bars.bar[spots]] == each]
        shape = np.concatenate([moves[bars.node[here]], turns[here]], axis=1)  # (h, 6, m)
        for one in apart(shape.reshape(-1, shape.shape[2])).T:
            yield _motion(bars, here, one.reshape(-1, 6))


def _taken(free: Floats, unknowns: Ints) -> Floats:
    """The movements of unknowns (k, c) in each mechanism (k, c, m); 0 where there is none."""
    padded = np.vstack([free, np.zeros((1, free.shape[1]))])
    return np.asarray(padded[unknowns])


def _with_turns(bars: Skeleton, strains: Compatibility, spots: Ints, pairs: Ints, count: int) -> Ints:
    """Pairs of moving nodes and bars, with those of bars that turn as one."""
    turning = spots[strains.slopes[spots, 0] >= 0]
    order = turning[np.argsort(strains.slopes[turning, 0], kind="stable")]
    same = np.flatnonzero(np.diff(strains.slopes[order, 0]) == 0)
    shared = count + np.stack([bars.bar[order[same]], bars.bar[order[same + 1]]], axis=1)
    return np.concatenate([pairs, shared])


def apart(shape: Floats) -> Floats:
    """Give a basis (r, k) of the columns (r, m) of which each is 1 at a row where the others are 0.

    The rows are chosen one after the other where most is left to move; so each member of the basis moves little more
    than it must.
    """
    left = shape.copy()
    chosen: list[int] = []
    most = float(np.linalg.norm(shape, axis=1).max(initial=0.0))
    while len(chosen) < shape.shape[1]:
        size = np.linalg.norm(left, axis=1)
        row = int(size.argmax())
        if size[row] <= max(_STILL * most, 1e-12):
            break
        chosen.append(row)
        along = left[row] / size[row]
        left = left - np.outer(left @ along, along)
    return np.asarray(shape @ np.linalg.pinv(shape[chosen])) if chosen else shape[:, :0]


def _motion(bars: Skeleton, spots: Ints, shape: Floats) -> Motion:
    """A motion of spots (h,), with their movements and turnings (h, 6)."""
    moved = np.abs(shape[:, :3])
    turned = np.abs(shape[:, 3:])
    size = np.maximum(np.linalg.norm(moved, axis=1), np.linalg.norm(turned, axis=1))
    most = moved if float(moved.max(initial=0.0)) > _STILL * float(size.max()) else turned
    order = np.argsort(-size, kind="stable")
    order = order[size[order] > _STILL * size.max()]
    pieces = tuple(dict.fromkeys(bars.piece[bars.bar[spots[order]]].tolist()))
    x, y, z = bars.points[bars.node[spots[order[0]]]].tolist()
    return Motion(pieces, (x, y, z), WAYS[int((most**2).sum(axis=0).argmax())])
