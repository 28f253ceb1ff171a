"""How the bars of a skeleton are strained by small movements of its nodes: a row for each strain.

A row is zero for a movement that does not strain its bar. The unknowns are movements of nodes, and slopes of bars that
bend at their spots. Each stretch between two nodes has the strains of a beam in space that bends after Euler and
Bernoulli: its elongation, and the slope at either end against the line between them in two planes; a pin takes rows
away. Torsion is left out, for nothing is to stand by it: see ``holds``. Every strain has the same weight, whatever
the section: that changes how stiff a frame is, never what moves freely, and it keeps the numbers near one another.
"""

from __future__ import annotations

from collections.abc import Collection
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from shedbim.checks.stability.holds import BEAMS, CHORDS, CONTINUOUS, FIXED, NODES, STIFF
from shedbim.checks.stability.skeleton import Skeleton, among, lots
from shedbim.checks.subject import Subject
from shedbim.model.joints import JointKind

if TYPE_CHECKING:
    from scipy.sparse import csr_array

__all__ = ["Compatibility", "compatibility"]

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]

#: Lengths are counted in this, mm, so that movements and turnings are of one size.
_METRE = 1000.0


@dataclass(frozen=True, eq=False)
class Compatibility:
    """Strains by unknowns, and what the unknowns are.

    Attributes:
        matrix: (rows, u) sparse; a movement with zero strains is a mechanism.
        moves: (n, 3) the unknown of each movement of each node along x, y, z; -1 where it is held or never strained.
        slopes: (s, 2) the unknown of each slope of the bar at each spot, along ``asides``; -1 where it is pinned there.
        asides: (b, 2, 3) of each bar two directions square to it: of those in a frame the first is in its plane.
    """

    matrix: csr_array
    moves: Ints
    slopes: Ints
    asides: Floats


class _Rows:
    """Rows of a sparse matrix as they come."""

    def __init__(self) -> None:
        self.count = 0
        self.row: list[Ints] = []
        self.column: list[Ints] = []
        self.value: list[Floats] = []

    def add(self, *terms: tuple[Ints, Floats]) -> None:
        """Add a row for each of m things: the sum of terms of unknowns (m, k) times factors (m, k)."""
        for unknowns, factors in terms:
            rows = np.arange(self.count, self.count + len(unknowns))
            self.row.append(np.repeat(rows, unknowns.shape[1]))
            self.column.append(unknowns.ravel())
            self.value.append(factors.ravel())
        self.count += len(terms[0][0])

    def matrix(self, unknowns: int) -> csr_array:
        """All of them, unknowns of number -1 left out."""
        from scipy.sparse import coo_array  # noqa: PLC0415 - heavy, and only checks need it

        row, column = np.concatenate(self.row), np.concatenate(self.column)
        value = np.concatenate(self.value)
        keep = (column >= 0) & (value != 0.0)
        shape = (self.count, unknowns)
        return coo_array((value[keep], (row[keep], column[keep])), shape=shape).tocsr()


def compatibility(subject: Subject, bars: Skeleton) -> Compatibility:
    """Give the strains of the frame model of a shed."""
    moving = ~bars.supported
    moving[np.setdiff1d(np.arange(len(moving)), bars.node[bars.stretches])] = False
    moves = np.where(moving[:, None], 3 * (np.cumsum(moving) - 1)[:, None] + np.arange(3), -1)
    slopes = _slopes(subject, bars, 3 * int(moving.sum()))
    line, asides = _axes(subject, bars)
    rows = _Rows()
    first, second = bars.stretches.T
    here, there = moves[bars.node[first]], moves[bars.node[second]]
    run = (bars.points[bars.node[second]] - bars.points[bars.node[first]]) / _METRE
    x = run / np.linalg.norm(run, axis=1)[:, None]
    rows.add((there, x), (here, -x))
    length = np.einsum("ij,ij->i", run, line[bars.bar[first]])[:, None]
    for spot in (first, second):
        for which in (0, 1):
            bent = slopes[spot, which] >= 0
            aside = asides[bars.bar[spot[bent]], which]
            slope = slopes[spot[bent], which : which + 1]
            rows.add((slope, length[bent]), (there[bent], -aside), (here[bent], aside))
    fixed = bars.rows_of(FIXED)[:, 1]
    for which in (0, 1):
        rows.add((slopes[fixed, which : which + 1], np.ones((len(fixed), 1))))
    for axis in (0, 1):
        factors = np.tile(np.eye(3)[axis], (len(bars.sliding), 1))
        rows.add((moves[bars.sliding[:, 0]], factors), (moves[bars.sliding[:, 1]], -factors))
    unknowns = int(max(moves.max(initial=-1), slopes.max(initial=-1))) + 1
    return Compatibility(rows.matrix(unknowns), moves, slopes, asides)


def _slopes(subject: Subject, bars: Skeleton, first: int) -> Ints:
    """The unknowns of slopes (s, 2) from ``first`` on: of beams everywhere, of links between their ends."""
    bent = among(subject, BEAMS)[bars.piece[bars.bar]]
    bent[1:-1] |= (bars.bar[1:-1] == bars.bar[:-2]) & (bars.bar[1:-1] == bars.bar[2:])
    slopes = np.full((len(bars.bar), 2), -1)
    for which, stiff in enumerate((STIFF, CONTINUOUS)):
        shared = _sharing(subject, bars, stiff)
        _, group = np.unique(shared[bent], return_inverse=True)
        slopes[bent, which] = first + group
        first += int(group.max(initial=-1)) + 1
    return slopes


def _sharing(subject: Subject, bars: Skeleton, stiff: Collection[JointKind]) -> Ints:
    """Which spots (s,) slope together: beams in stiff joints, and chords at the nodes of trusses."""
    pairs = []
    for kinds, roles in ((stiff, BEAMS), (NODES, CHORDS)):
        rows = bars.rows_of(kinds)
        rows = rows[among(subject, roles)[bars.piece[bars.bar[rows[:, 1]]]]]
        rows = rows[np.argsort(rows[:, 0], kind="stable")]
        same = np.flatnonzero(np.diff(rows[:, 0]) == 0)
        pairs.append(np.stack([rows[same, 1], rows[same + 1, 1]], axis=1))
    return lots(len(bars.bar), np.concatenate(pairs))


def _axes(subject: Subject, bars: Skeleton) -> tuple[Floats, Floats]:
    """Of each bar its direction (b, 3), to the right or else up, and two directions square to it (b, 2, 3).

    Of a bar in a frame the second is along the building, and the first so that a turning of the whole frame in its
    plane gives all bars the same slope.
    """
    ends = subject.axes[bars.piece]
    line = ends[:, 1] - ends[:, 0]
    line /= np.linalg.norm(line, axis=1)[:, None]
    rightwards = np.where(np.abs(line[:, 0]) > 1e-6, line[:, 0], line[:, 2])
    line *= np.where(rightwards < 0, -1.0, 1.0)[:, None]
    lengthwise = np.where(np.abs(line[:, 1:2]) < 0.9, np.array([0.0, 1.0, 0.0]), np.array([0.0, 0.0, 1.0]))
    first = np.cross(lengthwise, line)
    first /= np.linalg.norm(first, axis=1)[:, None]
    return line, np.stack([first, np.cross(line, first)], axis=1)
