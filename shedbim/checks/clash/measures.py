"""How two pieces lie to one another: the volume they share, how deep that is, and the gap where they share none."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from manifold3d import Manifold
from numpy.typing import NDArray

from shedbim.checks.clash.boxes import boxes_around
from shedbim.checks.clash.configurations import PLACE, Pair, Placed, measured
from shedbim.checks.clash.near_pairs import near_pairs
from shedbim.geometry.placements import apply
from shedbim.tolerance import SHARED_VOLUME

__all__ = ["SLACK", "Neighbours", "neighbours"]

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]

#: Shared volumes below this, mm³, are what noise and the chords of arcs leave where solids touch.
_NOTHING = 1.0
#: How far one of two solids that lie side by side is moved off, mm.
_HAIR = 1e-3
#: Volumes this near to the limit, as a share of it, are worked out for each pair by itself.
_NEAR_LIMIT = 0.1
#: A gap that is short of its limit by less than this, mm, holds it: limits are often just what was set out.
SLACK = 0.01


@dataclass(frozen=True, eq=False)
class Neighbours:
    """Pairs of pieces that lie within reach of one another.

    Attributes:
        first, second: (m,) the pieces, first < second.
        volume: (m,) how much they share, mm³.
        depth: (m,) how deep that is, mm: the least size of what they share along the axes of either.
        gap: (m,) between them, mm; 0 where they touch or overlap.
        place: (m, 3) where they overlap, building axes, mm; nan where they do not.
    """

    first: Ints
    second: Ints
    volume: Floats
    depth: Floats
    gap: Floats
    place: Floats


def neighbours(placed: Placed, reach: Floats, limits: Sequence[float] = ()) -> Neighbours:
    """Give all pairs of pieces that are within reach.

    Args:
        placed: the pieces.
        reach: (p, p) by the shapes of a pair, up to which gap it is of interest, mm; negative for none.
        limits: what gaps will be held against, mm, give or take ``SLACK``.
    """
    low, high = boxes_around(placed.boxes[placed.shape], placed.placement, float(reach.max(initial=0.0)) / 2)
    i, j = near_pairs(low, high)
    beyond = (0.0, 0.0, np.inf, np.nan, np.nan, np.nan)
    turning = np.array([limit + way * SLACK for limit in limits for way in (-1, 1)])

    def unsure(found: Floats) -> NDArray[np.bool_]:
        close = np.abs(found[:, 0] - SHARED_VOLUME) < _NEAR_LIMIT * SHARED_VOLUME
        for each in turning:
            close |= np.abs(found[:, 2] - each) < 2 * PLACE
        return close

    found = measured(placed, i, j, reach, _measure, beyond, unsure)
    near = np.flatnonzero(found[:, 2] < np.inf)
    i, j, found = i[near], j[near], found[near]
    place = apply(placed.placement[i], found[:, None, 3:])[:, 0]
    return Neighbours(i, j, found[:, 0], found[:, 1], found[:, 2], place)


def _measure(pair: Pair) -> Sequence[float]:
    """Volume, depth, gap and place of a pair."""
    gap = _gap_beside(pair)
    if gap is None:
        shared = pair.first ^ pair.second
        volume = shared.volume()
        if volume > _NOTHING:
            return (volume, _depth(shared, pair), 0.0, *apply(pair.placement, _middle(shared)[None])[0])
        gap = pair.first.min_gap(pair.second, pair.reach)
    return 0.0, 0.0, gap if gap < pair.reach else np.inf, np.nan, np.nan, np.nan


def _gap_beside(pair: Pair) -> float | None:
    """The gap of a pair that lies side by side along an axis of either; None where it does not.

    Most plates do, and nothing need be cut for it: one is moved off by a hair, so that the library sees at once that
    they share nothing. That adds a hair to the gap at most.
    """
    for turn in (np.eye(3), pair.turn.T):
        still = np.hstack([turn, np.zeros((3, 1))])
        one, other = pair.first.transform(still), pair.second.transform(still)
        a, b = np.array(one.bounding_box()).reshape(2, 3), np.array(other.bounding_box()).reshape(2, 3)
        between = np.stack([a[0] - b[1], b[0] - a[1]])  # the other below, the other above
        side, axis = np.unravel_index(int(between.argmax()), between.shape)
        if between[side, axis] > -_HAIR / 2:
            off = np.zeros(3)
            off[axis] = _HAIR if side else -_HAIR
            return max(float(one.min_gap(other.translate(off), pair.reach + _HAIR)) - _HAIR, 0.0)
    return None


def _middle(shared: Manifold) -> Floats:
    """Give the middle of the box of a solid (3,), mm."""
    box = np.array(shared.bounding_box())
    return np.asarray((box[:3] + box[3:]) / 2)


def _depth(shared: Manifold, pair: Pair) -> float:
    """The least size of what two pieces share along the axes of either, mm."""
    points = np.asarray(shared.to_mesh().vert_properties, float)[:, :3]
    turned = points @ pair.turn
    return float(min(np.ptp(points, axis=0).min(), np.ptp(turned, axis=0).min()))
