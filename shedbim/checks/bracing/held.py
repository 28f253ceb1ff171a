"""Where along a line of steel joints hold it sideways, and the greatest stretch between two such places."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.checks.subject import Subject
from shedbim.model.joints import JointKind
from shedbim.model.roles import Role

__all__ = ["Stretch", "stretches"]

Ints = NDArray[np.int64]
Floats = NDArray[np.float64]


@dataclass(frozen=True)
class Stretch:
    """The longest stretch of one line of steel, as a chord from column to column, that nothing holds sideways.

    Attributes:
        pieces: the bars of the line.
        piece: the bar at the middle of the stretch.
        point: the middle of the stretch, mm.
        length: mm.
    """

    pieces: tuple[int, ...]
    piece: int
    point: tuple[float, float, float]
    length: float


def stretches(subject: Subject, roles: Iterable[Role], kinds: Iterable[JointKind]) -> Iterator[Stretch]:
    """Give the longest unheld stretch of each line that bars of some roles make in one frame and span.

    It is held where joints of the ``kinds`` are.
    """
    pieces = subject.having(*roles)
    if not pieces.size:
        return
    owner = _lines(subject, pieces)
    number = np.full(len(subject.shed.pieces), -1)
    number[pieces] = owner
    joint, line = _holds(subject, number, set(kinds))
    points = subject.joint_points[joint]
    for each in range(int(owner.max()) + 1):
        bars = pieces[owner == each]
        found = _longest(points[line == each], subject.axes[bars].reshape(-1, 3))
        if found is not None:
            middle, length = found
            nearest = bars[np.abs(subject.centres[bars] - middle).sum(axis=1).argmin()]
            x, y, z = middle.tolist()
            yield Stretch(tuple(bars.tolist()), int(nearest), (x, y, z), length)


def _lines(subject: Subject, pieces: Ints) -> Ints:
    """The number of the line of each bar: one for each frame and span."""
    middle = subject.axes[pieces].mean(axis=1)
    grid = subject.shed.grid
    span = np.clip(np.searchsorted(grid.x, middle[:, 0]) - 1, 0, len(grid.x) - 2)
    frame = np.abs(middle[:, 1:2] - np.array(grid.y)).argmin(axis=1)
    return np.unique(frame * len(grid.x) + span, return_inverse=True)[1]


def _holds(subject: Subject, number: Ints, kinds: set[JointKind]) -> tuple[Ints, Ints]:
    """The joints that hold a line, and the line; a joint comes once for each line in it."""
    entries = subject.entries
    of_kind = np.array([kind in kinds for kind in subject.joint_kinds], bool)
    rows = (number[entries.piece] >= 0) & of_kind[entries.joint]
    pairs = np.unique(np.stack([entries.joint[rows], number[entries.piece[rows]]], axis=1), axis=0)
    return pairs[:, 0], pairs[:, 1]


def _longest(points: Floats, ends: Floats) -> tuple[Floats, float] | None:
    """The middle and the length of the longest stretch between points that hold, or to an end that none does."""
    if not len(ends):
        return None
    first, last = ends[ends[:, 0].argmin()], ends[ends[:, 0].argmax()]
    ordered = points[np.argsort(points[:, 0], kind="stable")] if len(points) else np.zeros((0, 3))
    whole = np.vstack([first, ordered, last])
    # The ends of the steel are at the face of what holds them: a point that holds lies beyond, or at most so near.
    inside = (whole[:, 0] >= first[0]) & (whole[:, 0] <= last[0])
    kept = whole[inside]
    steps = np.linalg.norm(np.diff(kept, axis=0), axis=1)
    longest = int(steps.argmax())
    return (kept[longest] + kept[longest + 1]) / 2, float(steps[longest])
