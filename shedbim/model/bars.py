"""Bars: a section drawn along a straight axis, each end cut by one plane or two.

A bar's own frame: x along it from its start, y and z the section's axes through the centroid; x = 0 is
the first point of steel, x = ``length`` the last, so ``length`` is what the saw is set to.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from shedbim.geometry.outlines import Outline
from shedbim.sections.section import STEEL_DENSITY, Section

__all__ = ["SQUARE", "Bar", "EndCut", "bar_on_axis"]

Array = NDArray[np.float64]
_REACH_CHORD_ERROR = 1e-3


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


@dataclass(frozen=True)
class Bar:
    """A straight piece of one section: its length long point to long point (mm) and its two end cuts."""

    section: Section
    length: float
    start: EndCut = SQUARE
    end: EndCut = SQUARE

    @cached_property
    def axis(self) -> tuple[float, float]:
        """Where the centroid axis enters and leaves the steel, x in mm."""
        return -_least(self.section.outline, self.start), self.length - _greatest(
            self.section.outline, self.end
        )

    @cached_property
    def volume(self) -> float:
        """Exact volume, mm³. A plane cut through the axis of centroids takes as much as it leaves."""
        first, last = self.axis
        outline = self.section.outline
        corrections = _mean_offset(outline, self.end, at_end=True) - _mean_offset(
            outline, self.start, at_end=False
        )
        return outline.area * (last - first + corrections)

    @property
    def mass(self) -> float:
        """Mass, kg."""
        return self.volume * STEEL_DENSITY

    @property
    def surface(self) -> float:
        """Painted outer surface without the cut ends, mm²."""
        first, last = self.axis
        return self.section.outline.outer_perimeter * (last - first)


def bar_on_axis(section: Section, axis_length: float, start: EndCut = SQUARE, end: EndCut = SQUARE) -> Bar:
    """Give the bar whose axis is ``axis_length`` mm long between its two cuts; see ``Bar.axis`` for its frame."""
    extra = _greatest(section.outline, end) - _least(section.outline, start)
    return Bar(section, axis_length + extra, start, end)


def _points(outline: Outline, cut: EndCut) -> Array:
    """The points of an outer loop among which a cut reaches its extremes: corners, and where its planes cross."""
    corners = outline.rim
    if len(cut.slopes) == 1:
        return corners
    following = np.roll(corners, -1, axis=0)
    first, second = np.array(cut.slopes)
    gradient = first - second
    here, there = corners @ gradient, following @ gradient
    crossed = here * there < 0
    share = here[crossed] / (here[crossed] - there[crossed])
    crossings = corners[crossed] + share[:, None] * (following[crossed] - corners[crossed])
    return np.vstack([corners, crossings])


def _least(outline: Outline, cut: EndCut) -> float:
    """The least offset of a start cut over the outline, mm; 0 or less."""
    return 0.0 if cut.is_square else float(cut.offsets(_points(outline, cut), at_end=False).min())


def _greatest(outline: Outline, cut: EndCut) -> float:
    """The greatest offset of an end cut over the outline, mm; 0 or more."""
    return 0.0 if cut.is_square else float(cut.offsets(_points(outline, cut), at_end=True).max())


def _mean_offset(outline: Outline, cut: EndCut, *, at_end: bool) -> float:
    """The mean of a cut's offsets over the area of an outline, mm; 0 for one plane."""
    if len(cut.slopes) == 1:
        return 0.0
    (a1, b1), (a2, b2) = cut.slopes
    # max(f1, f2) = f1 + max(0, f2 - f1) and min(f1, f2) = f1 - max(0, f1 - f2); f1 has mean 0.
    sign = 1.0 if cut.notched == at_end else -1.0
    gradient = sign * np.array([a2 - a1, b2 - b1])
    total = sum(_positive_integral(loop, gradient) for loop in outline.polygons(_REACH_CHORD_ERROR))
    return sign * float(total) / outline.area


def _positive_integral(loop: Array, gradient: Array) -> float:
    """The integral of max(0, gradient · p) over a polygon (n, 2), negative for a clockwise one."""
    height = loop @ gradient
    following, next_height = np.roll(loop, -1, axis=0), np.roll(height, -1)
    clipped: list[Array] = []
    for p, q, hp, hq in zip(loop, following, height, next_height, strict=True):
        if hp >= 0:
            clipped.append(p)
        if (hp >= 0) != (hq >= 0):
            clipped.append(p + (q - p) * (hp / (hp - hq)))
    if len(clipped) < 3:
        return 0.0
    a = np.array(clipped)
    b = np.roll(a, -1, axis=0)
    cross = a[:, 0] * b[:, 1] - b[:, 0] * a[:, 1]
    moment = ((a + b) * cross[:, None]).sum(axis=0) / 6
    return float(moment @ gradient)
