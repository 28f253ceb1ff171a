"""Member forces and reactions of a plane pin-jointed truss, by the equilibrium of its joints.

Knows nothing of the package: a second opinion for the web patterns. Any consistent units; y is up;
tension is positive.
"""

from __future__ import annotations

from collections.abc import Hashable, Iterable, Mapping
from dataclasses import dataclass
from typing import Generic, TypeVar

import numpy as np

__all__ = ["Forces", "NotDeterminateError", "solve"]

J = TypeVar("J", bound=Hashable)


class NotDeterminateError(Exception):
    """Equilibrium alone does not give the forces: too many or too few bars, or a mechanism."""


@dataclass(frozen=True)
class Forces(Generic[J]):
    """What equilibrium gives: the force of each bar, and of each held direction ("x" or "y") of a joint."""

    bars: dict[tuple[J, J], float]
    reactions: dict[tuple[J, str], float]

    def __getitem__(self, bar: tuple[J, J]) -> float:
        """Give the force of a bar, its ends named in either order."""
        return self.bars[bar] if bar in self.bars else self.bars[bar[::-1]]


def solve(
    joints: Mapping[J, tuple[float, float]],
    bars: Iterable[tuple[J, J]],
    loads: Mapping[J, tuple[float, float]],
    held: Iterable[tuple[J, str]],
) -> Forces[J]:
    """Solve the 2j equations of joint equilibrium.

    Raises:
        NotDeterminateError: bars + held directions are not 2j, or the equations are singular.
    """
    bars, held = list(bars), list(held)
    row = {joint: 2 * number for number, joint in enumerate(joints)}
    unknowns = len(bars) + len(held)
    if unknowns != 2 * len(joints):
        raise NotDeterminateError(f"{unknowns} unknowns for {2 * len(joints)} equations")
    matrix = np.zeros((unknowns, unknowns))
    for column, (a, b) in enumerate(bars):
        along = np.subtract(joints[b], joints[a])
        along = along / np.linalg.norm(along)
        matrix[row[a] : row[a] + 2, column] += along
        matrix[row[b] : row[b] + 2, column] -= along
    for column, (joint, direction) in enumerate(held, start=len(bars)):
        matrix[row[joint] + "xy".index(direction), column] = 1
    if np.linalg.matrix_rank(matrix, tol=1e-9) < unknowns:
        raise NotDeterminateError("a mechanism")
    right = np.zeros(unknowns)
    for joint, load in loads.items():
        right[row[joint] : row[joint] + 2] -= load
    found = np.linalg.solve(matrix, right)
    return Forces(
        dict(zip(bars, map(float, found), strict=False)),
        dict(zip(held, map(float, found[len(bars) :]), strict=True)),
    )
