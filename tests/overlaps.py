"""Which solids of a building share space: exact, once for each distinct pair and relative placement.

Knows bodies, which body each piece has, and where it lies; not where they come from.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from manifold3d import Manifold

from shedbim.geometry.placements import Placements, compose, inverse

__all__ = ["Overlap", "overlaps", "touching"]

#: Relative placements that differ by less than this, mm, are one: a body of 30 m turned by as much as these
#: roundings allow moves by less than a hundredth of a millimetre at its end.
_PLACE, _TURN = 1e-2, 1e-7


@dataclass(frozen=True)
class Overlap:
    """Two pieces that share space, by their numbers, and how much of it, mm³."""

    first: int
    second: int
    volume: float


def overlaps(
    bodies: Sequence[Manifold], body: np.ndarray, placement: Placements, most: float
) -> list[Overlap]:
    """Give the pairs of pieces that share more than ``most`` mm³, the worst first.

    Args:
        bodies: the solids, each in its own frame.
        body: (n,) which of them each piece has.
        placement: (n, 3, 4) where it lies.
    """
    first, second = touching(bodies, body, placement)
    if not len(first):
        return []
    apart = compose(inverse(placement[first]), placement[second])
    rounded = np.concatenate(
        [np.round(apart[:, :, :3].reshape(-1, 9) / _TURN), np.round(apart[:, :, 3] / _PLACE)], axis=1
    )
    rows = np.column_stack([body[first], body[second], rounded]).astype(np.int64)
    _, leaders, which = np.unique(rows, axis=0, return_index=True, return_inverse=True)
    volumes = np.array(
        [(bodies[body[first[k]]] ^ bodies[body[second[k]]].transform(apart[k])).volume() for k in leaders]
    )[which.ravel()]
    found = [
        Overlap(int(first[k]), int(second[k]), float(volumes[k])) for k in np.flatnonzero(volumes > most)
    ]
    return sorted(found, key=lambda overlap: -overlap.volume)


def touching(
    bodies: Sequence[Manifold], body: np.ndarray, placement: Placements
) -> tuple[np.ndarray, np.ndarray]:
    """Give the pairs of pieces whose boxes, each along its own axes, meet: (m,) and (m,)."""
    boxes = np.array([each.bounding_box() for each in bodies])
    middle, half = (boxes[:, :3] + boxes[:, 3:])[body] / 2, (boxes[:, 3:] - boxes[:, :3])[body] / 2
    turn = placement[:, :, :3]
    centre = np.einsum("nij,nj->ni", turn, middle) + placement[:, :, 3]
    reach = np.einsum("nij,nj->ni", np.abs(turn), half)
    first, second = _boxes_meet(centre - reach, centre + reach)
    if not len(first):
        return first, second
    # Boxes apart along an axis of one of the two are apart; the other directions hardly ever matter here.
    offset = centre[second] - centre[first]
    between = np.einsum("mji,mjk->mik", turn[first], turn[second])
    size = np.abs(between)
    along_first = np.abs(np.einsum("mji,mj->mi", turn[first], offset))
    along_second = np.abs(np.einsum("mji,mj->mi", turn[second], offset))
    meet = (along_first <= half[first] + np.einsum("mik,mk->mi", size, half[second])).all(axis=1)
    meet &= (along_second <= half[second] + np.einsum("mki,mk->mi", size, half[first])).all(axis=1)
    return first[meet], second[meet]


def _boxes_meet(low: np.ndarray, high: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """Give the pairs of boxes along the building's axes, corners (n, 3), that meet: a sweep along y."""
    order = np.argsort(low[:, 1], kind="stable")
    low, high = low[order], high[order]
    stop = np.searchsorted(low[:, 1], high[:, 1], side="right")
    firsts, seconds = [], []
    for i in range(len(order)):
        behind = slice(i + 1, stop[i])
        meet = (low[behind] <= high[i]).all(axis=1) & (high[behind] >= low[i]).all(axis=1)
        found = order[behind][meet]
        firsts.append(np.full(len(found), order[i]))
        seconds.append(found)
    return np.concatenate(firsts), np.concatenate(seconds)
