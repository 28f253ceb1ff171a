"""Which bars of one section are the same thing to make, holes, notches and pressed ends and all.

Bars are first told by length and end cuts, as if they were not drilled (``congruence``); then those of one shape
by their features: holes, notches and ends pressed flat, seen in the frame of that shape, under each of its
symmetries. A tube is free to turn until a feature is brought in line with its like, so a pressed end leaves it
half turns and flips.
"""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Sequence
from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from shedbim.geometry.placements import IDENTITY, Placements, apply, compose, inverse, rotation
from shedbim.model.bars import Bar
from shedbim.model.congruence import congruence, is_free_to_turn, symmetries
from shedbim.model.holes import Hole, Notch, Vector
from shedbim.model.likeness import Gathering, Likeness
from shedbim.model.patterns import (
    Marker,
    Pattern,
    best_fit,
    far_off,
    feature_markers,
    lead,
    patterns,
    signatures,
    turns_onto,
)
from shedbim.tolerance import NOISE

__all__ = ["bar_likeness", "bar_symmetries"]

Array = NDArray[np.float64]
Ints = NDArray[np.int64]


def bar_likeness(bars: Sequence[Bar], classes: Sequence[int]) -> Likeness:
    """Sort bars of one section into shapes; those of different ``classes`` are different. See ``congruence``."""
    plain = congruence(bars, classes)
    found = Gathering(len(bars))
    found.motion[:], found.flipped[:] = plain.motion, plain.flipped
    back = inverse(plain.motion)
    seen = [
        Pattern(apply(motion, each.points), each.labels)
        for motion, each in zip(back, patterns([_markers(bar) for bar in bars]), strict=True)
    ]
    groups: dict[tuple[int, ...], list[int]] = defaultdict(list)
    for i, each in enumerate(seen):
        groups[(int(plain.shape_of[i]), *each.content)].append(i)
    for (number, *content), rows in sorted(groups.items()):
        shape = plain.shapes[number]
        marks, order, leader, onto = _sorted_out(shape, [seen[i] for i in rows])
        shapes = [
            _featured(shape, bars[i], back[i]) if first == j else shape
            for j, (i, first) in enumerate(zip(rows, leader.tolist(), strict=True))
        ]
        found.add(rows, order, leader, shapes, [(*content, *each) for each in marks])
        found.motion[rows] = compose(found.motion[rows], onto)
        found.flipped[rows] ^= onto[:, 0, 0] < 0
    return found.done()


def _sorted_out(
    shape: Bar, seen: Sequence[Pattern]
) -> tuple[list[tuple[int, ...]], list[int], Ints, Placements]:
    """Signatures, order, leaders and motions of bars of one shape by their holes and notches in its frame."""
    if not len(seen[0].labels):
        count = len(seen)
        return [()] * count, [0], np.zeros(count, np.int64), np.tile(IDENTITY, (count, 1, 1))
    own, free = symmetries(shape), is_free_to_turn(shape)
    sides = [apply(_frames(own, each) if free else own, each.points) for each in seen]
    marks = signatures(sides, seen[0].labels)
    # Equal but for noise: the one with the least numbers leads, in whatever order they came.
    order = sorted(range(len(seen)), key=lambda i: (marks[i], seen[i].points.tolist()))

    def fit(i: int, j: int) -> Placements | None:
        return best_fit(_turns(own, seen[i], seen[j]) if free else own, seen[i], seen[j])

    middle = np.array([shape.length / 2, 0.0, 0.0])
    return marks, order, *lead(order, np.array([_spread(each, middle) for each in seen]), fit)


def bar_symmetries(bar: Bar) -> tuple[Placements, bool]:
    """Give the motions (g, 3, 4) that carry a bar onto itself, holes and all, and whether it is free to turn.

    The identity comes first; of a bar that is free to turn only that and one flip are given.
    """
    plain = replace(bar, holes=(), notches=(), pressed=(None, None))
    (pattern,) = patterns([_markers(bar)])
    own = symmetries(plain)
    if not len(pattern.labels):
        return own, is_free_to_turn(plain)
    kept: list[Placements] = []
    for motion in _turns(own, pattern, pattern) if is_free_to_turn(plain) else own:
        if best_fit(motion[None], pattern, pattern) is None:
            continue
        if all(np.abs(motion[:, :3] - other[:, :3]).max() > 1e-3 for other in kept):
            kept.append(motion)
    return np.array(kept), False


def _markers(bar: Bar) -> list[Marker]:
    """What marks the features of a bar."""
    tips = zip((0.0, bar.length), bar.pressed, strict=True)
    return feature_markers(bar.holes, bar.notches, [(x, end) for x, end in tips if end is not None])


def _turns(own: Placements, pattern: Pattern, target: Pattern) -> Placements:
    """The motions (v, 3, 4) of a bar free to turn that bring one feature of a pattern in line with its like."""
    found = []
    for motion in own:
        moved = apply(motion, pattern.points)[:, 1:]
        found += [_turned(motion, angle) for angle in turns_onto(moved, target.points[:, 1:], target.labels)]
    return np.array(found)


def _frames(own: Placements, pattern: Pattern) -> Placements:
    """The motions (v, 3, 4) of a bar free to turn that bring a feature of a pattern in line with y."""
    found = []
    for motion in own:
        moved = apply(motion, pattern.points)[:, 1:] @ np.array([1, 1j])
        far = far_off(moved)
        found += [_turned(motion, -angle) for angle in (np.angle(moved[far]) if far.any() else np.zeros(1))]
    return np.array(found)


def _turned(motion: Placements, angle: float) -> Placements:
    """A motion, then a turn about the bar's axis."""
    return compose(rotation((1.0, 0.0, 0.0), float(angle)), motion)


def _spread(pattern: Pattern, middle: Array) -> Array:
    """How far the points of each label lie from the middle of the bar, sorted (m,), mm."""
    reach = np.linalg.norm(pattern.points - middle, axis=1)
    result: Array = reach[np.lexsort((reach, pattern.labels))]
    return result


def _featured(shape: Bar, bar: Bar, back: Placements) -> Bar:
    """The shape with the features of a bar that ``back`` carries into its frame, in a settled order."""
    turn, origin = back[:, :3], back[:, 3]

    def way(vector: Vector) -> Vector:
        return _vector(turn @ np.array(vector))

    def place(point: Vector) -> Vector:
        return _vector(turn @ np.array(point) + origin)

    holes = [
        Hole(place(h.centre), way(h.axis), h.diameter, h.thickness, h.slot, way(h.along)) for h in bar.holes
    ]
    notches = [Notch(n.outline, place(n.origin), way(n.u), way(n.v), n.depth) for n in bar.notches]
    pressed = [None if end is None else replace(end, axis=_either_way(way(end.axis))) for end in bar.pressed]
    first, last = pressed[::-1] if turn[0, 0] < 0 else pressed
    return replace(
        shape,
        holes=tuple(sorted(holes, key=lambda h: (h.centre, h.axis, h.diameter))),
        notches=tuple(sorted(notches, key=lambda n: (n.origin, n.u, n.outline))),
        pressed=(first, last),
    )


def _either_way(axis: Vector) -> Vector:
    """The one of an axis and its opposite whose greater component is positive."""
    _, y, z = axis
    return axis if max((y, z), key=abs) > 0 else (0.0, 0.0 - y, 0.0 - z)


def _vector(values: Array) -> Vector:
    """What is nothing but noise is nothing: it would be printed with a sign."""
    x, y, z = (0.0 if abs(v) < NOISE * 1e-3 else float(v) for v in values)
    return x, y, z
