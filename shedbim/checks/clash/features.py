"""What happens along a bar: its ends, holes and notches, each with the stretch of the axis it takes."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.model.bars import Bar
from shedbim.model.end_cuts import EndCut
from shedbim.model.holes import Hole, Notch
from shedbim.model.shapes import Shape

__all__ = ["Feature", "Features", "features_of"]

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]

#: Farther than any end, mm: the steel stops for good there.
_FAR = 1e6
#: Bars are laid behind one another so far apart, mm, that one sorted line holds them all.
_APART = 1e7


@dataclass(frozen=True)
class Feature:
    """One thing along a bar.

    Attributes:
        low, high: from where to where it reaches along the axis, mm.
        what: ``start``, ``end``, a hole or a notch.
        x: where it lies, mm: what stands beside it is measured from here.
    """

    low: float
    high: float
    what: str | Hole | Notch
    x: float


@dataclass(frozen=True, eq=False)
class Features:
    """The features of all bars on one line.

    Attributes:
        of: of each shape, sorted by where they begin; none for what is no bar.
        first: (p,) how many features stand before those of each shape on the line.
        begin, reach: (f,) where each begins, and the farthest that it or one before it reaches.
    """

    of: tuple[tuple[Feature, ...], ...]
    first: Ints
    begin: Floats
    reach: Floats

    def within(self, shape: Ints, stretch: Floats) -> Ints:
        """Give which features of its shape each stretch (m, 2), mm, can hold: from and to before (m, 2)."""
        shift = shape * _APART
        start = np.searchsorted(self.reach, shift + stretch[:, 0], side="left")
        stop = np.searchsorted(self.begin, shift + stretch[:, 1], side="right")
        return np.stack([start, np.maximum(start, stop)], axis=1) - self.first[shape][:, None]


def features_of(shapes: Sequence[Shape]) -> Features:
    """Give the features of all shapes."""
    found = tuple(_of(shape) if isinstance(shape, Bar) else () for shape in shapes)
    begin = [k * _APART + each.low for k, features in enumerate(found) for each in features]
    reach = [
        k * _APART + high
        for k, features in enumerate(found)
        for high in np.maximum.accumulate([each.high for each in features])
    ]
    number = np.array([len(features) for features in found], np.int64)
    return Features(found, np.cumsum(number) - number, np.array(begin), np.array(reach))


def _of(bar: Bar) -> tuple[Feature, ...]:
    """The features of a bar by where they begin."""
    first, last = bar.axis
    start, end = bar.pressed
    cut_start = first + _most(bar, bar.start, 1.0)
    cut_end = last - _most(bar, bar.end, -1.0)
    found = [
        Feature(-_FAR, max(cut_start, start.length if start else 0.0), "start", 0.0),
        Feature(min(cut_end, bar.length - (end.length if end else 0.0)), _FAR, "end", bar.length),
    ]
    for hole in bar.holes:
        reach = (hole.diameter + hole.slot) / 2 + hole.thickness
        found.append(Feature(hole.centre[0] - reach, hole.centre[0] + reach, hole, hole.centre[0]))
    for notch in bar.notches:
        low, high = _along(notch)
        found.append(Feature(low, high, notch, low))
    return tuple(sorted(found, key=lambda each: (each.low, each.high)))


def _most(bar: Bar, cut: EndCut, sign: float) -> float:
    """How far the planes of a cut reach into the bar from its axis point at most, over the section's box."""
    low_y, low_z, high_y, high_z = bar.section.outline.bounds
    corners = np.array([[low_y, low_z], [low_y, high_z], [high_y, low_z], [high_y, high_z]])
    return float((sign * (corners @ np.array(cut.slopes).T)).max())


def _along(notch: Notch) -> tuple[float, float]:
    """From where to where a notch reaches along the bar."""
    u, v = np.array(notch.u), np.array(notch.v)
    x = notch.origin[0] + np.array(notch.outline) @ np.array([u[0], v[0]])
    deep = notch.depth * float(u[1] * v[2] - u[2] * v[1])
    return float(x.min() + min(deep, 0.0)), float(x.max() + max(deep, 0.0))
