"""Bolt groups: equal fasteners side by side through the same layers, as one piece.

Its own frame is the fastener's: z from head to nut, z = 0 on the outer face of the first layer; the
fasteners stand at points (x, y). A single element may stand for an array of bolts (ISO 16739-1,
IfcMechanicalFastener).
"""

from __future__ import annotations

from dataclasses import dataclass

from shedbim.fasteners.fastener import Fastener
from shedbim.sections.section import STEEL_DENSITY

__all__ = ["BoltGroup"]

Box = tuple[tuple[float, float, float], tuple[float, float, float]]


@dataclass(frozen=True)
class BoltGroup:
    """Equal fasteners at points (x, y), mm, in one plane."""

    fastener: Fastener
    points: tuple[tuple[float, float], ...]

    @property
    def count(self) -> int:
        """Number of fasteners."""
        return len(self.points)

    @property
    def volume(self) -> float:
        """Volume of all, mm3."""
        return self.count * self.fastener.volume

    @property
    def mass(self) -> float:
        """Mass of all, kg."""
        return self.volume * STEEL_DENSITY

    @property
    def surface(self) -> float:
        """Painted surface: none, fasteners come coated."""
        return 0.0

    @property
    def box(self) -> Box:
        """Its bounding box: least and greatest corner, mm; hexagons by the circle over their corners."""
        reach = (
            max(
                disc.size * {"hexagon": 1.1547005383792515}.get(disc.form, 1.0)
                for disc in self.fastener.stack
            )
            / 2
        )
        x, y = zip(*self.points, strict=True)
        low = (min(x) - reach, min(y) - reach, min(disc.start for disc in self.fastener.stack))
        high = (max(x) + reach, max(y) + reach, max(disc.end for disc in self.fastener.stack))
        return low, high
