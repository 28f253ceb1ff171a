"""Whether one set of labelled points lies on another after a rigid motion, and which comes first in order.

An assembly is compared through its cloud: for every part in it a few points, each together with its images
under the part's own symmetries and all under one label. What a symmetry of a part leaves open is then left
open by the cloud, and two assemblies are equal exactly when their clouds are.

A frame of a cloud is read off its own points: from the centroid to a far point with a rare label (x), and
to a second one off that line (z). A cloud has as many frames as it has points that fit equally well; every
motion onto an equal cloud carries a frame of one onto a frame of the other.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from shedbim.geometry.placements import IDENTITY, Placements, apply, compose, inverse, placement
from shedbim.model.congruence import ranks
from shedbim.tolerance import NOISE, SAME_PLACE

__all__ = ["Cloud", "match", "order"]

Array = NDArray[np.float64]
Ints = NDArray[np.int64]

#: Frames within this many times the tolerance of the best are tried too: each of the two lengths that
#: choose a frame may be out by the tolerance at both of its ends, in both clouds.
_SLACK = 8.0
#: Points at least this share of the farthest one away are far enough to take a direction from.
_FAR = 0.25
#: Weight of the place along the x axis in the choice of the second point: it parts points that lie equally
#: far off the axis; any number that no layout has as a ratio will do.
_ALONG = 0.137
#: Coordinates nearer than this, mm, are equal when clouds are put in order.
_SAME_COORDINATE = 1e-4


@dataclass(frozen=True, eq=False)
class Cloud:
    """Labelled points: ``points`` (n, 3) float, mm, and ``labels`` (n,) int in rising order."""

    points: Array
    labels: Ints

    @cached_property
    def blocks(self) -> list[slice]:
        """The rows of each label."""
        edges = np.flatnonzero(np.diff(self.labels, prepend=-1, append=-1))
        return [slice(int(a), int(b)) for a, b in pairwise(edges)]

    @cached_property
    def centre(self) -> Array:
        """The centroid (3,), mm."""
        mean: Array = self.points.mean(axis=0)
        return mean

    @cached_property
    def anchors(self) -> tuple[int, int]:
        """The labels of the points that frames are read off: rare ones that reach far; -1 where none does."""
        arms = self.points - self.centre
        reach = np.linalg.norm(arms, axis=1)
        first = self._rarest(reach)
        if first < 0:
            return -1, -1
        far = int(np.where(self.labels == first, reach, 0).argmax())
        return first, self._rarest(_off(arms, arms[far] / reach[far]))

    def frames(self, anchors: tuple[int, int]) -> Placements:
        """The frames (f, 3, 4) read off the points with the two labels ``anchors``, the best first."""
        arms = self.points - self.centre
        reach = np.linalg.norm(arms, axis=1)
        is_first = self.labels == anchors[0]
        far = np.flatnonzero(is_first & (reach >= reach[is_first].max() - _SLACK * SAME_PLACE))
        second = np.flatnonzero(self.labels == anchors[1])
        if len(second) == 0:
            across = np.eye(3)[np.abs(arms[far]).argmin(axis=1)]
            return np.array(
                [placement(self.centre, arm, z) for arm, z in zip(arms[far], across, strict=True)]
            )
        axes = arms[far] / reach[far, None]
        off = np.stack([_off(arms[second], axis) for axis in axes])
        merit = np.where(off >= _FAR * off.max(), off + _ALONG * (axes @ arms[second].T), -np.inf)
        chosen = np.argwhere(merit >= merit.max() - _SLACK * SAME_PLACE)
        chosen = chosen[np.argsort(-merit[tuple(chosen.T)], kind="stable")]
        return np.array([placement(self.centre, arms[far[i]], arms[second[j]]) for i, j in chosen])

    def _rarest(self, reach: Array) -> int:
        """The label with the fewest points among those far away by ``reach`` (n,); -1 if none is."""
        if reach.max() <= SAME_PLACE:
            return -1
        labels, index, counts = np.unique(self.labels, return_inverse=True, return_counts=True)
        farthest = np.zeros(len(labels))
        np.maximum.at(farthest, index, reach)
        far = farthest >= _FAR * reach.max()
        return int(labels[far][counts[far].argmin()])


def match(cloud: Cloud, other: Cloud, tolerance: float = SAME_PLACE) -> Placements | None:
    """Give a rigid motion (3, 4) of ``cloud`` onto ``other``, or None where there is none.

    It brings every point to within ``tolerance`` mm of one of the other cloud with the same label, and leaves
    none of those without one. The identity is given wherever it does so.
    """
    if not np.array_equal(cloud.labels, other.labels):
        return None
    if len(cloud.labels) == 0 or _pairs(cloud.points, cloud, other, tolerance) is not None:
        return IDENTITY
    back = inverse(cloud.frames(cloud.anchors)[0])
    for frame in other.frames(cloud.anchors):
        rough = apply(compose(frame, back), cloud.points)
        pairs = _pairs(rough, cloud, other, _SLACK * tolerance / _FAR)
        if pairs is None:
            continue
        # The frame hangs on two points; the motion on all of them.
        motion = _fit(cloud.points, other.points[pairs])
        if _pairs(apply(motion, cloud.points), cloud, other, tolerance) is not None:
            return motion
    return None


def order(clouds: Sequence[Cloud]) -> list[int]:
    """Give the order of ``clouds`` with equal labels that depends on their shapes and hands only."""
    if len(clouds) == 1 or len(clouds[0].labels) == 0:
        return list(range(len(clouds)))
    seen = [[apply(inverse(f), cloud.points) for f in cloud.frames(cloud.anchors)] for cloud in clouds]
    places = ranks(np.concatenate([np.array(views).ravel() for views in seen]), _SAME_COORDINATE)
    signatures: list[tuple[tuple[int, int], bytes]] = []
    for cloud, views in zip(clouds, seen, strict=True):
        here, places = np.split(places, [len(views) * cloud.points.size])
        signatures.append((cloud.anchors, min(_signature(cloud, v) for v in here.reshape(len(views), -1, 3))))
    return sorted(range(len(clouds)), key=lambda i: signatures[i])


def _off(arms: Array, axis: Array) -> Array:
    """How far points (n, 3) lie off the line along the unit vector ``axis`` (n,), mm."""
    result: Array = np.linalg.norm(np.cross(arms, axis), axis=1)
    return result


def _signature(cloud: Cloud, places: Ints) -> bytes:
    """Places (n, 3) sorted within each label, as bytes that compare like the numbers."""
    rows = np.lexsort((places[:, 2], places[:, 1], places[:, 0], cloud.labels))
    return places[rows].astype(">u8").tobytes()


def _pairs(points: Array, cloud: Cloud, other: Cloud, reach: float) -> Ints | None:
    """For each of ``points`` (n, 3) the row of the nearest one of ``other`` with its label, or None.

    None where a point of either cloud has none of the other within ``reach`` mm.
    """
    found = np.empty(len(points), np.int64)
    for block in cloud.blocks:
        apart = np.linalg.norm(points[block, None] - other.points[None, block], axis=2)
        if max(apart.min(axis=1).max(), apart.min(axis=0).max()) > reach:
            return None
        found[block] = block.start + apart.argmin(axis=1)
    return found


def _fit(points: Array, target: Array) -> Placements:
    """The rigid motion (3, 4), never a mirror, that brings ``points`` (n, 3) nearest to ``target`` (n, 3)."""
    middle, aim = points.mean(axis=0), target.mean(axis=0)
    u, _, vt = np.linalg.svd((target - aim).T @ (points - middle))
    turn = u @ np.diag([1.0, 1.0, np.linalg.det(u) * np.linalg.det(vt)]) @ vt
    turn[np.abs(turn) < NOISE * 1e-6] = 0.0
    return np.column_stack([turn, aim - turn @ middle])
