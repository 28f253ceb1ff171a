"""The largest circle and the largest upright rectangle inside a polygon, by halving squares until no better fits.

Glossary:
    loops     a polygon: its rim and what stands within it, closed chains of points (n, 2), mm, in any order
    measure   how large the shape about each of many points may be; negative outside the polygon
"""

from __future__ import annotations

from collections.abc import Callable, Sequence

import numpy as np
from numpy.typing import NDArray

__all__ = ["FINENESS", "largest_circle", "largest_rectangle"]

Floats = NDArray[np.float64]
Bools = NDArray[np.bool_]

#: What is found is smaller than the largest there is by less than this, mm.
FINENESS = 0.5
#: Squares that the search begins with along the longer side of the polygon.
_FIRST = 12


def largest_circle(loops: Sequence[Floats]) -> tuple[Floats, float]:
    """Give the centre (2,) and the radius of the largest circle in a polygon, mm."""
    start, edge = _edges(loops)

    def measure(points: Floats) -> Floats:
        offset = start - points[:, None]
        t = np.clip(-(offset * edge).sum(axis=2) / (edge * edge).sum(axis=1), 0.0, 1.0)
        nearest = offset + t[..., None] * edge
        distance = np.sqrt((nearest * nearest).sum(axis=2).min(axis=1))
        return np.asarray(np.where(_within(points, start, edge), distance, -distance))

    return _search(loops, measure, lambda half: half * 2**0.5)


def largest_rectangle(
    loops: Sequence[Floats], proportion: float, margin: float = 0.0
) -> tuple[Floats, float]:
    """Give the centre (2,) and the height of the largest upright rectangle in a polygon, mm; not above 0 for none.

    Args:
        loops: the polygon.
        proportion: its width by its height.
        margin: how much must stay free around it, mm.
    """
    start, edge = _edges(loops)

    def measure(points: Floats) -> Floats:
        offset = start - points[:, None]
        inside = _within(points, start, edge)
        free = np.full(len(points), np.inf)
        for t in _turns(offset, edge, proportion, margin):
            x, y = np.moveaxis(np.abs(offset + np.clip(t, 0.0, 1.0)[..., None] * edge), 2, 0)
            room = np.where(
                inside[:, None],
                np.maximum((x - margin) / proportion, y - margin),
                np.maximum(x / proportion, y),
            )
            free = np.minimum(free, room.min(axis=1))
        return np.where(inside, free, -free)

    centre, half = _search(loops, measure, lambda half: half * max(1.0, 1.0 / proportion))
    return centre, 2.0 * half


def _turns(offset: Floats, edge: Floats, proportion: float, margin: float) -> list[Floats]:
    """Where along each edge the room of a rectangle about each point may be least (m, n), each a share of the edge.

    It is a convex function made of straight parts: least at an end, or where one part gives way to another.
    """
    found = [np.zeros(offset.shape[:2]), np.ones(offset.shape[:2])]
    with np.errstate(divide="ignore", invalid="ignore"):
        found += [-offset[..., axis] / edge[:, axis] for axis in (0, 1)]
        for sign in (1.0, -1.0):
            # The sides meet where x / proportion - y, or the sum, is as at a corner; 0 is without margin, for outside.
            for corner in (1.0, -1.0, 0.0):
                level = corner * (margin / proportion - margin)
                at = offset[..., 0] / proportion + sign * offset[..., 1]
                found.append((level - at) / (edge[:, 0] / proportion + sign * edge[:, 1]))
    return [np.nan_to_num(each, nan=0.0, posinf=1.0, neginf=0.0) for each in found]


def _edges(loops: Sequence[Floats]) -> tuple[Floats, Floats]:
    """Where the edges of a polygon start (n, 2) and how they run (n, 2); points that stand twice are one."""
    start = np.concatenate(loops)
    edge = np.concatenate([np.roll(loop, -1, axis=0) - loop for loop in loops])
    long = (edge != 0).any(axis=1)
    return start[long], edge[long]


def _within(points: Floats, start: Floats, edge: Floats) -> Bools:
    """Whether points (m, 2) are in the polygon: an odd number of edges lies to their right."""
    end = start + edge
    crossed = (start[:, 1] > points[:, None, 1]) != (end[:, 1] > points[:, None, 1])
    with np.errstate(divide="ignore", invalid="ignore"):
        at = start[:, 0] + (points[:, None, 1] - start[:, 1]) / edge[:, 1] * edge[:, 0]
    return np.asarray((crossed & (at > points[:, None, 0])).sum(axis=1) % 2 == 1)


def _search(
    loops: Sequence[Floats], measure: Callable[[Floats], Floats], gain: Callable[[float], float]
) -> tuple[Floats, float]:
    """The point with the greatest measure, and that; ``gain`` is how much greater it can be within a square."""
    corners = np.concatenate(loops)
    low, high = corners.min(axis=0), corners.max(axis=0)
    half = float((high - low).max()) / _FIRST / 2
    number = np.ceil((high - low) / (2 * half)).astype(int).clip(1)
    rows = np.stack(np.meshgrid(*(np.arange(n) for n in number), indexing="ij"), axis=-1).reshape(-1, 2)
    points = low + (2 * rows + 1) * half
    best, most = points[0], -np.inf
    while len(points):
        size = measure(points)
        top = int(size.argmax())
        if size[top] > most:
            best, most = points[top], float(size[top])
        points = points[size + gain(half) > most + FINENESS / 2]
        half /= 2
        steps = np.array([(-1, -1), (-1, 1), (1, -1), (1, 1)]) * half
        points = (points[:, None] + steps).reshape(-1, 2)
    return best, most
