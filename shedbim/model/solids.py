"""Exact solids of parts, in the part's own frame, mm."""

from __future__ import annotations

import numpy as np
from manifold3d import CrossSection, FillRule, Manifold

from shedbim.model.bars import Bar, EndCut
from shedbim.tolerance import SOLID_CHORD_ERROR

__all__ = ["solid"]


def solid(bar: Bar, chord_error: float = SOLID_CHORD_ERROR) -> Manifold:
    """Give the solid of a bar, arcs of its section cut into chords that leave them by ``chord_error`` mm."""
    polygons = [loop.tolist() for loop in bar.section.outline.polygons(chord_error)]
    prism = Manifold.extrude(CrossSection(polygons, FillRule.EvenOdd), bar.length)
    # The extrusion runs along z over (y, z): turn it so that it runs along x.
    body = prism.transform(np.array([[0.0, 0, 1, 0], [1, 0, 0, 0], [0, 1, 0, 0]]))
    first, last = bar.axis
    return _cut(_cut(body, bar.start, first, facing=1.0), bar.end, last, facing=-1.0)


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
