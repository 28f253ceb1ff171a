"""Bars between two points, with their ends cut by planes given in the axes of the kit."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from shedbim.geometry.placements import Placements, placement
from shedbim.model.bars import SQUARE, Bar, EndCut, bar_on_axis
from shedbim.sections.section import Section

__all__ = ["Planes", "along", "stick", "stop_before"]

Array = NDArray[np.float64]
_FLAT = 1e-9  # a slope below this is a square cut: a nanometre over a metre of depth


@dataclass(frozen=True, eq=False)
class Planes:
    """The plane or two planes that cut an end, by their normals (each (3,), any length, either sign)."""

    normals: tuple[Array, ...]
    notched: bool = False


def along(*normals: ArrayLike, notched: bool = False) -> Planes:
    """Give the end cut by planes with these normals."""
    return Planes(tuple(np.asarray(n, float) for n in normals), notched)


def stick(
    section: Section,
    start: ArrayLike,
    end: ArrayLike,
    up: ArrayLike,
    *,
    start_planes: Planes | None = None,
    end_planes: Planes | None = None,
) -> tuple[Bar, Placements]:
    """Give the bar whose centroid axis runs from ``start`` to ``end`` (3,), and its placement (3, 4).

    Args:
        up: direction that the section's z axis leans to.
        start_planes, end_planes: planes through the axis points that cut the ends; square where None.
    """
    p, q = np.asarray(start, float), np.asarray(end, float)
    frame = placement(p, q - p, up)
    bar = bar_on_axis(
        section, float(np.linalg.norm(q - p)), _cut(frame, start_planes), _cut(frame, end_planes)
    )
    frame[:, 3] = p - frame[:, 0] * bar.axis[0]
    return bar, frame


def _cut(frame: Placements, planes: Planes | None) -> EndCut:
    if planes is None:
        return SQUARE
    slopes = []
    for normal in planes.normals:
        nx, ny, nz = normal @ frame[:, :3]
        a, b = -ny / nx, -nz / nx
        slopes.append((float(a) if abs(a) > _FLAT else 0.0, float(b) if abs(b) > _FLAT else 0.0))
    return EndCut(tuple(slopes), notched=planes.notched)


def stop_before(
    section: Section,
    start: ArrayLike,
    end: ArrayLike,
    up: ArrayLike,
    at_start: Sequence[tuple[Array, Array]],
    at_end: Sequence[tuple[Array, Array]],
) -> tuple[Array, Array]:
    """Give the axis points (3,) between which a square-ended bar has no corner behind a plane.

    The bar's axis runs from ``start`` to ``end``; each plane is (point, normal into the free side).
    """
    p, q = np.asarray(start, float), np.asarray(end, float)
    frame = placement(p, q - p, up)
    low_y, low_z, high_y, high_z = section.outline.bounds
    corners = np.array([(y, z) for y in (low_y, high_y) for z in (low_z, high_z)]) @ frame[:, 1:3].T
    x = frame[:, 0]
    return p + x * _set_back(p + corners, x, at_start), q - x * _set_back(q + corners, -x, at_end)


def _set_back(corners: Array, inwards: Array, planes: Sequence[tuple[Array, Array]]) -> float:
    """How far the corners (n, 3) of a square end must move ``inwards`` to stand before every plane, mm."""
    distance = 0.0
    for point, normal in planes:
        gain = float(normal @ inwards)
        if gain > _FLAT:
            distance = max(distance, float(((point - corners) @ normal).max()) / gain)
    return distance
