"""From placed pieces and their meetings to joints as the kinds see them, one for each distinct configuration.

Glossary:
    sight   what a joint sees of one member, as numbers: class, end, frame, distances to its ends, cuts
    class   role, section, grade and finish of a bar
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.expand.joints.contract import FAR, NEAR, Joint, Met
from shedbim.expand.placing import Placed, RawJoints, as_bar
from shedbim.geometry.mixing import mixed
from shedbim.geometry.placements import Placements
from shedbim.geometry.rows import distinct_rows
from shedbim.model.bars import SQUARE, EndCut
from shedbim.model.joints import At, JointKind

__all__ = ["Seen", "see"]

Integers = NDArray[np.int64]
Floats = NDArray[np.float64]

#: Lengths nearer than 1/1000 mm and axes nearer than 1/100,000 are one configuration. Two that fall on either
#: side of such a boundary are worked out twice, to the same result.
_LENGTHS, _AXES = 1e3, 1e5


@dataclass(frozen=True, eq=False)
class Seen:
    """All joints of one configuration.

    Attributes:
        joint: what they see, or the kind alone where there is nothing to make.
        pieces, at, points, eccentricity: as of ``RawJoints``.
        along: (m, k) float, x of each member's frame origin in the bar's own frame, mm.
    """

    joint: Joint
    pieces: Integers
    at: NDArray[np.int8]
    points: Floats
    eccentricity: Floats
    along: Floats


class _Bars:
    """What joints see of the stock, as columns."""

    def __init__(self, placed: Placed) -> None:
        self.placed = placed
        self.axis = np.array([as_bar(each).axis for each in placed.stock]).reshape(-1, 2)
        classes: dict[object, int] = {}
        cuts: dict[EndCut, int] = {SQUARE: 0}
        names, ends = [], []
        for each in placed.stock:
            bar = as_bar(each)
            thing = (each.role, bar.section, each.grade, each.finish)
            names.append(classes.setdefault(thing, len(classes)))
            ends.append([cuts.setdefault(cut, len(cuts)) for cut in (bar.start, bar.end)])
        self.kind = np.array(names, np.int64)
        self.cuts = np.array(ends, np.int64).reshape(-1, 2)

    def sights(
        self, pieces: Integers, at: NDArray[np.int8], points: Floats
    ) -> tuple[Integers, Floats, Floats]:
        """Give for members (m,) at work points (m, 3) their sights (m, 18), frames (m, 3, 4) and x (m,)."""
        bars = self.placed.bar[pieces]
        frame = self.placed.placement[pieces].copy()
        first, last = self.axis[bars].T
        along = np.einsum("ij,ij->i", points - frame[:, :, 3], frame[:, :, 0])
        along = np.where(at == At.START, first, np.where(at == At.END, last, along))
        frame[:, :, 3] += frame[:, :, 0] * along[:, None] - points
        reach = np.minimum(np.column_stack([along - first, last - along]), FAR)
        rows = np.column_stack([
            self.kind[bars],
            at,
            np.where(reach < FAR, self.cuts[bars], 0),
            np.rint(reach * _LENGTHS),
            np.rint(frame[:, :, :3].reshape(-1, 9) * _AXES),
            np.rint(frame[:, :, 3] * _LENGTHS),
        ]).astype(np.int64)  # fmt: skip
        return rows, frame, along

    def met(self, piece: int, at: int, frame: Placements, along: float) -> Met:
        """One member with what its sight gave: its frame (3, 4) and x of that frame's origin in the bar's own."""
        stock = self.placed.stock[int(self.placed.bar[piece])]
        bar = as_bar(stock)
        first, last = bar.axis
        to_start, to_end = (min(float(d), FAR) for d in (along - first, last - along))
        return Met(
            stock.role,
            bar.section,
            stock.grade,
            stock.finish,
            At(at),
            frame,
            to_start,
            to_end,
            bar.start if to_start < FAR else SQUARE,
            bar.end if to_end < FAR else SQUARE,
        )


@dataclass(frozen=True, eq=False)
class _Meeting:
    """Every (piece, other member of one of its joints) as rows sorted by piece."""

    piece: Integers
    joint: Integers
    member: Integers
    at: NDArray[np.int8]
    point: Floats


def see(
    placed: Placed,
    made: frozenset[JointKind],
    watchful: frozenset[JointKind],
    all_round: frozenset[JointKind] = frozenset(),
) -> list[Seen]:
    """Give all joints by configuration.

    Args:
        placed: the pieces and their meetings.
        made: the kinds that have anything to make; others are one configuration.
        watchful: the kinds that are told of the members near by, fastened to their carrier.
        all_round: those of them that are told of what is fastened to their other members too.
    """
    bars = _Bars(placed)
    beside = _meetings(placed.joints) if any(raw.kind in watchful for raw in placed.joints) else None
    found: list[Seen] = []
    number = 0
    for raw in placed.joints:
        m, k = raw.pieces.shape
        seen = [bars.sights(raw.pieces[:, j], raw.at[:, j], raw.points) for j in range(k)]
        along = np.column_stack([x for _, _, x in seen])
        near: Callable[[int], tuple[Met, ...]] | None = None
        if raw.kind in made:
            rows = np.hstack([sight for sight, _, _ in seen])
            if beside is not None and raw.kind in watchful:
                looked_at = k if raw.kind in all_round else 1
                marks, near = _neighbours(bars, beside, raw, number, looked_at)
                rows = np.column_stack([rows, marks])
            first, kind = distinct_rows(rows)
        else:
            first, kind = np.zeros(1, np.int64), np.zeros(m, np.int64)
        for which, row in enumerate(first.tolist()):
            same = np.flatnonzero(kind == which)
            joint = Joint(raw.kind, ())
            if raw.kind in made:
                members = tuple(
                    bars.met(int(piece), int(at), frame[row], float(x[row]))
                    for piece, at, (_, frame, x) in zip(raw.pieces[row], raw.at[row], seen, strict=True)
                )
                joint = Joint(raw.kind, members, () if near is None else near(row))
            found.append(
                Seen(
                    joint,
                    raw.pieces[same],
                    raw.at[same],
                    raw.points[same],
                    raw.eccentricity[same],
                    along[same],
                )
            )
        number += m
    return found


def _meetings(joints: Sequence[RawJoints]) -> _Meeting:
    """Give for each piece the other members of its joints."""
    columns: list[tuple[Integers, Integers, Integers, NDArray[np.int8], Floats]] = []
    number = 0
    for raw in joints:
        m, k = raw.pieces.shape
        ids = number + np.arange(m)
        for i in range(k):
            for j in range(k):
                if i != j:
                    columns.append((raw.pieces[:, i], ids, raw.pieces[:, j], raw.at[:, j], raw.points))
        number += m
    piece, joint, member, at, point = (np.concatenate(each) for each in zip(*columns, strict=True))
    order = np.argsort(piece, kind="stable")
    return _Meeting(piece[order], joint[order], member[order], at[order], point[order])


def _neighbours(
    bars: _Bars, beside: _Meeting, raw: RawJoints, number: int, looked_at: int
) -> tuple[Integers, Callable[[int], tuple[Met, ...]]]:
    """Give for each of m joints one number that tells their neighbours apart (m,), and the neighbours of a row.

    ``number`` is that of the first joint; the first ``looked_at`` members are asked what is fastened to them.
    """
    m = len(raw.pieces)
    asked = raw.pieces[:, :looked_at].reshape(-1)
    start, stop = (np.searchsorted(beside.piece, asked, side) for side in ("left", "right"))
    counts = stop - start
    joint = np.repeat(np.arange(m).repeat(looked_at), counts)
    rows = np.arange(counts.sum()) - np.repeat(np.cumsum(counts) - counts, counts) + np.repeat(start, counts)
    near = np.linalg.norm(beside.point[rows] - raw.points[joint], axis=1) < NEAR
    near &= beside.joint[rows] != number + joint
    near &= (beside.member[rows][:, None] != raw.pieces[joint]).all(axis=1)
    joint, rows = joint[near], rows[near]
    sights, frames, along = bars.sights(beside.member[rows], beside.at[rows], raw.points[joint])
    numbers = mixed(sights)
    # The same neighbours in another order are the same: sort them within their joint.
    order = np.lexsort((numbers, joint))
    joint, rows = joint[order], rows[order]
    totals = np.zeros(m, np.uint64)
    np.add.at(totals, joint, numbers[order])
    edges = np.searchsorted(joint, np.arange(m + 1))

    def of_row(row: int) -> tuple[Met, ...]:
        """The neighbours of one joint."""
        return tuple(
            bars.met(
                int(beside.member[rows[i]]), int(beside.at[rows[i]]), frames[order[i]], float(along[order[i]])
            )
            for i in range(edges[row], edges[row + 1])
        )

    return totals.view(np.int64), of_row
