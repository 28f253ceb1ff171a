"""What notches take out of a bar: volume and painted surface, from its solid."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from manifold3d import Manifold, OpType

from shedbim.geometry.outlines import Outline
from shedbim.model.bodies import bar_body, notch_body
from shedbim.model.end_cuts import EndCut
from shedbim.model.holes import Notch

__all__ = ["notched_away"]

#: Chords leave arcs by so little here, mm, that what is taken from a thin tube is right to 1e-4 of itself.
_CHORD_ERROR = 1e-3
#: The sides of a bar are square to x but for this much of a unit normal.
_SIDEWAYS = 1e-6


def notched_away(
    outline: Outline,
    length: float,
    ends: tuple[tuple[float, EndCut], tuple[float, EndCut]],
    notches: Sequence[Notch],
) -> tuple[float, float]:
    """Give the volume, mm3, and the painted surface, mm2, that notches take; see ``bodies.bar_body``.

    What two notches share is taken once. Ends and inner faces of closed sections are not painted.
    """
    taken = Manifold.batch_boolean([notch_body(notch) for notch in notches], OpType.Add)
    volume = (bar_body(outline, length, ends, _CHORD_ERROR) ^ taken).volume()
    filled = bar_body(Outline(outline.outer), length, ends, _CHORD_ERROR).as_original()
    mesh = (filled ^ taken).to_mesh64()
    points = np.asarray(mesh.vert_properties)[:, :3]
    triangles = np.asarray(mesh.tri_verts)
    if len(triangles) == 0:
        return volume, 0.0
    starts = np.asarray(mesh.run_index) // 3
    source = np.repeat(np.asarray(mesh.run_original_id), np.diff(starts))
    a, b, c = np.moveaxis(points[triangles], 1, 0)
    cross = np.cross(b - a, c - a)
    area = np.linalg.norm(cross, axis=1) / 2
    painted = (source == filled.original_id()) & (np.abs(cross[:, 0]) <= _SIDEWAYS * 2 * area)
    return volume, float(area[painted].sum())
