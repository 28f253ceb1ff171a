"""Prisms, drills and end cuts as solids: what the solids of parts are put together from, mm."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from manifold3d import CrossSection, FillRule, Manifold
from numpy.typing import NDArray

from shedbim.geometry.outlines import Outline
from shedbim.model.end_cuts import EndCut
from shedbim.model.holes import Hole, Notch
from shedbim.model.openings import drill_reach
from shedbim.model.polygons import hole_polygon
from shedbim.sections.section import Profile

__all__ = ["bar_body", "drill", "notch_body", "prism"]

Array = NDArray[np.float64]


def prism(polygons: Sequence[Array], low: float, high: float) -> Manifold:
    """Give the prism over polygons in x and y, holes by the even-odd rule, from z = ``low`` to ``high``."""
    flat = CrossSection([polygon.tolist() for polygon in polygons], FillRule.EvenOdd)
    return Manifold.extrude(flat, high - low).translate((0.0, 0.0, low))


def bar_body(
    outline: Outline,
    length: float,
    ends: tuple[tuple[float, EndCut], tuple[float, EndCut]],
    chord_error: float,
) -> Manifold:
    """Give a bar without holes and notches.

    Args:
        outline: of its section.
        length: long point to long point, mm.
        ends: of each, start first, where the axis meets it and its cut.
        chord_error: how far the chords of arcs leave them at most, mm.
    """
    # The extrusion runs along z over (y, z): turn it so that it runs along x.
    upright = prism(outline.polygons(chord_error), 0.0, length)
    body = upright.transform(np.array([[0.0, 0, 1, 0], [1, 0, 0, 0], [0, 1, 0, 0]]))
    (first, start), (last, end) = ends
    return _cut(_cut(body, start, first, facing=1.0), end, last, facing=-1.0)


def drill(profile: Profile | None, hole: Hole, chord_error: float) -> Manifold:
    """Give what a hole in a wall of a bar takes: through that wall, just beyond its faces, into no other.

    ``profile`` is None where the end of a tube is pressed flat.
    """
    axis = np.array(hole.axis)
    along = np.array(hole.along) if hole.slot else np.eye(3)[int(np.abs(axis).argmin())]
    along = along - axis * float(along @ axis)
    along /= np.linalg.norm(along)
    body = prism([hole_polygon(hole, chord_error)], *drill_reach(profile, hole))
    return body.transform(np.column_stack([along, np.cross(axis, along), axis, hole.centre]))


def notch_body(notch: Notch) -> Manifold:
    """Give what a notch takes."""
    u, v = np.array(notch.u), np.array(notch.v)
    body = prism([np.array(notch.outline)], 0.0, notch.depth)
    return body.transform(np.column_stack([u, v, np.cross(u, v), notch.origin]))


def _cut(body: Manifold, cut: EndCut, x0: float, *, facing: float) -> Manifold:
    """Keep what lies on the ``facing`` side (+1 towards +x) of the planes through (x0, 0, 0)."""
    if cut.is_square:
        return body
    normals = [np.array([1.0, -a, -b]) * facing for a, b in cut.slopes]
    offsets = [n[0] * x0 / np.linalg.norm(n) for n in normals]
    if cut.notched:
        kept = [body.trim_by_plane(n.tolist(), o) for n, o in zip(normals, offsets, strict=True)]
        return kept[0] + kept[1]
    for normal, offset in zip(normals, offsets, strict=True):
        body = body.trim_by_plane(normal.tolist(), offset)
    return body
