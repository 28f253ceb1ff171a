"""Haunches below rafters: a web plate and a flange plate, deepest at the end plate, welded to the rafter."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from math import sqrt

from shedbim.expand.joints.contract import Fitting, Met, Welding
from shedbim.expand.joints.standing import Line, Standing, flange
from shedbim.fasteners.plate_stock import rounded_up, thickness_at_least
from shedbim.fasteners.welds import throat_for
from shedbim.model.roles import Role

__all__ = ["Haunch", "haunch_plates", "plan"]

#: The web plate ends where it is this deep, mm: a thinner tip burns away under the weld (common practice).
_TIP = 20.0


@dataclass(frozen=True)
class Haunch:
    """A haunch below a line, from ``start`` out to ``end``, all mm.

    Attributes:
        low: level of the upper face of its flange at ``start``.
        rise: of that face, signed, over a run of 1.
        web, flange: thicknesses.
        width: of the flange.
    """

    start: float
    end: float
    low: float
    rise: float
    web: float
    flange: float
    width: float

    def upper(self, out: float) -> float:
        """Level of the upper face of the flange."""
        return self.low + self.rise * (out - self.start)

    @property
    def cos(self) -> float:
        """Run of one unit of length along the flange."""
        return 1 / sqrt(1 + self.rise**2)

    @property
    def lowest(self) -> float:
        """Level of the lower face of the flange at ``start``."""
        return self.low - self.flange / self.cos


def plan(met: Met, line: Line, start: float, depth: float, end: float) -> Haunch:
    """Give the haunch ``depth`` mm deep at ``start`` that runs out into the member's lower face at ``end``."""
    low = line.bottom(start) - depth
    rise = (line.bottom(end) - low) / (end - start)
    web = thickness_at_least(met.section.profile.thickness)
    return Haunch(
        start, end, low, rise, web, thickness_at_least(flange(met.section)), rounded_up(met.section.width)
    )


def haunch_plates(
    haunch: Haunch,
    line: Line,
    plane: Standing,
    number: int,
    names: tuple[str, str],
    end_plate: str,
    grade: str,
) -> tuple[list[Fitting], list[Welding]]:
    """Give web and flange of a haunch below member ``number``, and the welds to it, to each other and to the end plate.

    Args:
        names: of web and flange.
        end_plate: name of the end plate that both stand against.
    """
    web, lower = names
    depth = line.bottom(haunch.start) - haunch.low
    tip = haunch.end - (haunch.end - haunch.start) * min(_TIP / depth, 0.5)
    corners = [
        (haunch.start, haunch.low),
        (tip, haunch.upper(tip)),
        (tip, line.bottom(tip)),
        (haunch.start, line.bottom(haunch.start)),
    ]
    fittings = [plane.upright(web, Role.HAUNCH, 0.0, corners, haunch.web, number)]
    # The flange is sawn square: of its two edges at the end plate the nearer one touches it.
    cos, sin = haunch.cos, haunch.rise * haunch.cos
    along = plane.out * cos + plane.up * sin
    down = plane.out * sin - plane.up * cos
    back = -min(0.0, sin * haunch.flange) / cos
    length = (haunch.end - haunch.start) / cos - back
    at = plane.at(haunch.start, 0.0, haunch.low) + along * back
    leaning = Standing(at, along, plane.aside, -down)
    half = haunch.width / 2
    outline = [(0.0, -half), (length, -half), (length, half), (0.0, half)]
    fittings.append(leaning.level(lower, Role.HAUNCH, -haunch.flange / 2, outline, haunch.flange, number))
    thin = throat_for(haunch.web, grade)
    thick = throat_for(haunch.flange, grade)
    run = (tip - haunch.start) / cos
    welds = [
        Welding((number, web), thin, 2 * (tip - haunch.start) / line.run),
        Welding((web, lower), thin, 2 * run),
        Welding((end_plate, web), thin, 2 * depth),
        Welding((end_plate, lower), thick, 2 * haunch.width),
        Welding((number, lower), thick, haunch.width),
    ]
    return fittings, welds


def clear_of_posts(plane: Standing, wanted: float, neighbours: Sequence[Met], air: float) -> float:
    """Give how far out a haunch can run without coming over a post below the rafter, mm."""
    for met in neighbours:
        if met.role is Role.GABLE_POST:
            out, _, _ = plane.seen(met.origin)
            if out > 0:
                wanted = min(wanted, out - plane.reach(met, plane.out) - air)
    return wanted
