"""Plates laid about a plane that stands square to what they join: an end plate, and all that leans on it.

Glossary:
    out     off the plane, towards the member that is fastened to it
    aside   in the plane, to the side
    up      in the plane, upwards; out x aside = up
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.expand.joints.contract import Fitting, Met
from shedbim.expand.joints.shaping import plate_at
from shedbim.geometry.placements import cross
from shedbim.model.roles import Role
from shedbim.sections.profiles import IShape
from shedbim.sections.section import Section

__all__ = ["Line", "Standing", "flange", "line_of"]

Array = NDArray[np.float64]
_UP = np.array([0.0, 0.0, 1.0])


@dataclass(frozen=True, eq=False)
class Standing:
    """A plane by a point (3,) of it and three unit vectors (3,), all in joint axes."""

    origin: Array
    out: Array
    aside: Array
    up: Array

    @staticmethod
    def square_to(origin: Array, out: Array, up: Array = _UP) -> Standing:
        """Give the plane through ``origin`` square to ``out``, its own up as near to ``up`` as can be."""
        out = out / float(np.linalg.norm(out))
        up = up - out * float(up @ out)
        up = up / float(np.linalg.norm(up))
        return Standing(origin, out, cross(up, out), up)

    def at(self, out: float, aside: float, up: float) -> Array:
        """The point (3,) in joint axes."""
        return self.origin + self.out * out + self.aside * aside + self.up * up

    def seen(self, point: Array) -> tuple[float, float, float]:
        """How far out, aside and up a point (3,) in joint axes lies."""
        d = point - self.origin
        return float(d @ self.out), float(d @ self.aside), float(d @ self.up)

    def reach(self, met: Met, direction: Array) -> float:
        """How far the box of a member's section reaches from its axis along a unit vector (3,), mm."""
        across = abs(float(met.y @ direction)) * met.section.width
        return (across + abs(float(met.z @ direction)) * met.section.height) / 2

    def facing(
        self,
        name: str,
        role: Role,
        out: float,
        corners: Sequence[tuple[float, float]],
        thickness: float,
        owner: int,
    ) -> Fitting:
        """A plate parallel to the plane from ``out`` on outwards; corners (aside, up)."""
        plate, frame = plate_at(self.at(out, 0, 0), self.aside, self.up, corners, thickness)
        return Fitting(name, role, plate, frame, owner)

    def upright(
        self,
        name: str,
        role: Role,
        aside: float,
        corners: Sequence[tuple[float, float]],
        thickness: float,
        owner: int,
    ) -> Fitting:
        """A plate square to the plane, its middle ``aside``; corners (out, up)."""
        plate, frame = plate_at(
            self.at(0, aside, 0), self.out, self.up, corners, thickness, below=thickness / 2
        )
        return Fitting(name, role, plate, frame, owner)

    def level(
        self,
        name: str,
        role: Role,
        up: float,
        corners: Sequence[tuple[float, float]],
        thickness: float,
        owner: int,
    ) -> Fitting:
        """A plate square to ``up``, its middle at ``up``; corners (out, aside)."""
        plate, frame = plate_at(
            self.at(0, 0, up), self.out, self.aside, corners, thickness, below=thickness / 2
        )
        return Fitting(name, role, plate, frame, owner)


@dataclass(frozen=True)
class Line:
    """A member that runs out from a plane, seen from the side: its axis up = ``start`` + ``rise`` * out.

    Attributes:
        rise: signed, over a run of 1.
        run: how far out one unit of its length reaches.
        half: half its depth.
        end: how far out its axis ends.
    """

    start: float
    rise: float
    run: float
    half: float
    end: float

    def axis(self, out: float) -> float:
        """Level of its axis."""
        return self.start + self.rise * out

    def top(self, out: float) -> float:
        """Level of its upper face."""
        return self.axis(out) + self.half / self.run

    def bottom(self, out: float) -> float:
        """Level of its lower face."""
        return self.axis(out) - self.half / self.run


def line_of(met: Met, plane: Standing) -> Line:
    """Give how a member that ends here runs out from a plane; its web or sides are square to ``plane.aside``."""
    run = float(met.into @ plane.out)
    rise = float(met.into @ plane.up) / run
    out, _, up = plane.seen(met.origin)
    return Line(up - rise * out, rise, run, met.section.height / 2, out)


def flange(section: Section) -> float:
    """Give the thickness of a flange, or of the wall where there is none, mm."""
    profile = section.profile
    return profile.tf if isinstance(profile, IShape) else profile.thickness
