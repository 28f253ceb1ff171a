"""Joints whose pieces do not reach one another: no chain of contacts goes from one to the other."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

from shedbim.checks.clash.boxes import boxes_around
from shedbim.checks.clash.configurations import Pair, measured
from shedbim.checks.clash.joined import linked
from shedbim.checks.clash.measures import SLACK
from shedbim.checks.clash.meetings import Meetings
from shedbim.checks.clash.role_fields import fields_of
from shedbim.checks.finding import Hit
from shedbim.model.joints import JointKind

__all__ = ["loose_joints"]

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]
Bools = NDArray[np.bool_]

#: How far is looked for the true gap of a joint that does not reach, mm; beyond it that of the boxes is told.
_FAR = 500.0


def loose_joints(found: Meetings) -> Iterator[Hit]:
    """Give a hit for each joint that does not hang together.

    Pieces hang together where they touch, or nearly: bolts by head and nut, welds over their root gap. A chain may
    lead over one piece that the joint does not name, such as the cap plate that a cleat stands on. Joints that say
    nothing of how they are fastened are left out, and so are free ends.
    """
    subject, entries = found.subject, found.subject.entries
    limit, source = subject.criteria.limit("joint_gap")
    touch = found.pairs.gap <= limit + SLACK
    pair, a, b = found.shared
    held = touch[pair]
    label = linked(len(entries.piece), a[held], b[held])
    loose = _loose(label, entries.joint, _fastened(found))
    if loose.any():
        label, loose = _over_one_more(found, touch, label, loose)
    rows = np.flatnonzero(loose)
    if not len(rows):
        return
    joints, first = np.unique(entries.joint[rows], return_index=True)
    carriers = np.searchsorted(entries.joint, joints)
    gaps = _gaps(found, label, joints, rows[first])
    for joint, row, carrier, gap in zip(
        joints.tolist(), rows[first].tolist(), carriers.tolist(), gaps, strict=True
    ):
        i, j = int(entries.piece[row]), int(entries.piece[carrier])
        one, other = subject.role[i], subject.role[j]
        x, y, z = subject.joint_points[joint].tolist()
        yield Hit(
            "joint-without-contact",
            (i, j),
            (x, y, z),
            f"The {one.word} is said to be joined to the {other.word} ({subject.joint_kinds[joint].word}), but no "
            f"contact, bolt or weld reaches it: a gap of {{value}}, {{limit}} at most.",
            f"Bring the two together: see {fields_of(one, other)}.",
            float(gap),
            limit,
            "mm",
            source,
        )


def _fastened(found: Meetings) -> Bools:
    """Whether each joint says how it is fastened."""
    runs = found.subject.shed.joints
    said = [
        run.kind is not JointKind.FREE and bool(run.fittings.size or run.welds or run.clamps) for run in runs
    ]
    return np.repeat(np.array(said, bool), [len(run.pieces) for run in runs])


def _loose(label: Ints, joint: Ints, wanted: Bools) -> Bools:
    """Whether each entry does not hang together with the first of its joint."""
    first = np.searchsorted(joint, joint)
    return np.asarray((label != label[first]) & wanted[joint])


def _over_one_more(found: Meetings, touch: Bools, label: Ints, loose: Bools) -> tuple[Ints, Bools]:
    """Labels and what is still loose when chains may lead over one piece more."""
    entries, n = found.subject.entries, len(found.subject.shed.pieces)
    wanted = np.zeros(len(found.subject.joint_kinds), bool)
    wanted[entries.joint[loose]] = True
    rows = np.flatnonzero(wanted[entries.joint])
    a, b = (np.concatenate(each) for each in _both_ways(found, touch))
    order = np.argsort(a, kind="stable")
    a, b = a[order], b[order]
    start, stop = (np.searchsorted(a, entries.piece[rows], side=side) for side in ("left", "right"))
    number = stop - start
    mine = np.repeat(rows, number)
    within = np.arange(len(mine)) - np.repeat(np.cumsum(number) - number, number)
    beside = b[np.repeat(start, number) + within]
    _, between = np.unique(entries.joint[mine] * n + beside, return_inverse=True)
    nodes = len(label) + (int(between.max()) + 1 if len(between) else 0)
    everyone = np.arange(len(label))
    ends = np.concatenate([everyone, mine]), np.concatenate([label, len(label) + between.ravel()])
    after = linked(nodes, *ends)[: len(label)]
    return after, _loose(after, entries.joint, wanted)


def _both_ways(found: Meetings, touch: Bools) -> tuple[tuple[Ints, Ints], tuple[Ints, Ints]]:
    """Who touches whom, each pair in both directions."""
    first, second = found.pairs.first[touch], found.pairs.second[touch]
    return (first, second), (second, first)


def _gaps(found: Meetings, label: Ints, joints: Ints, rows: Ints) -> Floats:
    """The gap (j,) between what hangs together with an entry of each joint and the rest of that joint, mm."""
    entries = found.subject.entries
    begin, end = (np.searchsorted(entries.joint, joints, side=side) for side in ("left", "right"))
    number = end - begin
    which = np.repeat(np.arange(len(joints)), number**2)
    within = np.arange(len(which)) - np.repeat(np.cumsum(number**2) - number**2, number**2)
    one, other = begin[which] + within // number[which], begin[which] + within % number[which]
    across = (label[one] == label[rows[which]]) & (label[other] != label[rows[which]])
    which, i, j = which[across], entries.piece[one[across]], entries.piece[other[across]]
    placed = found.placed
    reach = np.full((len(placed.shapes), len(placed.shapes)), _FAR)

    def gap(pair: Pair) -> tuple[float]:
        return (pair.first.min_gap(pair.second, pair.reach),)

    gaps = measured(placed, i, j, reach, gap, (np.inf,))[:, 0]
    low, high = boxes_around(placed.boxes[placed.shape], placed.placement)
    between = np.maximum(np.maximum(low[i] - high[j], low[j] - high[i]), 0.0)
    gaps = np.where(gaps < _FAR, gaps, np.maximum(np.linalg.norm(between, axis=1), _FAR))
    least = np.full(len(joints), np.inf)
    np.minimum.at(least, which, gaps)
    return least
