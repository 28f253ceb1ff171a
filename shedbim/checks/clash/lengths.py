"""Lengths of bars: the steel within reach of another piece, the same wherever along whichever bar it lies.

A purlin on a rafter meets the same steel at each course, and a rail on its column whatever the bay is long. What two
pieces do to one another follows from those lengths alone, so that it is worked out once for them all.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from math import ceil

import numpy as np
from manifold3d import Manifold
from numpy.typing import NDArray

from shedbim.checks.clash.features import Feature, Features, features_of
from shedbim.geometry.rows import distinct_rows
from shedbim.model.bars import SQUARE, Bar
from shedbim.model.holes import Hole, Notch
from shedbim.model.shapes import Shape
from shedbim.model.solids import solid

__all__ = ["CHORD_ERROR", "Lengths"]

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]

#: Chords leave arcs by this at most, mm: bolts keep clear of their holes, and two round things that touch are told
#: apart by half of what counts as contact at most.
CHORD_ERROR = 0.25
#: Solids of lengths are cut longer than asked for, to the next multiple of this, mm, so that they serve again.
_STEP = 64.0
#: What ends where a stretch ends belongs to it, though noise may say otherwise, mm.
_MARGIN = 1e-3
#: Decimals, mm, to which features of two lengths are compared.
_DECIMALS = 4


@dataclass(frozen=True)
class _Length:
    """A length of a bar: the shape it is of, and from which to before which of its features it holds."""

    shape: int
    start: int
    stop: int


class Lengths:
    """Numbers for lengths of shapes, and their solids; equal lengths of any two bars have one number.

    It remembers what it has met: ask it for all pairs of one kind at once.
    """

    def __init__(self, shapes: Sequence[Shape]) -> None:
        self._shapes = tuple(shapes)
        self._is_bar = np.array([isinstance(shape, Bar) for shape in shapes], bool)
        self._features: Features = features_of(shapes)
        self._number: dict[object, int] = {}
        self._lengths: list[_Length] = []
        self._solids: dict[tuple[int, float, float], Manifold] = {}

    def numbered(self, shape: Ints, stretch: Floats) -> tuple[Ints, Floats]:
        """Give the number of each length (m,), and where along the bar its own frame begins (m,), mm.

        Args:
            shape: (m,) row of the shape.
            stretch: (m, 2) from where to where along it, mm; of no matter for what is no bar.
        """
        held = self._features.within(shape, stretch + np.array([-_MARGIN, _MARGIN]))
        held[~self._is_bar[shape]] = 0
        first, kind = distinct_rows(np.column_stack([shape, held]))
        known = [self._known(_Length(int(shape[k]), *held[k].tolist())) for k in first]
        number, origin = np.array([k for k, _ in known], np.int64), np.array([x for _, x in known])
        plain = self._is_bar[shape] & (held[:, 0] == held[:, 1])
        return number[kind], np.where(plain, stretch.mean(axis=1), origin[kind])

    def solid(self, number: int, low: float, high: float) -> Manifold:
        """Give the solid of a length in its own frame, true from ``low`` to ``high`` along it, mm."""
        length = self._lengths[number]
        shape = self._shapes[length.shape]
        if not isinstance(shape, Bar):
            low, high = 0.0, 0.0
        else:
            low, high = -_STEP * ceil(-low / _STEP), _STEP * ceil(high / _STEP)
        key = number, low, high
        if key not in self._solids:
            self._solids[key] = (
                self._cut_out(shape, length, low, high)
                if isinstance(shape, Bar)
                else solid(shape, CHORD_ERROR)
            )
        return self._solids[key]

    def _held(self, length: _Length) -> tuple[Feature, ...]:
        return self._features.of[length.shape][length.start : length.stop]

    def _known(self, length: _Length) -> tuple[int, float]:
        """The number of a length and where its frame begins."""
        held = self._held(length)
        x = held[0].x if held else 0.0
        shape = self._shapes[length.shape]
        key: object = length.shape
        if isinstance(shape, Bar):
            key = (shape.section, *(_seen(shape, each, x) for each in held))
        if key not in self._number:
            self._number[key] = len(self._lengths)
            self._lengths.append(length)
        return self._number[key], x

    def _cut_out(self, bar: Bar, length: _Length, low: float, high: float) -> Manifold:
        """The solid of a length of a bar; cut square where the bar goes on."""
        held = self._held(length)
        x = held[0].x if held else 0.0
        whats = [each.what for each in held]
        first = 0.0 if "start" in whats else x + low
        last = bar.length if "end" in whats else x + high
        piece = Bar(
            bar.section,
            last - first,
            bar.start if "start" in whats else SQUARE,
            bar.end if "end" in whats else SQUARE,
            tuple(_moved(what, first) for what in whats if isinstance(what, Hole)),
            tuple(_slid(what, first) for what in whats if isinstance(what, Notch)),
            (
                bar.pressed[0] if "start" in whats else None,
                bar.pressed[1] if "end" in whats else None,
            ),
        )
        return solid(piece, CHORD_ERROR).translate((first - x, 0.0, 0.0))


def _seen(bar: Bar, feature: Feature, x: float) -> tuple[object, ...]:
    """A feature as seen from x along its bar, in a form that equal ones share."""
    what, place = feature.what, round(feature.x - x, _DECIMALS)
    if what == "start":
        return "start", place, bar.start, bar.pressed[0]
    if what == "end":
        return "end", place, bar.end, bar.pressed[1]
    if isinstance(what, Hole):
        centre = tuple(round(each, _DECIMALS) for each in what.centre[1:])
        return "hole", place, centre, what.axis, what.diameter, what.thickness, what.slot, what.along
    assert isinstance(what, Notch)
    origin = (round(what.origin[0] - x, _DECIMALS), *(round(each, _DECIMALS) for each in what.origin[1:]))
    return "notch", origin, what.outline, what.u, what.v, what.depth


def _moved(hole: Hole, x: float) -> Hole:
    """A hole as seen from x along the bar."""
    return replace(hole, centre=(hole.centre[0] - x, *hole.centre[1:]))


def _slid(notch: Notch, x: float) -> Notch:
    """A notch as seen from x along the bar."""
    return replace(notch, origin=(notch.origin[0] - x, *notch.origin[1:]))
