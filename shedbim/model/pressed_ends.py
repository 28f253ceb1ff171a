"""Ends of round tubes pressed flat: the walls lie on each other, then a taper leads over to the ring.

No steel is lost or gained: the flat is two walls thick and as wide as half the middle line of the ring, so its area
is the tube's, and the slit inside the taper is as wide as makes the mean area of the taper the tube's too. The sides
of the flat are square here; those of the shop are rounded.

Glossary:
    flat    from the tip to where the walls part
    taper   from there to the ring: the hull of the flat's end and the ring, less the hull of a slit and the bore
    slit    the line that the bore ends in, square to the bar, where the walls part
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from math import hypot, pi

import numpy as np
from numpy.typing import NDArray

from shedbim.errors import ModelError
from shedbim.model.end_cuts import EndCut
from shedbim.model.holes import Hole, Vector
from shedbim.sections.profiles import Pipe
from shedbim.sections.section import Profile

__all__ = [
    "Pressed",
    "PressedEnds",
    "bored",
    "check_pressed",
    "flat_corners",
    "flat_width",
    "less_surface",
    "slit_width",
]

Array = NDArray[np.float64]

#: Nodes from -1 to 1 and weights of Gauss and Legendre: a cone's area over a quarter turn is exact to 1e-12 so.
_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(24)


@dataclass(frozen=True)
class Pressed:
    """An end pressed flat.

    Attributes:
        flat, taper: how long each is, mm; the flat begins at the tip.
        axis: unit vector square to the faces of the flat, and to the bar; either way.
    """

    flat: float
    taper: float
    axis: Vector

    @property
    def length(self) -> float:
        """From the tip to where the tube is round, mm."""
        return self.flat + self.taper

    @property
    def across(self) -> Vector:
        """Unit vector along the width of the flat."""
        _, y, z = self.axis
        return 0.0, -z, y


#: What each end of a bar is pressed to, the start first; None for an end that is not.
PressedEnds = tuple[Pressed | None, Pressed | None]


def flat_width(pipe: Pipe) -> float:
    """Give how wide the flat is, mm."""
    return pi * (pipe.d - pipe.t) / 2


def slit_width(pipe: Pipe) -> float:
    """Give how wide the slit is, mm.

    The area of a slice of the taper is quadratic in its place: that of the flat's end, that of the ring, and their
    mixed area, which is less by what the slit has. This width makes the mixed area that of the tube.
    """
    mixed = pipe.d / 4 * (2 * flat_width(pipe) + 4 * pipe.t)
    return (mixed - pi * (pipe.d - pipe.t) * pipe.t) / (pipe.d / 2 - pipe.t)


def flat_corners(pipe: Pipe, pressed: Pressed) -> Array:
    """Give the corners (4, 2) of a slice of the flat, y and z, mm."""
    normal, across = np.array(pressed.axis[1:]), np.array(pressed.across[1:])
    u, v = flat_width(pipe) / 2 * across, pipe.t * normal
    return np.array([u - v, u + v, v - u, -u - v])


def less_surface(pipe: Pipe, pressed: Pressed) -> float:
    """Give how much less painted surface a pressed end has than the tube it was, mm2; its end is not counted."""
    half, t, r, length = flat_width(pipe) / 2, pipe.t, pipe.d / 2, pressed.taper
    # The taper: a triangle on each side of the flat's end, and a quarter of a cone on each corner.
    triangles = 2 * t * hypot(length, half - r) + 2 * half * hypot(length, r - t)
    turn = (_NODES + 1) * pi / 4
    ring = np.column_stack([np.full(len(turn), length), r * np.cos(turn), r * np.sin(turn)])
    way = np.column_stack([np.zeros(len(turn)), -r * np.sin(turn), r * np.cos(turn)])
    lean = np.linalg.norm(np.cross(ring - np.array([0.0, half, t]), way), axis=1) / 2
    cones = 4 * float(lean @ _WEIGHTS) * pi / 4
    return 2 * pi * r * pressed.length - 4 * (half + t) * pressed.flat - triangles - cones


def bored(profile: Profile, length: float, pressed: PressedEnds, hole: Hole) -> Profile | None:
    """Give what a hole of a bar is drilled through: its profile, or None for the level steel of a flat."""
    start, end = pressed
    x = hole.centre[0]
    if (start is not None and x < start.flat) or (end is not None and x > length - end.flat):
        return None
    return profile


def check_pressed(profile: Profile, length: float, ends: Sequence[EndCut], pressed: PressedEnds) -> None:
    """Refuse what cannot be pressed.

    Raises:
        ModelError: when the bar is no round tube, an end not cut square, or the bar too short.
    """
    if pressed == (None, None):
        return
    if not isinstance(profile, Pipe):
        raise ModelError("only round tubes have ends pressed flat")
    if any(each is not None and not cut.is_square for each, cut in zip(pressed, ends, strict=True)):
        raise ModelError("an end that is pressed flat is cut square")
    if sum(each.length for each in pressed if each is not None) >= length:
        raise ModelError("a bar is too short for its pressed ends")
