"""Plane outlines of straight lines and circular arcs, and their exact properties.

Glossary:
    loop      a closed chain of segments; the outer loop runs anticlockwise, holes run clockwise
    bulge     tan(quarter of the arc's opening angle) of a segment, positive when the arc turns
              anticlockwise; 0 is a straight line
    outline   one outer loop and any holes, in a section's own axes (y to the right, z upwards), mm
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

__all__ = ["Loop", "Outline", "circle", "polyline", "rounded"]

Array = NDArray[np.float64]

#: Nodes and weights that integrate polynomials times circular functions of an arc of at most
#: half a turn to machine precision; every arc of a section is a half turn or less.
_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(20)


@dataclass(frozen=True, eq=False)
class Loop:
    """A closed chain of lines and arcs: points (n, 2) mm, and the bulge (n,) of each segment to the next."""

    points: Array
    bulges: Array

    @cached_property
    def _samples(self) -> tuple[Array, Array]:
        """Quadrature points (n, q, 2) of every segment and weighted steps dr (n, q, 2)."""
        start = self.points
        chord = np.roll(start, -1, axis=0) - start
        t = (_NODES + 1) / 2
        w = _WEIGHTS / 2
        half = 2 * np.arctan(self.bulges)[:, None]  # half the opening angle
        straight = np.abs(half) < 1e-9
        safe = np.where(straight, 1.0, half)
        # The arc in the frame of its chord (u along, v to the left), chord length 1.
        angle = safe * (2 * t[None, :] - 1)
        u = np.where(straight, t[None, :], 0.5 + np.sin(angle) / (2 * np.sin(safe)))
        v = np.where(straight, 0.0, (np.cos(safe) - np.cos(angle)) / (2 * np.sin(safe)))
        du = np.where(straight, 1.0, np.cos(angle) * safe / np.sin(safe))
        dv = np.where(straight, 0.0, np.sin(angle) * safe / np.sin(safe))
        along, left = chord[:, None, :], np.stack([-chord[:, 1], chord[:, 0]], axis=1)[:, None, :]
        points = start[:, None, :] + u[..., None] * along + v[..., None] * left
        steps = (du[..., None] * along + dv[..., None] * left) * w[None, :, None]
        return points, steps

    @cached_property
    def moments(self) -> tuple[float, float, float, float, float, float]:
        """Signed area and moments about the origin: A, Sy, Sz, Iyy = ∫z², Izz = ∫y², Iyz = ∫yz."""
        p, d = self._samples
        y, z, dy, dz = p[..., 0], p[..., 1], d[..., 0], d[..., 1]
        area = float(np.sum(y * dz - z * dy) / 2)
        first_z = float(np.sum(y * y * dz) / 2)  # ∫ y dA
        first_y = float(-np.sum(z * z * dy) / 2)  # ∫ z dA
        second_y = float(-np.sum(z**3 * dy) / 3)
        second_z = float(np.sum(y**3 * dz) / 3)
        product = float(np.sum(y * y * z * dz) / 2)
        return area, first_y, first_z, second_y, second_z, product

    @cached_property
    def length(self) -> float:
        """Length along the loop, mm."""
        chord = np.linalg.norm(np.roll(self.points, -1, axis=0) - self.points, axis=1)
        half = 2 * np.arctan(self.bulges)
        sine = np.sin(half)
        bent = np.abs(half) > 1e-9
        return float(np.sum(np.where(bent, chord * half / np.where(bent, sine, 1.0), chord)))

    def polygon(self, chord_error: float) -> Array:
        """Points (m, 2) on the loop, its arcs cut into chords that leave it by ``chord_error`` mm at most."""
        pieces = []
        following = np.roll(self.points, -1, axis=0)
        for start, end, bulge in zip(self.points, following, self.bulges, strict=True):
            pieces.append(start[None, :])
            if abs(bulge) < 1e-9:
                continue
            half = 2 * np.arctan(bulge)
            chord = end - start
            radius = float(np.linalg.norm(chord)) / (2 * abs(np.sin(half)))
            step = 2 * np.arccos(max(1 - chord_error / radius, 0.5))
            count = max(int(np.ceil(2 * abs(half) / step)), 2)
            if abs(half) >= np.pi / 2 - 1e-9:
                # A half circle keeps the point that lies farthest out: its box is exact.
                count += count % 2
            angle = half * (2 * np.arange(1, count) / count - 1)
            u = 0.5 + np.sin(angle) / (2 * np.sin(half))
            v = (np.cos(half) - np.cos(angle)) / (2 * np.sin(half))
            left = np.array([-chord[1], chord[0]])
            pieces.append(start + u[:, None] * chord + v[:, None] * left)
        return np.vstack(pieces)

    def moved(self, dy: float, dz: float) -> Loop:
        """The same loop shifted by (dy, dz) mm."""
        return Loop(self.points + np.array([dy, dz]), self.bulges)


@dataclass(frozen=True, eq=False)
class Outline:
    """A cross-section's outer loop and holes, in mm."""

    outer: Loop
    holes: tuple[Loop, ...] = ()

    @property
    def loops(self) -> tuple[Loop, ...]:
        """Outer loop first, then the holes."""
        return (self.outer, *self.holes)

    @cached_property
    def _moments(self) -> Array:
        total: Array = np.sum([loop.moments for loop in self.loops], axis=0)
        return total

    @property
    def area(self) -> float:
        """Area, mm²."""
        return float(self._moments[0])

    @property
    def centroid(self) -> tuple[float, float]:
        """Centroid (y, z), mm."""
        area, first_y, first_z = self._moments[:3]
        return float(first_z / area), float(first_y / area)

    @cached_property
    def second_moments(self) -> tuple[float, float, float]:
        """Iy = ∫z², Iz = ∫y² and Iyz = ∫yz about axes through the centroid, mm⁴."""
        area, _, _, second_y, second_z, product = self._moments
        y, z = self.centroid
        return float(second_y - area * z * z), float(second_z - area * y * y), float(product - area * y * z)

    @property
    def outer_perimeter(self) -> float:
        """Length of the outer loop: the painted girth, mm."""
        return self.outer.length

    @cached_property
    def rim(self) -> Array:
        """Points (m, 2) of the outer loop, arcs within a micrometre: where extremes are looked for."""
        return self.outer.polygon(1e-3)

    @cached_property
    def bounds(self) -> tuple[float, float, float, float]:
        """Least y, least z, greatest y, greatest z, mm."""
        low, high = self.rim.min(axis=0), self.rim.max(axis=0)
        return float(low[0]), float(low[1]), float(high[0]), float(high[1])

    def polygons(self, chord_error: float) -> list[Array]:
        """Each loop as points (m, 2), outer first; see ``Loop.polygon``."""
        return [loop.polygon(chord_error) for loop in self.loops]

    def centred(self) -> Outline:
        """The same outline with its centroid at the origin."""
        y, z = self.centroid
        return Outline(self.outer.moved(-y, -z), tuple(hole.moved(-y, -z) for hole in self.holes))


def polyline(points: list[tuple[float, float]]) -> Loop:
    """Give a loop of straight segments through ``points``, in their order."""
    array = np.array(points, float)
    return Loop(array, np.zeros(len(array)))


def circle(diameter: float, *, clockwise: bool = False) -> Loop:
    """Give a circle about the origin as two half-turn arcs."""
    r = diameter / 2
    bulge = -1.0 if clockwise else 1.0
    return Loop(np.array([[r, 0.0], [-r, 0.0]]), np.array([bulge, bulge]))


def rounded(corners: list[tuple[float, float, float]]) -> Loop:
    """Give a loop through corners (y, z, radius): each corner with a radius is rounded by that arc, tangentially.

    Raises:
        ValueError: when two radii do not fit on the side between them.
    """
    pts = np.array([(y, z) for y, z, _ in corners], float)
    radii = [radius for _, _, radius in corners]
    n = len(corners)
    points: list[Array] = []
    bulges: list[float] = []
    cuts = []
    for i in range(n):
        before, here, after = pts[i - 1], pts[i], pts[(i + 1) % n]
        a = (here - before) / np.linalg.norm(here - before)
        b = (after - here) / np.linalg.norm(after - here)
        turn = float(np.arctan2(a[0] * b[1] - a[1] * b[0], a @ b))
        cuts.append((radii[i] * abs(np.tan(turn / 2)), turn, a, b))
    for i in range(n):
        side = float(np.linalg.norm(pts[(i + 1) % n] - pts[i]))
        if cuts[i][0] + cuts[(i + 1) % n][0] > side + 1e-6:
            raise ValueError("corner radii do not fit on a side of the outline")
        cut, turn, a, b = cuts[i]
        if radii[i] <= 0:
            points.append(pts[i])
            bulges.append(0.0)
        else:
            points.extend([pts[i] - a * cut, pts[i] + b * cut])
            bulges.extend([float(np.tan(turn / 4)), 0.0])
    array = np.array(points)
    bends = np.array(bulges)
    steps = np.linalg.norm(np.roll(array, -1, axis=0) - array, axis=1)
    # Drop points that two arcs share when they use up a whole side.
    keep = (bends != 0.0) | (steps > 1e-9)
    return Loop(array[keep], bends[keep])
