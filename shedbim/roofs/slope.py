"""One flat piece of a roof, seen along the building."""

from __future__ import annotations

from dataclasses import dataclass
from math import atan2, hypot

__all__ = ["Slope"]


@dataclass(frozen=True)
class Slope:
    """The line of the underside of the roof steel over a span or a part of one, from left to right.

    Attributes:
        span: the number of the span from the left, 0 for the first.
        x0: where it begins, mm from column line A.
        x1: where it ends, mm; greater than x0.
        z0: its height at x0, mm above the eaves at the lowest column line.
        z1: its height at x1, mm above the same.
    """

    span: int
    x0: float
    x1: float
    z0: float
    z1: float

    @property
    def pitch(self) -> float:
        """Angle to the horizontal, rad; positive where it rises to the right."""
        return atan2(self.z1 - self.z0, self.x1 - self.x0)

    @property
    def length(self) -> float:
        """Length along the slope, mm."""
        return hypot(self.x1 - self.x0, self.z1 - self.z0)

    @property
    def rises(self) -> bool:
        """Whether it rises to the right."""
        return self.z1 > self.z0

    def height(self, x: float) -> float:
        """Height of its line at x (mm), mm above the eaves at the lowest column line."""
        return self.z0 + (self.z1 - self.z0) * (x - self.x0) / (self.x1 - self.x0)
