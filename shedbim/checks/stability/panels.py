"""The bracing of each bay as pin-jointed bars in its plane, by itself: walls from the ground up, slopes side to side.

The building as a whole may stand without a brace, held by the opposite wall or by beams bent sideways. Bracing is not
meant to lean on either; so each wall and each slope of a braced bay is counted alone, its columns and roof steel pinned
at every brace and strut.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.checks.bracing.lines import bay_label, columns_at, columns_of, nearest_slope, slopes_of
from shedbim.checks.finding import Hit
from shedbim.checks.stability.holds import tension_only
from shedbim.checks.stability.plane import figure_of, weakest
from shedbim.checks.stability.skeleton import Skeleton, among
from shedbim.checks.subject import Subject
from shedbim.model.joints import JointKind
from shedbim.model.roles import Role

__all__ = ["one_way_braces", "panels"]

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]
Bools = NDArray[np.bool_]

_STRUTS = frozenset({Role.STRUT, Role.EAVES_STRUT, Role.VALLEY_STRUT})
#: A strut at the end of a slope may stand this far beyond its steel in plan, mm: half a column and the end gap.
_BEYOND = 600.0
#: How roof steel joins a column.
_CORNERS = frozenset({JointKind.RAFTER_COLUMN, JointKind.CHORD_COLUMN, JointKind.ANGLE_COLUMN})
#: A strut or brace this far below the uppermost corner of a column holds it, mm.
_NEAR_CORNER = 1000.0
#: Two braces cross where their middles are nearer to each other than this share of their length.
_CROSSED = 0.15


@dataclass(frozen=True, eq=False)
class _Group:
    """The bracing of one bay in one plane.

    Attributes:
        name, field: as a reader says it, and the field of the description.
        braces, struts: bars of the skeleton.
        columns: of a wall, the two bars that stand at its sides; empty for a slope.
        axes: the two axes of the plane that it is counted in.
    """

    name: str
    field: str
    bay: int
    braces: Ints
    struts: Ints
    columns: Ints
    axes: tuple[int, int]


def panels(subject: Subject, bars: Skeleton) -> Iterator[Hit]:
    """Give the walls and slopes of braced bays whose bracing does not hold by itself."""
    for group in _groups(subject, bars):
        if not group.braces.size:
            yield _none(subject, bars, group)
            continue
        nodes, pairs = _figure(bars, group)
        points = bars.points[nodes][:, list(group.axes)]
        held = bars.supported[nodes] if group.columns.size else None
        figure = figure_of(points, pairs, held)
        if figure.mechanisms:
            first, second = weakest(points, figure)
            x, y, z = bars.points[nodes[[first, second]]].mean(axis=0).tolist()
            m = figure.mechanisms
            yield Hit(
                "unbraced-panel",
                tuple(bars.piece[np.concatenate([group.braces, group.struts])].tolist()),
                (x, y, z),
                f"By itself the bracing of {group.name} does not hold its shape: a diagonal or a strut is missing"
                f"{'' if m == 1 else f' at {m} places'}.",
                f"Complete the bracing of bay {bay_label(subject, group.bay)} ({group.field}, bracing.bays).",
                about=group.name,
            )


def _groups(subject: Subject, bars: Skeleton) -> Iterator[_Group]:
    """All walls and slopes that are to be braced: of every bay with a brace in it.

    Inner column lines are counted where some bay of theirs has a brace.
    """
    middle = _middles(bars)
    bay = np.searchsorted(np.array(subject.shed.grid.y), middle[:, 1]) - 1
    wall, roof = (among(subject, {role})[bars.piece] for role in (Role.WALL_BRACE, Role.ROOF_BRACE))
    strut = among(subject, _STRUTS)[bars.piece]
    line = columns_at(subject, middle[:, 0])
    braced = np.unique(bay[wall | roof]).tolist()
    letters = subject.shed.grid.letters
    outer = {0, len(letters) - 1}
    number = np.full(len(subject.shed.pieces), -1)
    number[bars.piece] = np.arange(len(bars.piece))
    for column in sorted(outer | set(line[wall].tolist())) if wall.any() else ():
        for each in braced:
            here = (line == column) & (bay == each)
            sides = number[list(columns_of(subject, column, [each, each + 1]))]
            yield _Group(
                f"the wall on line {letters[column]}", "bracing.walls", each,
                np.flatnonzero(here & wall), np.flatnonzero(here & strut), sides[sides >= 0], (1, 2),
            )  # fmt: skip
    slopes = slopes_of(subject)
    owner = nearest_slope(slopes, middle[:, 0])
    for k, slope in enumerate(slopes) if roof.any() else ():
        over = (middle[:, 0] > slope.low - _BEYOND) & (middle[:, 0] < slope.high + _BEYOND)
        for each in braced:
            yield _Group(
                f"roof slope {slope.name}", "bracing.roof", each,
                np.flatnonzero(roof & (owner == k) & (bay == each)),
                _highest(middle, np.flatnonzero(strut & over & (bay == each))), np.zeros(0, np.int64), (0, 1),
            )  # fmt: skip


def _middles(bars: Skeleton) -> Floats:
    """The middle of each bar between its outermost nodes (b, 3), mm."""
    first = np.searchsorted(bars.bar, np.arange(len(bars.piece)))
    last = np.searchsorted(bars.bar, np.arange(len(bars.piece)), side="right") - 1
    return np.asarray((bars.points[bars.node[first]] + bars.points[bars.node[last]]) / 2)


def _spots(bars: Skeleton, bar: int) -> Ints:
    """The nodes along a bar."""
    low, high = np.searchsorted(bars.bar, [bar, bar + 1])
    return bars.node[low:high]


def _figure(bars: Skeleton, group: _Group) -> tuple[Ints, Ints]:
    """The nodes of a group (j,), and its bars as pairs of numbers into them (b, 2)."""
    lines = [_spots(bars, bar) for bar in (*group.braces.tolist(), *group.struts.tolist())]
    met = np.unique(np.concatenate(lines))
    if group.columns.size:
        lines += [_column(bars, bar, met) for bar in group.columns.tolist()]
    else:
        y = bars.points[met, 1]
        for side in (y.min(), y.max()):
            frame = met[np.abs(y - side) < 1.0]
            lines.append(frame[np.argsort(bars.points[frame, 0], kind="stable")])
    ends = np.concatenate([np.stack([line[:-1], line[1:]], axis=1) for line in lines])
    ends = np.unique(np.sort(ends, axis=1), axis=0)
    nodes = np.unique(ends)
    return nodes, np.searchsorted(nodes, ends)


def _column(bars: Skeleton, bar: int, met: Ints) -> Ints:
    """The nodes along a column that braces, struts and its base make; its corner too where none of them is near it."""
    along = _spots(bars, bar)
    kept = np.isin(along, met) | bars.supported[along]
    corners = np.isin(along, bars.node[bars.rows_of(_CORNERS)[:, 1]])
    if corners.any():
        corner = int(np.flatnonzero(corners)[bars.points[along[corners], 2].argmax()])
        level = bars.points[along, 2]
        kept[corner] |= bool(np.abs(level[kept] - level[corner]).min(initial=np.inf) > _NEAR_CORNER)
    return np.asarray(along[kept][np.argsort(bars.points[along[kept], 2], kind="stable")])


def _highest(middle: Floats, struts: Ints) -> Ints:
    """Of struts above one another the highest: those of the roof, not those between tiers of a wall."""
    order = struts[np.argsort(-middle[struts, 2], kind="stable")]
    _, first = np.unique((middle[order, 0] / _BEYOND).round(), return_index=True)
    return np.asarray(order[first])


def _none(subject: Subject, bars: Skeleton, group: _Group) -> Hit:
    """A plane of a braced bay without any brace."""
    beside = group.struts if group.struts.size else group.columns
    pieces = tuple(bars.piece[beside].tolist()) or (int(bars.piece[0]),)
    return Hit(
        "unbraced-panel",
        pieces,
        subject.point(pieces[0]),
        f"No diagonal holds {group.name} in a bay that is braced elsewhere.",
        f"Complete the bracing of bay {bay_label(subject, group.bay)} ({group.field}, bracing.bays).",
        about=group.name,
    )


def one_way_braces(subject: Subject) -> Iterator[Hit]:
    """Give the braces that hold in tension alone and have no other across them: they hold one way only."""
    for role, field in ((Role.ROOF_BRACE, "bracing.roof"), (Role.WALL_BRACE, "bracing.walls")):
        thin = np.array([p.role is role and tension_only(p) for p in subject.shed.parts], bool)
        pieces = np.flatnonzero(thin[subject.shed.pieces.part])
        ends = subject.axes[pieces]
        middle, run = ends.mean(axis=1), ends[:, 1] - ends[:, 0]
        length = np.linalg.norm(run, axis=1)
        for piece in pieces[~_paired(middle, run / length[:, None], length)].tolist():
            yield Hit(
                "one-way-brace",
                (piece,),
                subject.point(piece),
                f"This {role.word} holds in tension alone and has no other across it: what it braces can sway one way.",
                f"Use crossed braces, or a hollow section ({field}.pattern, {field}.section).",
            )


def _paired(middle: Floats, along: Floats, length: Floats) -> Bools:
    """Whether each brace (n,) has another across it."""
    from scipy.spatial import cKDTree  # noqa: PLC0415 - heavy, and only checks need it

    found = np.zeros(len(middle), bool)
    if len(middle):
        pairs = cKDTree(middle).query_pairs(_CROSSED * float(length.max()), output_type="ndarray")
        first, second = pairs.T
        near = np.linalg.norm(middle[first] - middle[second], axis=1) < _CROSSED * length[first]
        across = np.abs(np.einsum("ij,ij->i", along[first], along[second])) < 0.99
        found[pairs[near & across].ravel()] = True
    return found
