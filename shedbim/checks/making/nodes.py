"""How webs meet the chords of trusses: at what angle, and how far off the chord's axis."""

from __future__ import annotations

from collections.abc import Iterator
from itertools import combinations

import numpy as np
from numpy.typing import NDArray

from shedbim.checks.finding import Hit, Point
from shedbim.checks.subject import Subject
from shedbim.model.joints import At, JointKind, JointRun
from shedbim.model.roles import Role

__all__ = ["nodes"]

Floats = NDArray[np.float64]

_CHORDS = (Role.TOP_CHORD, Role.BOTTOM_CHORD)
_WEBS = (Role.DIAGONAL, Role.POST)
#: Webs that are parallel within this meet nowhere near, rad.
_PARALLEL = 0.02


def nodes(subject: Subject) -> Iterator[Hit]:
    """Give the webs that are too flat to their chord, and the nodes whose webs meet too far from its axis."""
    for run in subject.shed.joints:
        if not len(run.pieces) or subject.role[run.pieces[0, 0]] not in _CHORDS:
            continue
        webs = [
            column
            for column in range(1, run.pieces.shape[1])
            if subject.role[run.pieces[0, column]] in _WEBS and run.at[0, column] != At.ALONG
        ]
        for column in webs:
            yield from _flat(subject, run, column)
        if run.kind is JointKind.NODE and len(webs) > 1:
            yield from _eccentric(subject, run, webs)


def _directions(subject: Subject, run: JointRun, column: int) -> tuple[Floats, Floats]:
    """Where the axis of a member passes (m, 3), and its direction away from the joint (m, 3)."""
    ends = subject.axes[run.pieces[:, column]]
    rows = np.arange(len(ends))
    near = np.where(run.at[:, column] == At.END, 1, 0)
    start = ends[rows, near]
    away = ends[rows, 1 - near] - start
    return start, away / np.linalg.norm(away, axis=1, keepdims=True)


def _flat(subject: Subject, run: JointRun, column: int) -> Iterator[Hit]:
    limit, source = subject.criteria.limit("web_angle_least")
    _, chord = _directions(subject, run, 0)
    _, web = _directions(subject, run, column)
    angle = np.arccos(np.clip(np.abs((chord * web).sum(axis=1)), 0.0, 1.0))
    for row in np.flatnonzero(angle < limit - 1e-9).tolist():
        yield Hit(
            "web-too-flat",
            (int(run.pieces[row, column]), int(run.pieces[row, 0])),
            _point(run, row),
            "A web lies at {value} to its chord (at least {limit}): its weld has no room in the acute corner, and "
            "rules for such joints do not hold.",
            "Use more panels, a deeper truss or another pattern: frames.roof.panels, frames.roof.depth, "
            "frames.roof.pattern.",
            float(angle[row]),
            limit,
            "deg",
            source,
            about=f"webs at the {subject.role[run.pieces[row, 0]].word}",
        )


def _eccentric(subject: Subject, run: JointRun, webs: list[int]) -> Iterator[Hit]:
    """Where the axes of two webs cross, seen from the axis of the chord; outwards is positive."""
    low, low_source = subject.criteria.limit("node_eccentricity_least")
    high, high_source = subject.criteria.limit("node_eccentricity_greatest")
    origin, along = _directions(subject, run, 0)
    lines = [_directions(subject, run, column) for column in webs]
    inwards = sum((away for _, away in lines), np.zeros_like(along))
    inwards -= (inwards * along).sum(axis=1, keepdims=True) * along
    inwards /= np.linalg.norm(inwards, axis=1, keepdims=True)
    depth = np.array(
        [
            subject.shed.parts[part].bar.section.height
            for part in subject.shed.pieces.part[run.pieces[:, 0]].tolist()
        ]
    )
    worst = np.zeros(len(run.pieces))
    for first, second in combinations(lines, 2):
        off = -_crossing(first, second, origin, along, inwards) / depth
        worst = np.where(np.abs(off) > np.abs(worst), off, worst)
    for row in np.flatnonzero((worst < low - 1e-9) | (worst > high + 1e-9)).tolist():
        outwards = bool(worst[row] > 0)
        yield Hit(
            "node-eccentric-outwards" if outwards else "node-eccentric-inwards",
            tuple(run.pieces[row].tolist()),
            _point(run, row),
            "The axes of the webs meet {value} of the chord's depth off its axis (within {limit} on this side): the "
            "moment from it is to be taken up by the chord.",
            "Change the gap between webs or their sizes: frames.roof.panels, frames.roof.diagonals.",
            float(worst[row]),
            high if outwards else low,
            "",
            high_source if outwards else low_source,
            about=f"nodes of the {subject.role[run.pieces[row, 0]].word}",
        )


def _crossing(
    first: tuple[Floats, Floats],
    second: tuple[Floats, Floats],
    origin: Floats,
    along: Floats,
    inwards: Floats,
) -> Floats:
    """How far towards the webs two axes cross from the chord's axis (m,), mm; 0 where they run side by side."""
    (p, u), (q, v) = (
        (_flatten(start - origin, along, inwards), _flatten(away, along, inwards))
        for start, away in (first, second)
    )
    cross = u[:, 0] * v[:, 1] - u[:, 1] * v[:, 0]
    side_by_side = np.abs(cross) < _PARALLEL
    gap = q - p
    reach = (gap[:, 0] * v[:, 1] - gap[:, 1] * v[:, 0]) / np.where(side_by_side, 1.0, cross)
    return np.where(side_by_side, 0.0, p[:, 1] + reach * u[:, 1])


def _flatten(vectors: Floats, along: Floats, inwards: Floats) -> Floats:
    """Vectors (m, 3) in the plane of a truss (m, 2): along its chord, and towards the webs."""
    return np.stack([(vectors * along).sum(axis=1), (vectors * inwards).sum(axis=1)], axis=1)


def _point(run: JointRun, row: int) -> Point:
    x, y, z = run.points[row].tolist()
    return x, y, z
