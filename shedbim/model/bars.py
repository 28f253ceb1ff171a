"""Bars: a section drawn along a straight axis, each end cut by one plane or two, with holes and notches.

An end of a round tube may be pressed flat: see ``pressed_ends``.

A bar's own frame: x along it from its start, y and z the section's axes through the centroid; x = 0 is
the first point of steel, x = ``length`` the last, so ``length`` is what the saw is set to.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from shedbim.geometry.outlines import Outline
from shedbim.model.end_cuts import SQUARE, EndCut
from shedbim.model.holes import Hole, Notch
from shedbim.model.notching import notched_away
from shedbim.model.openings import hole_surface, hole_volume
from shedbim.model.pressed_ends import PressedEnds, bored, check_pressed, flat_corners, less_surface
from shedbim.sections.profiles import Pipe
from shedbim.sections.section import STEEL_DENSITY, Profile, Section

__all__ = ["SQUARE", "Bar", "EndCut", "bar_on_axis"]

Array = NDArray[np.float64]
Box = tuple[tuple[float, float, float], tuple[float, float, float]]

_REACH_CHORD_ERROR = 1e-3


@dataclass(frozen=True)
class Bar:
    """A straight piece of one section.

    Attributes:
        length: long point to long point, mm.
        start, end: its two end cuts.
        holes, notches: what is cut out of it besides, in its own frame.
        pressed: what its ends are pressed to; None for an end that is left as it was cut.

    Raises:
        ModelError: when an end is pressed that cannot be.
    """

    section: Section
    length: float
    start: EndCut = SQUARE
    end: EndCut = SQUARE
    holes: tuple[Hole, ...] = ()
    notches: tuple[Notch, ...] = ()
    pressed: PressedEnds = (None, None)

    def __post_init__(self) -> None:
        """Refuse ends that cannot be pressed."""
        check_pressed(self.section.profile, self.length, (self.start, self.end), self.pressed)

    @cached_property
    def axis(self) -> tuple[float, float]:
        """Where the centroid axis enters and leaves the steel, x in mm."""
        return -_least(self.section.outline, self.start), self.length - _greatest(
            self.section.outline, self.end
        )

    @cached_property
    def volume(self) -> float:
        """Volume, mm³, exact: a plane cut through the axis of centroids takes as much as it leaves.

        An end that is pressed flat keeps its steel. Holes and notches are off; no hole may reach into a notch, a
        fillet, a taper or an end.
        """
        first, last = self.axis
        outline = self.section.outline
        corrections = _mean_offset(outline, self.end, at_end=True) - _mean_offset(
            outline, self.start, at_end=False
        )
        drilled = sum(hole_volume(self.bored(hole), hole) for hole in self.holes)
        return outline.area * (last - first + corrections) - drilled - self._notched_away[0]

    @property
    def mass(self) -> float:
        """Mass, kg."""
        return self.volume * STEEL_DENSITY

    @cached_property
    def surface(self) -> float:
        """Painted outer surface without the cut ends and the walls of holes and notches, mm²."""
        first, last = self.axis
        drilled = sum(hole_surface(self.bored(hole), hole) for hole in self.holes)
        whole = self.section.outline.outer_perimeter * (last - first)
        return whole - self._pressed_away - drilled - self._notched_away[1]

    @property
    def box(self) -> Box:
        """Its bounding box before notches: least and greatest corner, mm."""
        low_y, low_z, high_y, high_z = self.section.outline.bounds
        points = [np.array([[low_y, low_z], [high_y, high_z]])]
        profile = self.section.profile
        if isinstance(profile, Pipe):
            points += [flat_corners(profile, each) for each in self.pressed if each is not None]
        low, high = (tuple(f(np.vstack(points), axis=0).tolist()) for f in (np.min, np.max))
        return (0.0, *low), (self.length, *high)

    def bored(self, hole: Hole) -> Profile | None:
        """What a hole of it is drilled through: its profile, or None for the level steel of a flat."""
        return bored(self.section.profile, self.length, self.pressed, hole)

    @cached_property
    def _pressed_away(self) -> float:
        """How much painted surface went when ends were pressed flat, mm²."""
        profile = self.section.profile
        if not isinstance(profile, Pipe):
            return 0.0
        return sum(less_surface(profile, each) for each in self.pressed if each is not None)

    @cached_property
    def _notched_away(self) -> tuple[float, float]:
        """What the notches take of volume, mm³, and of painted surface, mm²."""
        if not self.notches:
            return 0.0, 0.0
        first, last = self.axis
        ends = ((first, self.start), (last, self.end))
        return notched_away(self.section.outline, self.length, ends, self.notches)


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
