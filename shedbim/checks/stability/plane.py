"""How often a plane figure of pin-jointed bars is over-stiff, and in how many ways it is a mechanism.

For b bars, j nodes and r held movements the rule of Maxwell, as Calladine completed it, is s - m = b + r - 2j: s states
of self-stress and m mechanisms. The rule gives the difference alone; the rank of the bars' matrix gives both.
Source: C. R. Calladine, International Journal of Solids and Structures 14 (1978), pp. 161-172; from memory.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

__all__ = ["Figure", "figure_of", "weakest"]

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]

#: Singular values below this are zero; those of a truss with fifty panels are above 1e-3.
_ZERO = 1e-7


@dataclass(frozen=True, eq=False)
class Figure:
    """What the rank of a plane figure gives.

    Attributes:
        nodes, bars: how many there are.
        self_stresses: s.
        mechanisms: m; the movements of the whole as one are not counted where nothing is held.
        movements: (m, j, 2) a movement of the nodes for each.
    """

    nodes: int
    bars: int
    self_stresses: int
    mechanisms: int
    movements: Floats


def figure_of(points: Floats, bars: Ints, held: NDArray[np.bool_] | None = None) -> Figure:
    """Give the counts of a figure of pin-jointed bars.

    Args:
        points: (j, 2), no two bars' ends in one place.
        bars: (b, 2) the nodes of each, no bar twice.
        held: (j,) nodes that do not move; None for a figure that floats in its plane.
    """
    j = len(points)
    run = points[bars[:, 1]] - points[bars[:, 0]]
    run = run / np.linalg.norm(run, axis=1)[:, None]
    matrix = np.zeros((len(bars), j, 2))
    rows = np.arange(len(bars))
    matrix[rows, bars[:, 1]] = run
    matrix[rows, bars[:, 0]] = -run
    free = np.ones(j, bool) if held is None else ~held
    strained = matrix[:, free].reshape(len(bars), -1)
    scale = max(float(np.ptp(points, axis=0).max()), 1.0)
    middle = (points - points.mean(axis=0)) / scale
    whole = [] if held is not None else _as_one(middle)
    everything = np.vstack([strained, *whole]) if whole else strained
    _, values, right = np.linalg.svd(everything, full_matrices=True)
    rank = int((values > _ZERO).sum())
    movements = np.zeros((right.shape[0] - rank, j, 2))
    movements[:, free] = right[rank:].reshape(len(movements), int(free.sum()), 2)
    bars_rank = rank - (len(whole[0]) if whole else 0)
    return Figure(j, len(bars), len(bars) - bars_rank, len(movements), movements)


def _as_one(middle: Floats) -> list[Floats]:
    """The movements of the whole as one (3, 2j), as rows that forbid them."""
    across, along = np.zeros_like(middle), np.zeros_like(middle)
    across[:, 0] = along[:, 1] = 1.0
    turned = np.stack([-middle[:, 1], middle[:, 0]], axis=1)
    return [np.stack([each.ravel() for each in (across, along, turned)])]


def weakest(points: Floats, figure: Figure) -> tuple[int, int]:
    """Give the two nodes that a bar would hold best: near, and with most change of distance in the mechanisms."""
    first, second = np.triu_indices(len(points), 1)
    run = points[second] - points[first]
    length = np.linalg.norm(run, axis=1)
    moved = figure.movements[:, second] - figure.movements[:, first]
    change = np.sqrt((np.einsum("mpc,pc->mp", moved, run / length[:, None]) ** 2).sum(axis=0))
    # Change by length squared: of pairs that would do as well, the nearest.
    best = int((change / length**2).argmax())
    return int(first[best]), int(second[best])
