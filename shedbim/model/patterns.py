"""Labelled points that say how a part is drilled and outlined, and whether two parts are so alike.

Glossary:
    pattern   labelled points of one part; each kind of thing (middles of holes of one size, corners) a label
    view      the points of a pattern as seen from one of the frames that its symmetries allow
    misfit    how far the points of one pattern lie from those of another at most
    leader    the thing that stands for all that are like it

Two patterns are alike if a motion brings each point to within ``SAME_LENGTH`` of one of the other with its label,
and leaves none of those without one.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass, field
from functools import cached_property
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from shedbim.geometry.placements import IDENTITY, Placements
from shedbim.model.congruence import ranks
from shedbim.model.holes import Hole, Notch
from shedbim.model.pressed_ends import Pressed
from shedbim.tolerance import NOISE, SAME_LENGTH

__all__ = [
    "Marker",
    "Pattern",
    "best_fit",
    "far_off",
    "feature_markers",
    "lead",
    "misfits",
    "patterns",
    "signatures",
    "turns_onto",
]

Array = NDArray[np.float64]
Ints = NDArray[np.int64]

#: What a point marks, two sizes that must be equal, and the point (x, y, z) in mm.
Marker = tuple[str, float, float, tuple[float, float, float]]

#: A direction is read off points at least this far away, mm, and off none nearer than this share of the farthest
#: one: any number that no layout has as a ratio will do.
_FAR, _FAR_SHARE = 1.0, 0.237
#: Marks of a pressed end are so far off the axis, mm: about as far as a flat is wide to either side.
_BESIDE = 60.0
#: A motion of one pattern onto another, or None.
Fit = Callable[[int, int], Placements | None]


@dataclass(frozen=True, eq=False)
class Pattern:
    """Labelled points of one part: ``points`` (m, 3) float, mm, and ``labels`` (m,) int in rising order."""

    points: Array = field(default_factory=lambda: np.zeros((0, 3)))
    labels: Ints = field(default_factory=lambda: np.zeros(0, np.int64))

    @cached_property
    def blocks(self) -> list[slice]:
        """The rows of each label."""
        if len(self.labels) == 0:
            return []
        edges = np.flatnonzero(np.diff(self.labels, prepend=-1, append=-1))
        return [slice(int(a), int(b)) for a, b in pairwise(edges)]

    @property
    def content(self) -> tuple[int, ...]:
        """What must be equal in two patterns that are alike; fewer points come first when sorted."""
        return (len(self.labels), *self.labels.tolist())


def patterns(markers: Sequence[Sequence[Marker]]) -> list[Pattern]:
    """Give the pattern of each list of markers; labels rise with the sizes and are the same for all lists."""
    rows = [marker for each in markers for marker in each]
    if not rows:
        return [Pattern() for _ in markers]
    kinds = {kind: i for i, kind in enumerate(sorted({row[0] for row in rows}))}
    names = np.column_stack(
        [[kinds[row[0]] for row in rows], ranks([row[1] for row in rows]), ranks([row[2] for row in rows])]
    )
    labels = np.unique(names, axis=0, return_inverse=True)[1].reshape(-1)
    points = np.array([row[3] for row in rows], float)
    found, begin = [], 0
    for each in markers:
        span = slice(begin, begin + len(each))
        begin += len(each)
        order = np.argsort(labels[span], kind="stable")
        found.append(Pattern(points[span][order], labels[span][order]))
    return found


def feature_markers(
    holes: Sequence[Hole], notches: Sequence[Notch] = (), pressed: Sequence[tuple[float, Pressed]] = ()
) -> list[Marker]:
    """Give the markers of holes and notches, and of pressed ends, each with the x of its tip.

    A hole is marked at its middle and where its axis leaves the wall, a slot at the middles of its two arcs too;
    a notch at the corners of its prism and their middle; a pressed end beside the middle of its tip, in front of
    either face, as far off as its angle is to be told by.
    """
    found: list[Marker] = []
    for hole in holes:
        x, y, z = hole.centre
        steps = [("hole", (0.0, 0.0, 0.0), 0.0), ("hole face", hole.axis, hole.thickness / 2)]
        if hole.slot:
            steps.append(("slot", hole.along, hole.slot / 2))
        for kind, (i, j, k), step in steps:
            for way in (step, -step) if step else (0.0,):
                place = (x + i * way, y + j * way, z + k * way)
                found.append((kind, hole.diameter, hole.slot, place))
    for notch in notches:
        u, v = np.array(notch.u), np.array(notch.v)
        foot = np.array(notch.origin) + np.array(notch.outline) @ np.array([u, v])
        corners = np.concatenate([foot, foot + np.cross(u, v) * notch.depth])
        size = float(len(foot))
        found += [("notch corner", size, 0.0, tuple(corner)) for corner in corners.tolist()]
        found.append(("notch", size, 0.0, tuple(corners.mean(axis=0).tolist())))
    for x, end in pressed:
        _, y, z = end.axis
        found += [("pressed", end.flat, end.taper, (x, y * far, z * far)) for far in (_BESIDE, -_BESIDE)]
    return found


def misfits(moved: Array, target: Pattern) -> Array:
    """Give for views ``moved`` (v, m, 3) of a pattern with the target's labels how far they are off, mm (v,)."""
    worst = np.zeros(len(moved))
    for block in target.blocks:
        apart = np.linalg.norm(moved[:, block, None] - target.points[block], axis=3)
        worst = np.maximum(worst, np.maximum(apart.min(axis=2).max(axis=1), apart.min(axis=1).max(axis=1)))
    return worst


def best_fit(motions: Placements, pattern: Pattern, target: Pattern) -> Placements | None:
    """Give the motion of ``motions`` (v, 3, 4) that lays a pattern on another best, or None if none does.

    Of those that fit equally well it is the first.
    """
    if len(target.labels) == 0:
        chosen: Placements = motions[0]
        return chosen
    moved = np.einsum("vij,mj->vmi", motions[:, :, :3], pattern.points) + motions[:, None, :, 3]
    apart = misfits(moved, target)
    best = float(apart.min())
    if best >= SAME_LENGTH - NOISE:
        return None
    chosen = motions[int((apart <= best + NOISE).argmax())]
    return chosen


def turns_onto(source: Array, target: Array, labels: Ints) -> Array:
    """Give the angles (v,) of turns about the origin that may bring plane points onto others, radians.

    One point of ``source`` (m, 2), the farthest off of the rarest label, is brought in line with each point of
    ``target`` (m, 2) with that label. Where all points lie at the origin no turn is better than another: 0.
    """
    here = source @ np.array([1, 1j])
    there = target @ np.array([1, 1j])
    far = far_off(here)
    if not far.any():
        return np.zeros(1)
    names, counts = np.unique(labels, return_counts=True)
    with_far = np.isin(names, labels[far])
    chosen = labels == names[with_far][counts[with_far].argmin()]
    first = here[chosen][np.abs(here[chosen]).argmax()]
    like = there[chosen]
    like = like[np.abs(np.abs(like) - abs(first)) < 4 * SAME_LENGTH]
    rough = np.angle(like / first)
    refined: Array = np.array([angle + _settled(here, there, labels, angle) for angle in rough])
    return refined if len(refined) else np.zeros(1)


def _settled(
    here: NDArray[np.complex128], there: NDArray[np.complex128], labels: Ints, angle: float
) -> float:
    """How much farther to turn so that all points lie best (least squares) and not one alone, radians."""
    turned = here * np.exp(1j * angle)
    apart = np.where(labels[:, None] == labels, np.abs(turned[:, None] - there), np.inf)
    lean = (turned.conj() * there[apart.argmin(axis=1)]).sum()
    return float(np.angle(lean)) if abs(lean) > NOISE else 0.0


def far_off(points: NDArray[np.complex128]) -> NDArray[np.bool_]:
    """Give which of plane points (m,) lie so far from the origin that a direction can be read off them (m,)."""
    reach = np.abs(points)
    result: NDArray[np.bool_] = reach >= max(_FAR, _FAR_SHARE * float(reach.max(initial=0.0)))
    return result


def signatures(views: Sequence[Array], labels: Ints) -> list[tuple[int, ...]]:
    """Give for each of n things numbers that are the same from whichever side one looks, and that sort.

    Args:
        views: of each thing its points (v, m, 3) from all v sides; m and the labels are the same for all.
        labels: (m,) of the points.
    """
    if len(labels) == 0:
        return [()] * len(views)
    seen = np.concatenate(views)
    places = np.dstack([np.broadcast_to(labels, seen.shape[:2]), ranks(seen)]).reshape(-1, 4)
    order = np.lexsort(places.T[::-1])
    climbs = (np.diff(places[order], axis=0, prepend=places[order[:1]]) != 0).any(axis=1)
    number = np.empty(len(places), np.int64)
    number[order] = np.cumsum(climbs)
    rows = np.sort(number.reshape(seen.shape[:2]), axis=1).tolist()
    ends = np.cumsum([len(each) for each in views]).tolist()
    return [min(map(tuple, rows[end - len(each) : end])) for each, end in zip(views, ends, strict=True)]


def lead(order: Sequence[int], spread: Array, fit: Fit) -> tuple[Ints, Placements]:
    """Give for each of n things its leader (n,) and the motion (n, 3, 4) of that one onto it.

    Args:
        order: all of them; the first that is left takes all that are near enough to it.
        spread: (n, c) float, mm: numbers that no motion changes, and that differ by less than ``3 * SAME_LENGTH``
            in any two that are alike. They spare most the closer look.
        fit: gives the motion of one onto another where they are alike.
    """
    leader = np.full(len(order), -1)
    motion = np.tile(IDENTITY, (len(order), 1, 1))
    rows = np.array(order, np.int64)
    for row in order:
        if leader[row] >= 0:
            continue
        leader[row] = row
        near = (leader[rows] < 0) & (np.abs(spread[rows] - spread[row]) < 3 * SAME_LENGTH).all(axis=1)
        for other in rows[near].tolist():
            onto = fit(row, other)
            if onto is not None:
                leader[other], motion[other] = row, onto
    return leader, motion
