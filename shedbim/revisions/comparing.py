"""The changes from one state of a building to another: pieces are met by id, parts by shape."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.geometry.placements import IDENTITY, Placements, apply, compose
from shedbim.model.bars import Bar
from shedbim.model.marks import Stock, group_parts
from shedbim.model.part_clouds import part_cloud
from shedbim.model.roles import Role
from shedbim.model.shapes import Shape
from shedbim.revisions.changes import Changes, Kind
from shedbim.revisions.snapshot import Snapshot, stock
from shedbim.tolerance import SAME_LENGTH, SAME_PLACE

__all__ = ["SAME_TURN", "compare", "held", "met"]

#: Direction cosines that differ by less are equal: 0.01 mm at the end of a bar of 100 m.
SAME_TURN = 1e-7

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]
Bools = NDArray[np.bool_]


def compare(before: Snapshot, after: Snapshot) -> Changes:
    """Give what became of each piece; the other way round it is ``compare(after, before)``."""
    old, new = met(before.ids, after.ids)
    both = np.flatnonzero((old >= 0) & (new >= 0))
    kinds = np.zeros(len(old), np.uint8)
    kinds[old < 0] = Kind.ADDED
    kinds[new < 0] = Kind.REMOVED
    one, other = old[both], new[both]
    shapes = _Shapes.of(before, after, one, other)
    same = shapes.number_of(before)[one] == shapes.number_of(after, later=True)[other]
    flags = [
        (Kind.MOVED, _moved(before, after, one, other, shapes, same)),
        (Kind.RESECTIONED, _stocks(before)[one] != _stocks(after)[other]),
        (Kind.RESHAPED, ~same & ~_only_restocked(before, after, one, other)),
        (Kind.REMARKED, _marks(before)[one] != _marks(after)[other]),
        (Kind.REJOINED, before.joints[one] != after.joints[other]),
        (Kind.ALTERED, _properties(before)[one] != _properties(after)[other]),
    ]
    for kind, holds in flags:
        kinds[both[holds]] |= np.uint8(kind)
    moved = np.zeros((len(old), 3))
    moved[both] = _middles(after)[other] - _middles(before)[one]
    return Changes(before, after, old, new, kinds, moved)


def met(before: tuple[str, ...], after: tuple[str, ...]) -> tuple[Ints, Ints]:
    """Give the rows before and after of each id: those of ``after`` in order, then what was removed, in order."""
    row = {each: i for i, each in enumerate(before)}
    found = np.array([row.get(each, -1) for each in after], np.int64)
    gone = np.setdiff1d(np.arange(len(before)), found)
    none = np.full(len(gone), -1)
    return np.concatenate([found, gone]), np.concatenate([np.arange(len(after)), none])


@dataclass(frozen=True, eq=False)
class _Shapes:
    """The shapes of both states sorted out: equal ones have one number, whatever their role or steel.

    Attributes:
        number: (p + q,) of each part of the earlier state, then of the later.
        motion: (p + q, 3, 4) placement of the common frame of a number in that of the part.
        shapes: by number.
        first: how many parts the earlier state has.
    """

    number: Ints
    motion: Placements
    shapes: tuple[Shape, ...]
    first: int

    @staticmethod
    def of(before: Snapshot, after: Snapshot, one: Ints, other: Ints) -> _Shapes:
        """Sort out the shapes of two states; ``one`` and ``other`` (m,) are the rows of the pieces in both.

        Most pieces have the very shape they had. Only where they do not, it is asked whether a motion lies between.
        """
        all_shapes = [part.shape for part in (*before.parts, *after.parts)]
        row = {shape: i for i, shape in enumerate(dict.fromkeys(all_shapes))}
        different, first = list(row), len(before.parts)
        which = np.array([row[shape] for shape in all_shapes], np.int64)
        old, new = which[:first][before.part[one]], which[first:][after.part[other]]
        asked = np.unique(np.concatenate([old[old != new], new[old != new]]))
        grouping = group_parts([Stock(Role.COLUMN, different[i], "", "") for i in asked.tolist()])
        number = np.arange(len(different))
        motion = np.tile(IDENTITY, (len(different), 1, 1))
        number[asked] = len(different) + grouping.part_of
        motion[asked] = grouping.motion
        shapes = (*different, *(part.shape for part in grouping.parts))
        return _Shapes(number[which], motion[which], shapes, first)

    def number_of(self, state: Snapshot, *, later: bool = False) -> Ints:
        """Give the number of the shape of each piece (n,)."""
        return np.asarray(self.number[state.part + (self.first if later else 0)])

    def frames(self, state: Snapshot, *, later: bool = False) -> Placements:
        """Give the placement of the common frame of each piece (n, 3, 4)."""
        return compose(state.placement, self.motion[state.part + (self.first if later else 0)])


def _moved(before: Snapshot, after: Snapshot, one: Ints, other: Ints, shapes: _Shapes, same: Bools) -> Bools:
    """Whether each piece lies elsewhere, or otherwise, by more than ``SAME_PLACE``.

    A piece of the same shape is where it was when its solid is, whichever of its symmetries lies between. One of
    another shape is where it was when an end of its axis, or else its middle, is.
    """
    here, there = shapes.frames(before)[one], shapes.frames(after, later=True)[other]
    moved = np.zeros(len(one), bool)
    number = shapes.number_of(before)[one]
    # Most pieces lie where they were to the last bit, or are turned the same way: a cloud is needed for the rest.
    unturned = np.abs(here[:, :, :3] - there[:, :, :3]).max(axis=(1, 2), initial=0.0) < SAME_TURN
    far = np.linalg.norm(here[:, :, 3] - there[:, :, 3], axis=1) > SAME_PLACE
    moved[same & unturned] = far[same & unturned]
    turned = np.flatnonzero(same & ~unturned)
    for each in np.unique(number[turned]).tolist():
        rows = turned[number[turned] == each]
        moved[rows] = _apart(shapes.shapes[each], here[rows], there[rows])
    others = np.flatnonzero(~same)
    stays = held(_ends(before)[one[others]], _ends(after)[other[others]])
    moved[others] = ~stays
    return moved


def _apart(shape: Shape, here: Placements, there: Placements) -> Bools:
    """Whether a shape (m,) placed twice lies in two places, its symmetries allowed for."""
    cloud = part_cloud(shape, 0)
    apart = np.zeros(len(here), bool)
    for block in cloud.blocks:
        points = cloud.points[block]
        a, b = apply(here, points), apply(there, points)
        between = np.linalg.norm(a[:, :, None] - b[:, None], axis=-1)
        apart |= between.min(axis=2).max(axis=1) > SAME_PLACE
    return apart


def held(old: Floats, new: Floats) -> Bools:
    """Give whether any end (m, 2, 3) is where an end was."""
    between = np.linalg.norm(old[:, :, None] - new[:, None], axis=-1)
    return np.asarray(between.min(axis=(1, 2), initial=np.inf) <= SAME_PLACE)


def _ends(state: Snapshot) -> Floats:
    """The ends of the axis of each bar (n, 2, 3), mm; of other things twice their middle."""
    local = np.zeros((len(state.parts), 2, 3))
    for row, part in enumerate(state.parts):
        if isinstance(part.shape, Bar):
            local[row, :, 0] = part.shape.axis
        else:
            local[row] = np.mean(part.shape.box, axis=0)
    return np.asarray(apply(state.placement, local[state.part]))


def _middles(state: Snapshot) -> Floats:
    """The middle of each piece (n, 3), mm."""
    return np.asarray(_ends(state).mean(axis=1))


def _only_restocked(before: Snapshot, after: Snapshot, one: Ints, other: Ints) -> Bools:
    """Whether each piece is another section, plate or bolt, and no longer or shorter than it was."""
    length = [np.array([_reach(part.shape) for part in state.parts])[state.part] for state in (before, after)]
    alike = np.abs(length[0][one] - length[1][other]) <= SAME_LENGTH
    return np.asarray(alike & (_stocks(before)[one] != _stocks(after)[other]))


def _reach(shape: Shape) -> float:
    """The length of a bar, the diagonal of the box of anything else, mm."""
    if isinstance(shape, Bar):
        return shape.length
    low, high = np.array(shape.box)
    return float(np.linalg.norm((high - low)[:2]))


def _stocks(state: Snapshot) -> NDArray[np.str_]:
    return np.array([stock(part.shape) for part in state.parts], str)[state.part]


def _marks(state: Snapshot) -> NDArray[np.str_]:
    return np.array([part.mark for part in state.parts], str)[state.part]


def _properties(state: Snapshot) -> NDArray[np.str_]:
    """What a piece is besides its shape: role, grade, finish."""
    words = [f"{part.role.name}\t{part.grade}\t{part.finish}" for part in state.parts]
    return np.array(words, str)[state.part]
