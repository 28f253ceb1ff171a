"""Outlines of the regions of equal number in an image, as polygons of few points.

Outlines run along the middles of the cracks between pixels and leave those by about a pixel where they are
straightened. Image frame: x to the right, y down, pixel (i, j) covers [j, j + 1] x [i, i + 1].
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

__all__ = ["outlines", "straightened"]

Floats = NDArray[np.float64]
Indices = NDArray[np.int64]

#: The four ways along a crack, clockwise: right, down, left, up.
_WAYS = np.array([[1, 0], [0, 1], [-1, 0], [0, -1]])
#: How far the middles of cracks may lie from a straightened outline, pixels: a slanting edge wavers by a pixel
#: where faces are drawn as lines besides triangles.
_TOLERANCE = 1.0
#: An outline of so few cracks goes round one pixel or two.
_SPECK = 6
#: Cracks in a row that make a straight stretch beside a corner.
_STRAIGHT = 4


def outlines(image: Indices) -> list[tuple[int, Floats]]:
    """Give the number and the points (n, 2) of each closed outline, clockwise round its region as seen.

    Specks of one pixel or two, and holes as small, are left out.

    Args:
        image: (height, width) int; what is negative belongs to no region.
    """
    number, start, way = _cracks(image)
    after = _chained(number, start, way, image.shape[1] + 1)
    corner = np.stack([start % (image.shape[1] + 1), start // (image.shape[1] + 1)], axis=1)
    found = []
    todo, following = np.ones(len(after), bool), after.tolist()
    for first in range(len(after)):
        if todo[first]:
            loop, at = [], first
            while todo[at]:
                todo[at] = False
                loop.append(at)
                at = following[at]
            if len(loop) > _SPECK:
                found.append((int(number[first]), straightened(_points(corner[loop], way[loop]))))
    return found


def _points(corners: Indices, ways: Indices) -> Floats:
    """Points (m, 2) along a loop of cracks (n,): the middle of each, and true corners.

    A corner is one where the outline runs straight for a while on both sides; the many small ones are the
    steps of a slanting edge.
    """
    turn = int(np.argmax(ways[1:] != ways[:-1])) + 1
    corners, ways = (
        np.concatenate([corners[turn:], corners[:turn]]),
        np.concatenate([ways[turn:], ways[:turn]]),
    )
    begins = np.concatenate([[0], np.flatnonzero(ways[1:] != ways[:-1]) + 1])
    long = np.diff(np.append(begins, len(ways))) >= _STRAIGHT
    true = begins[long & np.concatenate([long[-1:], long[:-1]])]
    points = np.concatenate([corners[true], corners + _WAYS[ways] / 2])
    return points[np.argsort(np.concatenate([true - 0.5, np.arange(len(ways))]), kind="stable")]


def straightened(points: Floats) -> Floats:
    """Give the points (m, 2) of a closed run of points (n, 2) that are needed to stay near all of them."""
    if len(points) < 4:
        return points
    far = int(((points - points[0]) ** 2).sum(axis=1).argmax())
    kept = np.zeros(len(points) + 1, bool)
    kept[[0, far, len(points)]] = True
    closed = np.vstack([points, points[:1]])
    spans = [(0, far), (far, len(points))]
    while spans:
        first, last = spans.pop()
        if last - first < 2:
            continue
        chord = closed[last] - closed[first]
        beside = closed[first + 1 : last] - closed[first]
        off = np.abs(beside[:, 0] * chord[1] - beside[:, 1] * chord[0]) / max(float(np.hypot(*chord)), 1e-9)
        worst = int(off.argmax())
        if off[worst] > _TOLERANCE:
            middle = first + 1 + worst
            kept[middle] = True
            spans += [(first, middle), (middle, last)]
    return points[kept[:-1]]


def _cracks(image: Indices) -> tuple[Indices, Indices, Indices]:
    """Number, start and way of each crack beside a region, the region on its right hand.

    Starts are corners of pixels, counted row by row.
    """
    height, width = image.shape
    padded = np.full((height + 2, width + 2), -1, np.int64)
    padded[1:-1, 1:-1] = image
    inner = padded[1:-1, 1:-1]
    # The neighbour across each side of a pixel, and the corner where that side begins, going clockwise.
    sides = (
        (padded[:-2, 1:-1], 0, 0),
        (padded[1:-1, 2:], 0, 1),
        (padded[2:, 1:-1], 1, 1),
        (padded[1:-1, :-2], 1, 0),
    )
    numbers, starts, ways = [], [], []
    for way, (neighbour, down, right) in enumerate(sides):
        row, column = np.nonzero((inner >= 0) & (inner != neighbour))
        numbers.append(inner[row, column])
        starts.append((row + down) * (width + 1) + column + right)
        ways.append(np.full(len(row), way))
    return np.concatenate(numbers), np.concatenate(starts), np.concatenate(ways)


def _chained(number: Indices, start: Indices, way: Indices, stride: int) -> Indices:
    """The crack (n,) of the same region that each crack leads to."""
    if not len(number):
        return np.zeros(0, np.int64)
    end = start + _WAYS[way, 0] + _WAYS[way, 1] * stride
    corners = int(max(start.max(), end.max())) + 1
    begins, wanted = number * corners + start, number * corners + end
    order = np.argsort(begins, kind="stable")
    ranked = begins[order]
    found = np.searchsorted(ranked, wanted)
    # Where two pixels of a region touch at a corner, two cracks begin: a turn to the right keeps to the own.
    second = np.minimum(found + 1, len(ranked) - 1)
    double = (second > found) & (ranked[second] == wanted)
    other = double & (way[order[found]] != (way + 1) % 4)
    after: Indices = order[np.where(other, second, found)]
    return after
