"""A cross-section: its name, its dimensions, its outline and what follows from the outline.

Axes: y to the right, z upwards, origin at the centroid; a bar's own x axis runs out of the page.
I sections stand with the web along z; channels and lipped C sections have the web on the -y side and
open towards +y; a lipped Z has its upper flange towards +y; an angle has its heel at the lower left.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from functools import cached_property
from typing import Protocol

from shedbim.geometry.outlines import Outline

__all__ = ["STEEL_DENSITY", "Profile", "Section", "Symmetry"]

#: kg/mm³; the density section tables are computed with (EN 10365 and P363 explanatory notes: 7850 kg/m³).
STEEL_DENSITY = 7850e-9


@dataclass(frozen=True)
class Symmetry:
    """The motions in its own plane that carry an outline onto itself.

    Attributes:
        turns: number of rotations about the centroid, the identity included; 0 for any angle at all.
        mirror: angle in radians of one mirror axis from y, or None where there is no mirror axis.
    """

    turns: int
    mirror: float | None


class Profile(Protocol):
    """The dimensions of one family of sections, in mm; a frozen dataclass with these three members."""

    @property
    def outline(self) -> Outline:
        """The outline with fillets, in the axes of this module but with any origin."""

    @property
    def symmetry(self) -> Symmetry:
        """How the outline maps onto itself."""

    @property
    def thickness(self) -> float:
        """The wall that other steel is welded or bolted to: web of an I, wall of a tube, leg of an angle."""


@dataclass(frozen=True)
class Section:
    """One section of the catalogue, or one made from its dimensions.

    Attributes:
        designation: the name as listed, for example ``IPE 300`` or ``SHS 100x100x5``.
        family: the table it comes from, for example ``IPE``.
        profile: its dimensions.
        source: where the dimensions were published.
    """

    designation: str
    family: str
    profile: Profile = field(compare=False)
    source: str = field(compare=False)

    @cached_property
    def outline(self) -> Outline:
        """The outline about its centroid."""
        return self.profile.outline.centred()

    @property
    def centroid_in_box(self) -> tuple[float, float]:
        """The centroid seen from the middle of the bounding box (y, z), mm."""
        low_y, low_z, high_y, high_z = self.outline.bounds
        return -(low_y + high_y) / 2, -(low_z + high_z) / 2

    @property
    def width(self) -> float:
        """Overall size along y, mm."""
        return self.outline.bounds[2] - self.outline.bounds[0]

    @property
    def height(self) -> float:
        """Overall size along z, mm."""
        return self.outline.bounds[3] - self.outline.bounds[1]

    @property
    def area(self) -> float:
        """Area, mm²."""
        return self.outline.area

    @property
    def mass_per_metre(self) -> float:
        """Mass, kg/m."""
        return self.area * STEEL_DENSITY * 1000

    @property
    def surface_per_metre(self) -> float:
        """Outer surface, m²/m."""
        return self.outline.outer_perimeter / 1000

    @property
    def iy(self) -> float:
        """Second moment about the y axis through the centroid, mm⁴."""
        return self.outline.second_moments[0]

    @property
    def iz(self) -> float:
        """Second moment about the z axis through the centroid, mm⁴."""
        return self.outline.second_moments[1]

    @property
    def iyz(self) -> float:
        """Product moment about y and z, mm⁴."""
        return self.outline.second_moments[2]

    @property
    def principal(self) -> tuple[float, float]:
        """Greatest and least second moment, mm⁴."""
        mean, half = (self.iy + self.iz) / 2, (self.iy - self.iz) / 2
        radius = (half * half + self.iyz * self.iyz) ** 0.5
        return mean + radius, mean - radius

    @property
    def radius_y(self) -> float:
        """Radius of gyration about y, mm."""
        return float((self.iy / self.area) ** 0.5)

    @property
    def radius_z(self) -> float:
        """Radius of gyration about z, mm."""
        return float((self.iz / self.area) ** 0.5)

    @property
    def radius_least(self) -> float:
        """Least radius of gyration, mm."""
        return float((self.principal[1] / self.area) ** 0.5)
