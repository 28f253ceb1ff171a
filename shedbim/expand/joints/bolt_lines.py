"""Bolts in a line: how many, how far apart, how far from the ends and sides of what they pass through.

Distances: the usual ones of ``fasteners.distances``, at the sides less where a leg or a tube is narrow, yet
never under the least of EN 1993-1-8 Table 3.3.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import floor

from shedbim.fasteners.distances import edge, least_edge, pitch, wrench_pitch
from shedbim.fasteners.gauges import back_mark
from shedbim.fasteners.holes import hole_diameter
from shedbim.sections.profiles import Angle
from shedbim.sections.section import Section

__all__ = ["BoltLine", "leg_line", "tube_line"]

_SIZES = (20.0, 16.0, 12.0)
#: Sides of fins are whole steps of this.
_STEP = 5.0


@dataclass(frozen=True)
class BoltLine:
    """Equal bolts in a line, mm.

    Attributes:
        diameter: nominal.
        count: how many.
        end: from the first and from the last to the end of each thing they pass through.
        pitch: from one to the next.
        side: to the nearer side edge of the plates.
    """

    diameter: float
    count: int
    end: float
    pitch: float
    side: float

    @property
    def lap(self) -> float:
        """How long two things lie on each other, end to end."""
        return 2 * self.end + (self.count - 1) * self.pitch

    @property
    def places(self) -> tuple[float, ...]:
        """How far each bolt is from the end where the lap begins."""
        return tuple(self.end + k * self.pitch for k in range(self.count))


def _line(diameter: float, count: int, side: float) -> BoltLine:
    usual = edge(diameter)
    return BoltLine(diameter, count, usual, max(pitch(diameter), wrench_pitch(diameter)), min(side, usual))


def _sizes(asked: str | None) -> tuple[float, ...]:
    return _SIZES if asked is None else (float(asked[1:]),)


def leg_line(angle: Angle, count: int, asked: str | None) -> BoltLine | None:
    """Give the bolts on the back mark of an angle's flat leg, or None where they do not fit."""
    try:
        mark, largest = back_mark(angle.b)
    except ValueError:
        return None
    toe = angle.b - mark
    for d in _sizes(asked):
        if d <= largest and toe >= least_edge(hole_diameter(d)):
            # The gusset may stand out over the toe by a little, never over the room that a brace keeps.
            return _line(d, count, toe + _STEP)
    return None


def tube_line(section: Section, count: int, asked: str | None) -> BoltLine | None:
    """Give the bolts of a fin that stays within the height of a tube, or None where none fits."""
    half = float(floor(section.height / 2))
    sizes = _sizes(asked)
    usual = [d for d in sizes if edge(d) <= half]
    if usual:
        return _line(usual[0], count, half)
    return _line(sizes[-1], count, half) if least_edge(hole_diameter(sizes[-1])) <= half else None
