"""What is cut out of a bar or a plate after it was cut to length: holes and notches, in the part's own frame, mm."""

from __future__ import annotations

from dataclasses import dataclass
from math import pi

__all__ = ["Hole", "Notch", "Vector"]

Vector = tuple[float, float, float]


@dataclass(frozen=True)
class Hole:
    """A hole drilled square through one wall of a bar, or through a plate.

    Attributes:
        centre: the middle of the hole, half way through the wall.
        axis: unit vector of the drill, either way.
        diameter: of the drill; of a slot, its width.
        thickness: of the wall.
        slot: how far the drill travels on; 0 for a round hole. A slot is ``diameter + slot`` long overall.
        along: unit vector a slot runs in, either way; any for a round hole.
    """

    centre: Vector
    axis: Vector
    diameter: float
    thickness: float
    slot: float = 0.0
    along: Vector = (0.0, 0.0, 0.0)

    @property
    def area(self) -> float:
        """Area of the opening in a flat wall, mm2."""
        return pi * self.diameter**2 / 4 + self.diameter * self.slot


@dataclass(frozen=True)
class Notch:
    """A straight-sided prism cut away: a slot in a tube's end, a cope.

    Attributes:
        outline: corners (u, v), anticlockwise.
        origin: where u = v = 0 lies.
        u, v: unit vectors square to each other; the prism runs from the outline along u x v.
        depth: how far it runs.
    """

    outline: tuple[tuple[float, float], ...]
    origin: Vector
    u: Vector
    v: Vector
    depth: float
