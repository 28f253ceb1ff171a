"""How the end of a bar is cut: by one plane, or by two that make a point or a notch."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

__all__ = ["SQUARE", "EndCut"]

Array = NDArray[np.float64]


@dataclass(frozen=True)
class EndCut:
    """How an end is cut: plane ``x = x0 + a*y + b*z`` for each pair (a, b), all through one axis point.

    Attributes:
        slopes: one pair for a plane cut, two for a pointed or a notched end.
        notched: with two planes, True leaves what lies inside either (a bird's mouth), False what lies
            inside both (a point).
    """

    slopes: tuple[tuple[float, float], ...] = ((0.0, 0.0),)
    notched: bool = False

    @property
    def is_square(self) -> bool:
        """Whether the end is one plane square to the axis."""
        return self.slopes == ((0.0, 0.0),)

    def offsets(self, points: Array, *, at_end: bool) -> Array:
        """How far along x the cut lies from its axis point over section points (n, 2), in mm (n,)."""
        planes = points @ np.array(self.slopes).T
        outermost = self.notched == at_end
        result: Array = planes.max(axis=1) if outermost else planes.min(axis=1)
        return result


SQUARE = EndCut()
