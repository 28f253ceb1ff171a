"""Outlines of plates, holes and fasteners as polygons, mm.

Holes and shanks are inscribed polygons of at least eight sides: a bolt then keeps clear of its hole at whatever
angle the two stand, as the clearance of every hole is more than the 8 % that such a polygon is narrower by.
"""

from __future__ import annotations

from functools import lru_cache
from math import pi, sqrt

import numpy as np
from numpy.typing import NDArray

from shedbim.fasteners.fastener import Disc
from shedbim.geometry.outlines import Loop, circle
from shedbim.model.holes import Hole
from shedbim.model.plates import Plate

__all__ = ["disc_polygons", "hole_polygon", "plate_polygons"]

Array = NDArray[np.float64]

#: Chords leave the arc of a hole or a shank by this share of its radius at most: 1 - cos(pi/8) for eight sides.
_ROUND_SHARE = 0.0762


def plate_polygons(plate: Plate, chord_error: float) -> list[Array]:
    """Give the outline of a plate, anticlockwise, then its holes, clockwise."""
    outer, *holes = plate.outline.loops
    polygons = [outer.polygon(chord_error)]
    for hole, loop in zip(plate.holes, holes, strict=True):
        if hole.slot:
            polygons.append(loop.polygon(_finer(chord_error, hole.diameter)))
        else:
            polygons.append(_round(hole.diameter, chord_error)[::-1] + np.array(hole.centre[:2]))
    return polygons


def hole_polygon(hole: Hole, chord_error: float) -> Array:
    """Give the opening (m, 2) of a hole about its centre, anticlockwise; a slot runs along the first axis."""
    if not hole.slot:
        return _round(hole.diameter, chord_error)
    u, v = hole.slot / 2, hole.diameter / 2
    corners = np.array([[u, -v], [u, v], [-u, v], [-u, -v]])
    return Loop(corners, np.array([1.0, 0.0, 1.0, 0.0])).polygon(_finer(chord_error, hole.diameter))


def disc_polygons(disc: Disc, chord_error: float) -> list[Array]:
    """Give the outline of a prism of a fastener, anticlockwise, then its bore, clockwise.

    Hexagons and squares stand with two flats square to y.
    """
    if disc.form == "round":
        outer = _round(disc.size, chord_error)
    else:
        sides = 6 if disc.form == "hexagon" else 4
        corner = disc.size / sqrt(3) if sides == 6 else disc.size / sqrt(2)
        angle = 2 * pi * np.arange(sides) / sides + (0.0 if sides == 6 else pi / 4)
        outer = corner * np.column_stack([np.cos(angle), np.sin(angle)])
    return [outer, _round(disc.bore, chord_error)[::-1]] if disc.bore else [outer]


def _finer(chord_error: float, diameter: float) -> float:
    """The chord error for a hole or shank, mm."""
    return min(chord_error, _ROUND_SHARE * diameter / 2)


@lru_cache(maxsize=512)
def _round(diameter: float, chord_error: float) -> Array:
    """An inscribed polygon (m, 2) about the origin, anticlockwise; kept, and not to be written to."""
    polygon = circle(diameter).polygon(_finer(chord_error, diameter))
    polygon.setflags(write=False)
    return polygon
