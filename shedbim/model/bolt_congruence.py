"""Which bolt groups are the same: equal fasteners, at points that a turn about their axis brings together."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from shedbim.fasteners.fastener import Fastener
from shedbim.geometry.placements import Placements, compose, rotation, translation
from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.congruence import ranks
from shedbim.model.likeness import Gathering, Likeness
from shedbim.model.patterns import Pattern, best_fit, far_off, lead, signatures, turns_onto
from shedbim.tolerance import NOISE

__all__ = ["bolt_likeness", "bolt_symmetries"]

Array = NDArray[np.float64]
Ints = NDArray[np.int64]


def bolt_likeness(groups: Sequence[BoltGroup], classes: Sequence[int]) -> Likeness:
    """Sort bolt groups into shapes; those of different ``classes`` are different.

    How the hexagons of a group stand is of no account: a shape's frame lies in a group's so that axes agree.
    """
    same = _fasteners([group.fastener for group in groups])
    lots: dict[tuple[int, int, int], list[int]] = defaultdict(list)
    for i, group in enumerate(groups):
        lots[(int(classes[i]), int(same[i]), group.count)].append(i)
    found = Gathering(len(groups))
    for (_, fastener, _), rows in sorted(lots.items()):
        lot = [groups[i] for i in rows]
        marks, order, leader, motion = _sorted_out(lot)
        found.add(rows, order, leader, lot, [(fastener, *each) for each in marks])
        found.motion[rows] = motion
    return found.done()


def _sorted_out(lot: Sequence[BoltGroup]) -> tuple[list[tuple[int, ...]], list[int], Ints, Placements]:
    """Signatures, order, leaders and motions of bolt groups with as many equal fasteners."""
    seen = [_centred(group) for group in lot]
    marks = signatures([_sides(each) for each, _ in seen], seen[0][0].labels)
    # Equal but for noise: the one with the least numbers leads, in whatever order they came.
    order = sorted(range(len(lot)), key=lambda i: (marks[i], lot[i].points, lot[i].fastener.grip))

    def fit(i: int, j: int) -> Placements | None:
        return best_fit(_turns(seen[i][0], seen[j][0]), seen[i][0], seen[j][0])

    spread = np.sort([np.linalg.norm(each.points, axis=1) for each, _ in seen], axis=1)
    leader, turn = lead(order, spread, fit)
    middle = np.array([each for _, each in seen])
    return marks, order, leader, compose(compose(translation(middle), turn), translation(-middle[leader]))


def bolt_symmetries(group: BoltGroup) -> tuple[Placements, bool]:
    """Give the turns (g, 3, 4) that carry the points of a group onto themselves, and whether any turn does."""
    pattern, middle = _centred(group)
    if np.linalg.norm(pattern.points, axis=1).max() < NOISE:
        return rotation((0.0, 0.0, 1.0), 0.0)[None], True
    kept: list[Placements] = []
    for turn in _turns(pattern, pattern):
        if best_fit(turn[None], pattern, pattern) is None:
            continue
        if all(np.abs(turn[:, :3] - other[:, :3]).max() > 1e-3 for other in kept):
            kept.append(turn)
    return compose(compose(translation(middle), np.array(kept)), translation(-middle)), False


def _centred(group: BoltGroup) -> tuple[Pattern, Array]:
    """The points of a group about their mean, and that mean (3,), mm."""
    points = np.column_stack([np.array(group.points), np.zeros(group.count)])
    middle: Array = points.mean(axis=0)
    return Pattern(points - middle, np.zeros(group.count, np.int64)), middle


def _turns(one: Pattern, other: Pattern) -> Placements:
    """The turns about z (v, 3, 4) that may bring one pattern onto another."""
    angles = turns_onto(one.points[:, :2], other.points[:, :2], one.labels)
    return np.array([rotation((0.0, 0.0, 1.0), float(angle)) for angle in angles])


def _sides(pattern: Pattern) -> Array:
    """The points (v, m, 3) as seen with each far one on the x axis by turns."""
    plane = pattern.points[:, :2] @ np.array([1, 1j])
    far = far_off(plane)
    levers = plane[far] if far.any() else np.ones(1, complex)
    turned = plane * (levers.conj() / np.abs(levers))[:, None]
    return np.stack([turned.real, turned.imag, np.zeros(turned.shape)], axis=2)


def _fasteners(items: Sequence[Fastener]) -> Ints:
    """The place of each fastener among all; equal ones, and those equal but for noise in the grip, share one."""
    named: dict[tuple[object, ...], list[int]] = defaultdict(list)
    for i, f in enumerate(items):
        forms = tuple((d.form, d.size, d.bore) for d in f.stack)
        named[(f.kind, f.diameter, f.length, f.grade, f.washers, f.nuts, forms)].append(i)
    place = np.empty(len(items), np.int64)
    count = 0
    for _, rows in sorted(named.items(), key=lambda item: item[0]):
        stacks = [[z for disc in items[i].stack for z in (disc.start, disc.end)] for i in rows]
        figures = np.column_stack([[items[i].grip for i in rows], stacks])
        columns = np.column_stack([ranks(column) for column in figures.T])
        _, number = np.unique(columns, axis=0, return_inverse=True)
        place[rows] = count + number.reshape(-1)
        count = int(place[rows].max()) + 1
    return place
