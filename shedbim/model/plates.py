"""Plates: an outline with holes, cut from flat plate.

A plate's own frame: the outline lies in x and y, the plate between z = 0 and z = its thickness.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np

from shedbim.geometry.outlines import Loop, Outline, circle
from shedbim.model.holes import Hole
from shedbim.sections.section import STEEL_DENSITY

__all__ = ["Plate", "rectangle"]

Box = tuple[tuple[float, float, float], tuple[float, float, float]]


@dataclass(frozen=True)
class Plate:
    """A flat plate.

    Attributes:
        corners: (x, y) of the outline's corners, anticlockwise, mm.
        thickness: mm.
        holes: drilled through, their axes along z and their centres at half the thickness.
        bulges: of each side to the next corner as in ``Loop``; empty where all are straight.
    """

    corners: tuple[tuple[float, float], ...]
    thickness: float
    holes: tuple[Hole, ...] = ()
    bulges: tuple[float, ...] = ()

    @cached_property
    def outline(self) -> Outline:
        """The outline with its holes."""
        points = np.array(self.corners, float)
        bulges = np.array(self.bulges, float) if self.bulges else np.zeros(len(points))
        return Outline(Loop(points, bulges), tuple(_opening(hole) for hole in self.holes))

    @property
    def size(self) -> tuple[float, float]:
        """The smallest rectangle along x and y that it is cut from, mm, the longer side first."""
        low_x, low_y, high_x, high_y = self.outline.bounds
        sides = sorted((high_x - low_x, high_y - low_y), reverse=True)
        return sides[0], sides[1]

    @property
    def volume(self) -> float:
        """Exact volume, mm3."""
        return self.outline.area * self.thickness

    @property
    def mass(self) -> float:
        """Mass, kg."""
        return self.volume * STEEL_DENSITY

    @property
    def surface(self) -> float:
        """Painted surface: both faces and the edge, the walls of holes left out, mm2."""
        return 2 * self.outline.area + self.outline.outer_perimeter * self.thickness

    @property
    def box(self) -> Box:
        """Its bounding box: least and greatest corner, mm."""
        low_x, low_y, high_x, high_y = self.outline.bounds
        return (low_x, low_y, 0.0), (high_x, high_y, self.thickness)


def rectangle(x: float, y: float) -> tuple[tuple[float, float], ...]:
    """Give the corners of a rectangle of x by y mm about the origin, anticlockwise."""
    return (-x / 2, -y / 2), (x / 2, -y / 2), (x / 2, y / 2), (-x / 2, y / 2)


def _opening(hole: Hole) -> Loop:
    """A hole of a plate as a clockwise loop."""
    x, y = hole.centre[:2]
    if not hole.slot:
        return circle(hole.diameter, clockwise=True).moved(x, y)
    run = np.array(hole.along[:2]) * hole.slot / 2
    side = np.array([-run[1], run[0]]) / (hole.slot / 2) * hole.diameter / 2
    centre = np.array([x, y])
    points = np.array([centre - run - side, centre - run + side, centre + run + side, centre + run - side])
    return Loop(points, np.array([-1.0, 0.0, -1.0, 0.0]))
