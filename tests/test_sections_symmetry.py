"""The symmetry that a profile states, against its outline turned and mirrored."""

from __future__ import annotations

from math import cos, pi, sin

import numpy as np
import pytest
from shapely import Polygon
from shapely.affinity import affine_transform

from shedbim.sections.catalogue import section
from shedbim.sections.section import Symmetry

#: One of each shape, and the equal-sided ones that have more symmetry.
SPECIMENS = (
    *("IPE 300", "HEB 300", "UB 457x191x67", "W 310x38.7", "UPE 200", "PFC 200x75x23"),
    *("SHS 100x100x5", "RHS 200x100x8", "HF SHS 120x120x6.3", "CHS 114.3x5", "L 80x80x8", "L 120x80x10"),
    *("C 200x75x20x2", "Z 200x75x20x2.5", "Z 200x75/66x20x2.5", "FL 100x10", "FL 40x40", "RD 12"),
)
#: Share of the area by which an outline must leave itself to be another: far above the chords of its arcs
#: (1 µm), far below the least change in this list.
DIFFERENT = 0.01
SAME = 1e-3


def polygon(designation: str) -> Polygon:
    outer, *holes = section(designation).outline.polygons(1e-3)
    return Polygon(outer, holes)


def left_by(shape: Polygon, matrix: list[list[float]]) -> float:
    """Share of its area by which a shape differs from itself moved about its centroid."""
    (a, b), (c, d) = matrix
    moved = affine_transform(shape, [a, b, c, d, 0.0, 0.0])
    return float(shape.symmetric_difference(moved).area / shape.area)


def turn(angle: float) -> list[list[float]]:
    return [[cos(angle), -sin(angle)], [sin(angle), cos(angle)]]


def mirror(axis: float) -> list[list[float]]:
    """The mirror that leaves the line at ``axis`` radians from y where it is."""
    return [[cos(2 * axis), sin(2 * axis)], [sin(2 * axis), -cos(2 * axis)]]


def is_turn(symmetry: Symmetry, angle: float) -> bool:
    """Whether a turn belongs to the stated symmetry."""
    if symmetry.turns == 0:
        return True
    parts = angle * symmetry.turns / (2 * pi)
    return abs(parts - round(parts)) < 1e-9


def is_mirror(symmetry: Symmetry, axis: float) -> bool:
    """Whether a mirror belongs to it: two mirrors make a turn by twice the angle between them."""
    return symmetry.mirror is not None and is_turn(symmetry, 2 * (axis - symmetry.mirror))


ANGLES = [k * pi / 12 for k in range(24)]


@pytest.mark.parametrize("designation", SPECIMENS)
def test_exactly_the_stated_turns_carry_an_outline_onto_itself(designation: str) -> None:
    shape, symmetry = polygon(designation), section(designation).profile.symmetry
    for angle in ANGLES:
        off = left_by(shape, turn(angle))
        assert off < SAME if is_turn(symmetry, angle) else off > DIFFERENT, (designation, angle, off)


@pytest.mark.parametrize("designation", SPECIMENS)
def test_exactly_the_stated_mirrors_carry_an_outline_onto_itself(designation: str) -> None:
    shape, symmetry = polygon(designation), section(designation).profile.symmetry
    for axis in ANGLES[:12]:
        off = left_by(shape, mirror(axis))
        assert off < SAME if is_mirror(symmetry, axis) else off > DIFFERENT, (designation, axis, off)


def test_the_motions_are_what_they_are_called() -> None:
    assert np.linalg.det(turn(0.7)) == pytest.approx(1.0)
    assert np.linalg.det(mirror(0.7)) == pytest.approx(-1.0)
    assert np.array(mirror(0.7)) @ [cos(0.7), sin(0.7)] == pytest.approx([cos(0.7), sin(0.7)])


def test_a_channel_and_a_z_are_what_the_axes_say() -> None:
    """Web of a channel on the -y side, open towards +y; upper flange of a Z towards +y; heel lower left."""
    for designation in ("UPE 200", "C 200x75x20x2"):
        low_y, _, high_y, _ = section(designation).outline.bounds
        assert -low_y < high_y
    assert section("Z 200x75x20x2.5").iyz > 0
    low_y, low_z, high_y, high_z = section("L 120x80x10").outline.bounds
    assert -low_y < high_y
    assert -low_z < high_z
    assert high_z - low_z == pytest.approx(120)
    assert section("L 120x80x10").iyz < 0
