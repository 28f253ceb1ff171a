"""Legs of angles on a gusset, seen square to it: where they begin, and what a gusset must reach of them.

All in the plane of a truss: x across the building, z up; mm.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from manifold3d import CrossSection
from numpy.typing import NDArray

from shedbim.fasteners.plate_stock import rounded_up

__all__ = ["CLEAR", "LEDGE", "RECESS", "Leg", "Web", "lap_of", "starts", "toe_length"]

Array = NDArray[np.float64]

#: End of a web to the toe of a chord: common practice 10 to 20 mm. Between two webs.
CLEAR, BETWEEN = 15.0, 15.0
#: A gusset stands out by this beside a leg: room for the fillet (common practice: 10 to 15 mm).
LEDGE = 15.0
#: Its edge lies this far inside the backs of a chord, which purlins and seats lie on (common practice: 5 to 10 mm).
RECESS = 5.0
#: A lap by rule, in widths of the leg, and the least (common practice, values from memory; not a design).
_LAPS, _LEAST_LAP = 2.0, 80.0
#: EN 1993-1-8 4.5.1: shorter fillets carry nothing; with the craters of both ends (values from memory).
_LEAST_WELD = 40.0


@dataclass(frozen=True, eq=False)
class Leg:
    """A leg on a gusset.

    Attributes:
        start: (2,) where the axis begins, or any point of one that runs through.
        along: unit vector (2,) into the bar.
        heel: unit vector (2,) to the heel.
        back, toe: from the axis to the heel and to the toe, mm.
    """

    start: Array
    along: Array
    heel: Array
    back: float
    toe: float

    @property
    def width(self) -> float:
        """Of the leg."""
        return self.back + self.toe

    def point(self, along: float, up: float) -> Array:
        """The point (2,) so far along from the start, and off the axis to the heel."""
        return self.start + self.along * along + self.heel * up

    def patch(self, first: float, last: float, low: float, high: float) -> CrossSection:
        """The rectangle between two places along the axis and two levels, counted to the heel."""
        corners = [self.point(x, y) for x, y in ((first, low), (last, low), (last, high), (first, high))]
        area = CrossSection([np.array(corners)])
        return area if area.area() > 0 else CrossSection([np.array(corners[::-1])])

    def covered(self, area: CrossSection) -> tuple[float, float]:
        """From where to where along the axis an area covers any of the leg; (0, 0) for nothing."""
        common = area ^ self.patch(-_FAR, _FAR, -self.toe, self.back)
        places = [(p - self.start) @ self.along for loop in common.to_polygons() for p in loop]
        return (float(min(places)), float(max(places))) if places else (0.0, 0.0)

    def edge_in(self, area: CrossSection, up: float) -> float:
        """How long a line parallel to the axis lies in an area, mm; ``up`` off the axis to the heel."""
        return float((area ^ self.patch(-_FAR, _FAR, up - 0.5, up + 0.5)).area())


#: Longer than any chord, mm.
_FAR = 100_000.0


@dataclass(frozen=True, eq=False)
class Web:
    """A web that aims at a node: the leg with its start there, and whether it is a post."""

    leg: Leg
    is_post: bool


def lap_of(width: float, asked: float | None) -> float:
    """Give how long the weld along the heel of a leg is, and so its lap on the gusset, mm."""
    return asked or max(rounded_up(_LAPS * width), _LEAST_LAP)


def toe_length(leg: Leg, heel: float) -> float:
    """Give the length of the weld along the toe that balances the one along the heel about the axis, mm.

    It is never shorter than a weld that counts.
    """
    return max(rounded_up(heel * leg.back / leg.toe), _LEAST_WELD)


def starts(node: Array, webs: Sequence[Web], planes: Sequence[Sequence[tuple[Array, Array]]]) -> list[float]:
    """Give how far from their node webs begin, so that their square ends are clear of chord and each other.

    Args:
        webs: left to right.
        planes: for each web (point, unit normal towards the web) of the lines that no corner of it may lie behind.
    """
    limits = [list(own) for own in planes]
    for i in range(len(webs) - 1):
        for number, plane in _between(node, webs, i):
            limits[number].append(plane)
    return [
        max((_clear(node, web.leg, plane) for plane in own), default=0.0)
        for web, own in zip(webs, limits, strict=True)
    ]


def _right(leg: Leg) -> Array:
    """The unit vector square to a leg, to the right."""
    side = np.array([leg.along[1], -leg.along[0]])
    return side if side[0] > 0 else -side


def _side(node: Array, leg: Leg, out: Array) -> Array:
    """A point of the edge of a leg that looks along ``out``."""
    return node + out * (leg.back if float(out @ leg.heel) > 0 else leg.toe)


def _between(node: Array, webs: Sequence[Web], i: int) -> list[tuple[int, tuple[Array, Array]]]:
    """What keeps two neighbours apart: one stops at the side of a post; two diagonals at the line between them."""
    left, right = webs[i], webs[i + 1]
    at_left = _side(node, left.leg, _right(left.leg))
    at_right = _side(node, right.leg, -_right(right.leg))
    if right.is_post and not left.is_post:
        out = -_right(right.leg)
        return [(i, (at_right + out * BETWEEN, out))]
    if left.is_post and not right.is_post:
        out = _right(left.leg)
        return [(i + 1, (at_left + out * BETWEEN, out))]
    turn = np.column_stack([left.leg.along, -right.leg.along])
    if abs(np.linalg.det(turn)) < 1e-6:
        return []
    meeting = at_left + left.leg.along * float(np.linalg.solve(turn, at_right - at_left)[0])
    middle = left.leg.along + right.leg.along
    out = np.array([middle[1], -middle[0]]) / float(np.linalg.norm(middle))
    out = out if out[0] > 0 else -out
    return [
        (i, (meeting - out * BETWEEN / 2, -out)),
        (i + 1, (meeting + out * BETWEEN / 2, out)),
    ]


def _clear(node: Array, leg: Leg, plane: tuple[Array, Array]) -> float:
    """How far along a leg both corners of its end have come before a line."""
    point, normal = plane
    gain = float(leg.along @ normal)
    if gain <= 1e-9:
        return 0.0
    corners = (node + leg.heel * leg.back, node - leg.heel * leg.toe)
    return max(float((point - corner) @ normal) / gain for corner in corners)
