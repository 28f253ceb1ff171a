"""The bars of a shed as lines between nodes: what the frame model, the trusses and the panels are counted on.

node   a place where axes meet, snapped to the axis of the piece that carries; joints nearer to one another along
       a bar than it is deep are one node, but for cleats
spot   a bar at one of its nodes
"""

from __future__ import annotations

from collections.abc import Collection
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from shedbim.checks.stability.holds import (
    BASES,
    BEAMS,
    CLEATS,
    LINKS,
    PASSED_OVER,
    SLIDES,
    tension_only,
)
from shedbim.checks.subject import Subject
from shedbim.model.joints import At, JointKind
from shedbim.model.roles import Role

__all__ = ["TOGETHER", "Skeleton", "among", "lots", "skeleton"]

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]
Bools = NDArray[np.bool_]

#: Joints of a bar no farther than this along it are one node whatever they are, mm.
TOGETHER = 1.0
#: Axes no farther than this from a numbered line belong to its frame, mm.
_BESIDE = 300.0


@dataclass(frozen=True, eq=False)
class Skeleton:
    """Bars as lines through their nodes.

    Attributes:
        piece: (b,) the piece of each bar.
        points: (n, 3) where the nodes are, mm.
        bar, node: (s,) of each spot, in order of the bars and along each bar; a bar has one spot at a node.
        supported: (n,) whether a node is held by a base.
        at_joint: (r, 3) joint, spot and column of each bar that takes part in a joint of the model.
        kind: names of the kinds of all joints (j,).
        sliding: (k, 2) nodes of a post's head and of what holds it sideways alone.
        loose: pieces with one joint alone and a pin there, or none besides pins to such bars; not among the bars.
    """

    piece: Ints
    points: Floats
    bar: Ints
    node: Ints
    supported: Bools
    at_joint: Ints
    kind: NDArray[np.str_]
    sliding: Ints
    loose: tuple[int, ...]

    @cached_property
    def stretches(self) -> Ints:
        """The spots at either end of each stretch of a bar between two neighbouring nodes (e, 2)."""
        first = np.flatnonzero(self.bar[1:] == self.bar[:-1])
        return np.stack([first, first + 1], axis=1)

    def rows_of(self, kinds: Collection[JointKind]) -> Ints:
        """Give the rows of ``at_joint`` whose joint is of one of some kinds."""
        return self.at_joint[np.isin(self.kind[self.at_joint[:, 0]], [kind.name for kind in kinds])]


def among(subject: Subject, roles: Collection[Role]) -> Bools:
    """Give whether each piece (n,) has one of some roles."""
    wanted = np.array([part.role in roles for part in subject.shed.parts], bool)
    return np.asarray(wanted[subject.shed.pieces.part])


def lots(count: int, pairs: Ints) -> Ints:
    """Give the lot (count,) of each of ``count`` things that pairs (e, 2) join; numbered from 0."""
    from scipy.sparse import coo_array  # noqa: PLC0415 - heavy, and only checks need it
    from scipy.sparse.csgraph import connected_components  # noqa: PLC0415 - as above

    graph = coo_array((np.ones(len(pairs), np.int8), (pairs[:, 0], pairs[:, 1])), shape=(count, count))
    return np.asarray(connected_components(graph, directed=False)[1], np.int64)


def skeleton(subject: Subject) -> Skeleton:
    """Give the bars and nodes of a shed.

    Of two braces that cross and hold in tension alone the second is left out: one of them is always slack.
    What no chain of bars joins to a base is left out too: it is held by nothing, which another check says.
    """
    kind = np.repeat(
        [run.kind.name for run in subject.shed.joints], [len(run.pieces) for run in subject.shed.joints]
    )
    kind = np.asarray(kind, np.str_)
    joint, piece, at, column = _taking_part(subject, kind)
    loose: list[int] = []
    links = among(subject, LINKS)
    while True:
        spots = _spots(subject, kind, joint, piece, at, column)
        count = np.bincount(spots.bar, minlength=len(spots.piece))
        gone = spots.piece[(count < 2) & links[spots.piece]]
        if not gone.size:
            break
        loose += gone.tolist()
        stays = ~np.isin(piece, gone)
        joint, piece, at, column = joint[stays], piece[stays], at[stays], column[stays]
    return _grounded(spots, tuple(sorted(loose)))


def _taking_part(subject: Subject, kind: NDArray[np.str_]) -> tuple[Ints, Ints, NDArray[np.int8], Ints]:
    """Joint, piece, place and column of the bars in the joints of the model."""
    entries = subject.entries
    passed = np.isin(kind, [each.name for each in PASSED_OVER])
    slack: list[int] = []
    number = 0
    for run in subject.shed.joints:
        rows = np.arange(number, number + len(run.pieces))
        number += len(run.pieces)
        if run.kind is JointKind.BRACE_CROSSING and (run.at == At.ALONG).all():
            passed[rows] = True  # both run on: the bolt between them holds neither
            slack += [
                second
                for first, second in run.pieces[:, :2].tolist()
                if tension_only(subject.shed.parts[subject.shed.pieces.part[first]])
            ]
    keep = among(subject, BEAMS | LINKS)[entries.piece] & (entries.at <= At.ALONG)
    keep &= ~passed[entries.joint] & ~np.isin(entries.piece, slack)
    return entries.joint[keep], entries.piece[keep], entries.at[keep], entries.column[keep]


def _spots(
    subject: Subject,
    kind: NDArray[np.str_],
    joint: Ints,
    piece: Ints,
    at: NDArray[np.int8],
    column: Ints,
) -> Skeleton:
    """The skeleton of bars that take part in joints."""
    bars, bar = np.unique(piece, return_inverse=True)
    ends = subject.axes[piece]
    run = ends[:, 1] - ends[:, 0]
    length = np.linalg.norm(run, axis=1)
    along = np.einsum("ij,ij->i", subject.joint_points[joint] - ends[:, 0], run) / length
    upright = among(subject, {Role.COLUMN})[piece]
    # What stands beyond the end of a bar in the roof stands on its end; the tops of columns need not be level.
    within = np.where(upright, along, np.clip(along, 0.0, length))
    place = np.where(at == At.START, 0.0, np.where(at == At.END, length, within))
    # A joint is a node, but for a post that slides in it: that has a node of its own.
    slides = np.isin(kind[joint], [each.name for each in SLIDES]) & (column > 0)
    meets = joint.copy()
    meets[slides] = len(kind) + np.arange(slides.sum())
    lot = lots(len(kind) + int(slides.sum()), _near(subject, kind[joint], bars, bar, place, meets))
    _, node = np.unique(lot[meets], return_inverse=True)
    carrier = joint[slides]
    by_joint = np.full(len(kind), -1)
    by_joint[joint[~slides]] = node[~slides]
    sliding = np.stack([node[slides], by_joint[carrier]], axis=1)

    axis_points = ends[:, 0] + run * (place / length)[:, None]
    ranked = np.lexsort((joint, column, ~upright, _rank(kind)[joint], node))
    _, chief = np.unique(node[ranked], return_index=True)
    points = _in_frames(subject, axis_points[ranked[chief]])

    points = _level(subject, points, bars[bar], node)
    # Snapping may have moved a node past another: what counts from here is where nodes are.
    order = np.lexsort((np.einsum("ij,ij->i", points[node] - ends[:, 0], run), bar))
    pair = bar[order] * np.int64(len(points)) + node[order]
    _, first, inverse = np.unique(pair, return_index=True, return_inverse=True)
    rank = np.argsort(np.argsort(first))  # spots keep the order along their bars
    kept = np.sort(first)
    spot = np.empty(len(order), np.int64)
    spot[order] = rank[inverse]
    supported = np.zeros(len(points), bool)
    supported[node[np.isin(kind[joint], [each.name for each in BASES])]] = True
    return Skeleton(
        piece=bars,
        points=points,
        bar=bar[order][kept],
        node=node[order][kept],
        supported=supported,
        at_joint=np.stack([joint, spot, column], axis=1),
        kind=kind,
        sliding=sliding[sliding[:, 1] >= 0],
        loose=(),
    )


def _in_frames(subject: Subject, points: Floats) -> Floats:
    """Points (n, 3) with those near a numbered line in its plane: posts stand beside the axes of columns."""
    lines = np.array(subject.shed.grid.y)
    nearest = lines[np.abs(points[:, 1:2] - lines).argmin(axis=1)]
    beside = np.abs(points[:, 1] - nearest) <= _BESIDE
    return np.column_stack([points[:, 0], np.where(beside, nearest, points[:, 1]), points[:, 2]])


def _level(subject: Subject, points: Floats, piece: Ints, node: Ints) -> Floats:
    """Points (n, 3) with nodes of columns that struts, rails or purlins join at one level.

    Struts of neighbouring bays may lie a little higher or lower; columns that rock together would strain them.
    """
    on_column = np.zeros(len(points), bool)
    on_column[node[among(subject, {Role.COLUMN})[piece]]] = True
    rows = np.flatnonzero(on_column[node] & among(subject, LINKS)[piece])
    rows = rows[np.argsort(piece[rows], kind="stable")]
    two = np.flatnonzero(np.diff(piece[rows]) == 0)
    pairs = np.stack([node[rows[two]], node[rows[two + 1]]], axis=1)
    lies_level = np.abs(np.diff(points[pairs][:, :, 2], axis=1)[:, 0]) <= _BESIDE
    lot = lots(len(points), pairs[lies_level])
    mean = np.bincount(lot, points[:, 2]) / np.bincount(lot)
    return np.column_stack([points[:, :2], np.where(on_column, mean[lot], points[:, 2])])


def _rank(kind: NDArray[np.str_]) -> Ints:
    """How well each joint (j,) tells where its node is: bases, then struts, which lie level from frame to frame.

    Were the ends of one strut at unequal levels, columns that rock together would strain it.
    """
    rank = np.full(len(kind), 3)
    for number, kinds in enumerate((BASES, {JointKind.STRUT_END}, {JointKind.BRACE_GUSSET})):
        rank[np.isin(kind, [each.name for each in kinds])] = number
    return rank


def _near(
    subject: Subject, kind: NDArray[np.str_], bars: Ints, bar: Ints, place: Floats, meets: Ints
) -> Ints:
    """Pairs of what is one node because it is near along a bar (p, 2).

    Where a roof brace, a strut and a chord meet a column their axes miss one another by less than it is deep. Were
    they nodes of their own, the chord bent sideways between them would seem to hold the building up.
    """
    depth = np.zeros(len(subject.shed.parts))
    for part in np.unique(subject.shed.pieces.part[bars]).tolist():
        depth[part] = subject.shed.parts[part].bar.section.height
    deep = np.maximum(depth[subject.shed.pieces.part[bars]], TOGETHER)
    pairs = []
    for chosen, reach in (
        (np.flatnonzero(~np.isin(kind, [each.name for each in CLEATS])), deep),
        (np.arange(len(bar)), np.full(len(bars), TOGETHER)),
    ):
        rows = chosen[np.lexsort((place[chosen], bar[chosen]))]
        near = (np.diff(place[rows]) <= reach[bar[rows[1:]]]) & (np.diff(bar[rows]) == 0)
        pairs.append(np.stack([meets[rows[:-1][near]], meets[rows[1:][near]]], axis=1))
    return np.concatenate(pairs)


def _grounded(spots: Skeleton, loose: tuple[int, ...]) -> Skeleton:
    """The part of a skeleton that hangs together with a base."""
    count, bars = len(spots.points), len(spots.piece)
    pairs = np.stack([spots.node, count + spots.bar], axis=1)
    lot = lots(count + bars, np.concatenate([pairs, spots.sliding]))
    held = np.isin(lot, np.unique(lot[:count][spots.supported]))
    keep = held[count + spots.bar]
    bar_number, node_number = np.cumsum(held[count:]) - 1, np.cumsum(held[:count]) - 1
    spot_number = np.cumsum(keep) - 1
    at_joint = spots.at_joint[keep[spots.at_joint[:, 1]]].copy()
    at_joint[:, 1] = spot_number[at_joint[:, 1]]
    sliding = spots.sliding[held[:count][spots.sliding].all(axis=1)]
    return Skeleton(
        piece=spots.piece[held[count:]],
        points=spots.points[held[:count]],
        bar=bar_number[spots.bar[keep]],
        node=node_number[spots.node[keep]],
        supported=spots.supported[held[:count]],
        at_joint=at_joint,
        kind=spots.kind,
        sliding=node_number[sliding],
        loose=loose,
    )
