"""A fastener as a stack of prisms on one axis.

Its frame: z along the axis from the head to the nut; z = 0 is the outer face of the first layer it clamps
(where the head, or its washer, bears), z = ``grip`` the outer face of the last. mm.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import pi, sqrt

__all__ = ["Disc", "Fastener"]


@dataclass(frozen=True)
class Disc:
    """One prism of a stack.

    Attributes:
        form: ``hexagon``, ``round`` or ``square``.
        size: across flats, diameter, or side, mm.
        start, end: z from and to, mm.
        bore: diameter of the hole along its axis, mm; 0 where it is solid.
    """

    form: str
    size: float
    start: float
    end: float
    bore: float = 0.0

    @property
    def volume(self) -> float:
        """Volume, mm3."""
        factor = {"hexagon": sqrt(3) / 2, "round": pi / 4, "square": 1.0}[self.form]
        return (factor * self.size**2 - pi / 4 * self.bore**2) * (self.end - self.start)


@dataclass(frozen=True)
class Fastener:
    """A catalogue item as it sits in its joint: bolt with nut and washers, anchor, or the nuts of a threaded bar.

    Attributes:
        kind: ``bolt``, ``anchor`` or ``nuts``.
        diameter: nominal, mm.
        length: nominal, mm; 0 for nuts.
        grade: property class, e.g. ``8.8``.
        grip: total thickness of the layers it clamps, mm.
        washers: number under the head and under the nut.
        nuts: number of nuts.
        stack: its prisms from head to tip, none sharing space with another.
    """

    kind: str
    diameter: float
    length: float
    grade: str
    grip: float
    washers: tuple[int, int]
    nuts: int
    stack: tuple[Disc, ...]

    @property
    def designation(self) -> str:
        """Its name in a list: ``M20x60 8.8``."""
        size = f"M{self.diameter:g}" + (f"x{self.length:g}" if self.length else "")
        return f"{size} {self.grade}".strip()

    @property
    def volume(self) -> float:
        """Volume of one, nut and washers included, mm3."""
        return sum(disc.volume for disc in self.stack)
