"""Flat figures cut into triangles, which can be split along a straight crease; mm, in the figure's own axes."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from functools import lru_cache
from itertools import pairwise

import numpy as np
from manifold3d import triangulate
from numpy.typing import NDArray

from shedbim.geometry.outlines import Outline

__all__ = ["Slice", "creased", "section_slice", "slice_of"]

Floats = NDArray[np.float64]
Integers = NDArray[np.int64]

#: A point this near to a crease lies on it, mm: makes no triangle that 32-bit floats cannot tell from a
#: line, and is a hundredth of what a shop saws to.
_ON_CREASE = 0.01


@dataclass(frozen=True, eq=False)
class Slice:
    """A section, or the outline of a plate, cut into chords and filled with triangles.

    Attributes:
        points: (n, 2) float, y and z of a section, x and y of a plate.
        triangles: (m, 3) int, anticlockwise seen from where the third axis points to.
        rim: (k, 2) int, from point to point along the outline, steel on the left.
        chord: (k,) int, which chord of the outline each piece of the rim lies on.
        outwards: (c, 2) float, unit, square to each chord, away from the steel.
    """

    points: Floats
    triangles: Integers
    rim: Integers
    chord: Integers
    outwards: Floats


@lru_cache(maxsize=512)
def section_slice(outline: Outline, chord_error: float) -> Slice:
    """Give the slice of an outline, chords at most ``chord_error`` mm off its arcs.

    It is kept: many parts have the same section.
    """
    return slice_of(outline.polygons(chord_error))


def slice_of(loops: Sequence[Floats]) -> Slice:
    """Give the slice of polygons (m, 2): the outer one anticlockwise, holes clockwise."""
    points = np.vstack(loops)
    following = np.arange(1, len(points) + 1)
    end = 0
    for loop in loops:
        begin, end = end, end + len(loop)
        following[end - 1] = begin
    chord = points[following] - points
    here = np.arange(len(points))
    return Slice(
        points,
        np.asarray(triangulate(list(loops)), np.int64),
        np.column_stack([here, following]),
        here,
        np.column_stack([chord[:, 1], -chord[:, 0]]) / np.hypot(*chord.T)[:, None],
    )


def creased(whole: Slice, gradient: Floats) -> Slice:
    """Give a slice none of whose triangles reaches across the line through the origin square to ``gradient``.

    Args:
        whole: what is split.
        gradient: (2,) float, of any length but zero.
    """
    height = (whole.points @ gradient / np.hypot(*gradient)).tolist()
    side = [0 if abs(h) <= _ON_CREASE else (1 if h > 0 else -1) for h in height]
    added: dict[tuple[int, int], int] = {}

    def walk(corners: list[int]) -> Iterator[int]:
        """The corners from first to last, and a point where the crease is crossed between two of them."""
        yield corners[0]
        for a, b in pairwise(corners):
            if side[a] * side[b] < 0:
                yield added.setdefault((min(a, b), max(a, b)), len(side) + len(added))
            yield b

    triangles: list[tuple[int, int, int]] = []
    for corners in whole.triangles.tolist():
        *ring, _ = walk([*corners, corners[0]])
        for wanted in {side[corner] for corner in corners} - {0} or {1}:
            # What the walk added lies on the crease, on neither side.
            part = [each for each in ring if each >= len(side) or side[each] != -wanted]
            triangles += [(part[0], b, c) for b, c in pairwise(part[1:])]
    runs = [list(walk(edge)) for edge in whole.rim.tolist()]
    crossings = [_crossing(whole.points, height, a, b) for a, b in added]
    return Slice(
        np.vstack([whole.points, *crossings]),
        np.array(triangles),
        np.array([edge for run in runs for edge in pairwise(run)]),
        np.repeat(whole.chord, [len(run) - 1 for run in runs]),
        whole.outwards,
    )


def _crossing(points: Floats, height: list[float], a: int, b: int) -> Floats:
    """The point (2,) between two points on different sides of a crease that lies on it."""
    place: Floats = points[a] + (points[b] - points[a]) * (height[a] / (height[a] - height[b]))
    return place
