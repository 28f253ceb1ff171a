"""Space frames by the textbook: the 12 x 12 stiffness of a beam, assembled densely, for bars of a shed.

Independent of the package's own strains and null spaces: real sections, stiffness instead of strains, dense singular
values instead of a sparse factorisation; torsion and all six movements of a node are there. Only which bars meet at
which node is taken from the skeleton. Stiffness matrix: J. S. Przemieniecki, Theory of Matrix Structural Analysis
(1968), section 5.6, without shear; from memory. Units: N, m, rad.
"""

from __future__ import annotations

from collections import defaultdict
from itertools import pairwise

import numpy as np

from shedbim.checks.stability.skeleton import Skeleton
from shedbim.model.roles import Role
from shedbim.model.shed import Shed

__all__ = ["FRAME_ROLES", "E", "G", "beam", "frame_stiffness", "freely_moving", "properties", "stretches_of"]

E, G = 210e9, 81e9
FRAME_ROLES = (
    Role.COLUMN,
    Role.GABLE_POST,
    Role.RAFTER,
    Role.GABLE_RAFTER,
    Role.TOP_CHORD,
    Role.BOTTOM_CHORD,
)
_UPRIGHT = (Role.COLUMN, Role.GABLE_POST)
#: Stiffness of ties between turnings, N m, and of supports: that of stout steel over a metre.
_TIE = 1e7
_RUNS_ON = {"APEX", "CHORD_RIDGE", "CHORD_SPLICE", "ANGLE_SPLICE"}
_AT_NODES = {"NODE", "ANGLE_NODE", "ANGLE_SITE_NODE", "WEB_SPLICE", "ANGLE_COLUMN"}


def properties(shed: Shed, piece: int) -> tuple[float, float, float]:
    """A, m², and the lesser I, m⁴, for bending in both planes, and J, m⁴, of a piece."""
    section = shed.parts[int(shed.pieces.part[piece])].bar.section
    least = min(section.iy, section.iz)
    return section.area * 1e-6, least * 1e-12, (section.iy + section.iz) * 1e-12


def beam(length: float, A: float, inertia: float, J: float, pins: tuple[bool, bool]) -> np.ndarray:
    """The stiffness (12, 12) of a beam along x; where it is pinned, no bending moment, by condensation."""
    k = np.zeros((12, 12))
    ei = E * inertia
    for i, j, value in ((0, 6, E * A / length), (3, 9, G * J / length)):
        k[[i, j], [i, j]] += value
        k[[i, j], [j, i]] -= value
    bend = np.array(
        [
            [12, 6 * length, -12, 6 * length],
            [6 * length, 4 * length**2, -6 * length, 2 * length**2],
            [-12, -6 * length, 12, -6 * length],
            [6 * length, 2 * length**2, -6 * length, 4 * length**2],
        ]
    ) * (ei / length**3)
    for rows, sign in (((1, 5, 7, 11), 1.0), ((2, 4, 8, 10), -1.0)):
        s = np.array([1.0, sign, 1.0, sign])
        k[np.ix_(rows, rows)] += bend * np.outer(s, s)
    free = [row for end, pin in zip(((4, 5), (10, 11)), pins, strict=True) if pin for row in end]
    if free:
        kept = [row for row in range(12) if row not in free]
        inner = k[np.ix_(free, free)]
        k[np.ix_(kept, kept)] -= k[np.ix_(kept, free)] @ np.linalg.solve(inner, k[np.ix_(free, kept)])
        k[free, :] = k[:, free] = 0.0
    return k


def _turned(run: np.ndarray) -> np.ndarray:
    """The rotation (3, 3) whose rows are a bar's axes: x along it, y along the building unless it runs that way."""
    x = run / np.linalg.norm(run)
    z = np.cross(x, [0, 1, 0] if abs(x[1]) < 0.9 else [0, 0, 1])
    z /= np.linalg.norm(z)
    return np.array([x, np.cross(z, x), z])


def stretches_of(bars: Skeleton) -> list[tuple[int, int, int]]:
    """(bar, spot, next spot) of each stretch."""
    n = len(bars.bar)
    return [(int(bars.bar[i]), i, i + 1) for i in range(n - 1) if bars.bar[i] == bars.bar[i + 1]]


def frame_stiffness(shed: Shed, bars: Skeleton) -> np.ndarray:
    """The stiffness (d, d) of a shed: three movements of each node, three turnings of each bar at each spot."""
    nodes, spots = len(bars.points), len(bars.bar)
    roles = [shed.parts[int(shed.pieces.part[p])].role for p in bars.piece]
    stiff = np.zeros((3 * (nodes + spots),) * 2)
    count = np.bincount(bars.bar, minlength=len(bars.piece))

    def turning(spot: int) -> list[int]:
        return [3 * (nodes + spot) + c for c in range(3)]

    for bar, a, b in stretches_of(bars):
        run = (bars.points[bars.node[b]] - bars.points[bars.node[a]]) / 1000
        A, inertia, _ = properties(shed, bars.piece[bar])
        frame = roles[bar] in FRAME_ROLES
        first = a == 0 or bars.bar[a - 1] != bar
        last = b == spots - 1 or bars.bar[b + 1] != bar
        k = beam(float(np.linalg.norm(run)), A, inertia, 0.0, (not frame and first, not frame and last))
        turn = np.kron(np.eye(4), _turned(run))
        where = [
            *(3 * bars.node[a] + c for c in range(3)), *turning(a),
            *(3 * bars.node[b] + c for c in range(3)), *turning(b),
        ]  # fmt: skip
        stiff[np.ix_(where, where)] += turn.T @ k @ turn
        for spot in (a, b):  # held against twisting by its joints, and the idle turnings of pinned ends
            along = _turned(run)[0]
            idle = not frame and ((spot == a and first) or (spot == b and last))
            hold = np.eye(3) if idle else np.outer(along, along)
            stiff[np.ix_(turning(spot), turning(spot))] += _TIE * hold
    assert count.min() > 0

    def tie(one: list[int], other: list[int], u: np.ndarray, v: np.ndarray) -> None:
        row, where = np.concatenate([u, -v]), [*one, *other]
        stiff[np.ix_(where, where)] += _TIE * np.outer(row, row)

    members: dict[int, list[int]] = defaultdict(list)
    for joint, spot, _ in bars.at_joint.tolist():
        members[joint].append(spot)
    for joint, here in members.items():
        kind = str(bars.kind[joint])
        framed = [s for s in here if roles[bars.bar[s]] in FRAME_ROLES]
        if kind in _AT_NODES:
            framed = [s for s in framed if roles[bars.bar[s]] in (Role.TOP_CHORD, Role.BOTTOM_CHORD)]
        if kind in _RUNS_ON | _AT_NODES | {"RAFTER_COLUMN"}:
            for s, t in pairwise(framed):
                tie(turning(s), turning(t), np.array([0, 1.0, 0]), np.array([0, 1.0, 0]))
                if kind != "RAFTER_COLUMN":
                    tie(turning(s), turning(t), *(_sideways(shed, bars, one) for one in (s, t)))
        if kind == "FIXED_BASE":
            for s in framed:
                stiff[np.ix_(turning(s), turning(s))] += _TIE * np.eye(3)
    for post, carrier in bars.sliding.tolist():
        for c in (0, 1):
            unit = np.eye(3)[c]
            tie([3 * post + i for i in range(3)], [3 * carrier + i for i in range(3)], unit, unit)
    used = np.zeros(nodes, bool)
    used[[bars.node[s] for _, *ends in stretches_of(bars) for s in ends]] = True
    free = np.repeat(used & ~bars.supported, 3)
    keep = np.concatenate([free, np.ones(3 * spots, bool)])
    return stiff[np.ix_(keep, keep)]


def _sideways(shed: Shed, bars: Skeleton, spot: int) -> np.ndarray:
    """What a turning (3,) of a bar is multiplied by to give its slope along the building."""
    place = shed.pieces.placement[bars.piece[bars.bar[spot]]]
    along = place[:, 0] * np.sign(place[0, 0])
    return np.cross(along, [0, 1.0, 0])


def freely_moving(stiffness: np.ndarray) -> int:
    """How many movements a stiffness matrix (d, d) does not resist: its singular values that are nothing, scaled.

    Those of a symmetric matrix are the sizes of its eigenvalues, which are found faster.
    """
    scale = 1 / np.sqrt(np.diag(stiffness).clip(1e-9))
    values = np.abs(np.linalg.eigvalsh(stiffness * np.outer(scale, scale)))
    return int((values < 1e-13).sum())
