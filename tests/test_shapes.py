"""Volume, surface, box and shell of bars, plates and bolt groups against their solids, which are made apart."""

from __future__ import annotations

from collections import Counter
from dataclasses import replace
from itertools import product
from math import cos, pi, sin
from time import perf_counter

import drilled
import numpy as np
import pytest
from drilled import PROFILES, SECTIONS, bolt, drilled_hole, walls
from hypothesis import given, settings
from hypothesis import strategies as st
from manifold3d import Manifold

from shedbim.fasteners.bolts import bolt as catalogue_bolt
from shedbim.fasteners.holes import hole_diameter
from shedbim.model.bars import SQUARE, Bar, EndCut
from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.holes import Hole, Notch
from shedbim.model.openings import drill_reach
from shedbim.model.plates import Plate, rectangle
from shedbim.model.shapes import Shape
from shedbim.model.shells import shell
from shedbim.model.solids import solid

X, Y, Z = (1.0, 0.0, 0.0), (0.0, 1.0, 0.0), (0.0, 0.0, 1.0)
#: A gusset's slot in the start of a tube, through both of its walls, as long as 90 mm.
SLOT = Notch(((0.0, -5.5), (91.0, -5.5), (91.0, 5.5), (0.0, 5.5)), (-1.0, 0.0, -80.0), X, Y, 160.0)
#: A cope of the upper flange and part of the web at the end of an I of 400 mm.
COPE = Notch(((0.0, 0.0), (61.0, 0.0), (61.0, 60.0), (0.0, 60.0)), (340.0, 50.0, 50.0), X, Z, 100.0)


def bars(name: str) -> list[Bar]:
    """Bars of a section with a round hole in every wall; with slots both ways; with cut ends."""
    places = [(wall, 60.0 + 70.0 * wall) for wall in range(len(walls(name)))]
    section = SECTIONS[name]
    plain = Bar(section, 420.0, holes=tuple(drilled_hole(name, w, x, 13.0) for w, x in places))
    slots = tuple(drilled_hole(name, w, x, 9.0, 11.0, across=bool(w % 2)) for w, x in places)
    cut = Bar(section, 420.0, EndCut(((0.2, -0.1),)), EndCut(((0.1, 0.2), (-0.2, 0.0)), notched=True), slots)
    return [plain, replace(plain, holes=slots), cut]


PLATES = [
    Plate(
        rectangle(310.0, 260.0),
        20.0,
        tuple(drilled.plate_hole(x, y, 26.0, 20.0) for x, y in product((-90.0, 105.0), (-80.0, 85.0))),
    ),
    Plate(
        ((0.0, 0.0), (200.0, 0.0), (200.0, 100.0), (0.0, 130.0)),
        8.0,
        (drilled.plate_hole(60.0, 50.0, 14.0, 8.0, 21.0, 0.7), drilled.plate_hole(130.0, 50.0, 18.0, 8.0)),
        (0.0, 0.3, 0.0, -0.1),
    ),
    Plate(((90.0, 0.0), (-90.0, 0.0)), 12.0, (drilled.plate_hole(0.0, 0.0, 50.0, 12.0),), (1.0, 1.0)),
]
GROUPS = [BoltGroup(bolt(), ((0.0, 0.0), (70.0, 5.0), (-20.0, 75.0))), BoltGroup(bolt(), ((11.0, 12.0),))]
NOTCHED = [
    Bar(SECTIONS["CHS"], 400.0, notches=(SLOT,), holes=(drilled_hole("CHS", 2, 200.0, 18.0),)),
    Bar(
        SECTIONS["SHS"], 400.0, EndCut(((0.1, 0.0),)), SQUARE, (drilled_hole("SHS", 0, 200.0, 18.0),), (SLOT,)
    ),
    Bar(SECTIONS["I"], 400.0, notches=(COPE,), holes=(drilled_hole("I", 0, 200.0, 18.0),)),
    # Two notches that share some steel: it is taken once.
    Bar(SECTIONS["RHS"], 400.0, notches=(SLOT, replace(SLOT, origin=(-31.0, 3.0, -80.0)))),
]
SQUARE_NOTCHED = [bar for bar in NOTCHED if bar.start.is_square]
SHAPES: list[Shape] = [*(bar for name in SECTIONS for bar in bars(name)), *PLATES, *GROUPS, *NOTCHED]


def named(shape: Shape) -> str:
    if isinstance(shape, Bar):
        return f"{shape.section.designation}-{len(shape.holes)}-{len(shape.notches)}"
    return type(shape).__name__


@pytest.mark.parametrize("shape", SHAPES, ids=named)
def test_the_volume_is_that_of_a_fine_solid(shape: Shape) -> None:
    fine = solid(shape, 0.0005)
    assert fine.volume() == pytest.approx(shape.volume, rel=1e-4)
    assert shape.mass == pytest.approx(fine.volume() * 7.85e-6, rel=1e-4)


@pytest.mark.parametrize("name", SECTIONS)
def test_holes_take_exactly_what_the_drill_takes(name: str) -> None:
    """Told by the holes alone: 1e-4 of a whole bar would hide a wrong formula."""
    for bar in bars(name):
        for hole in bar.holes[:2]:
            whole, bored = replace(bar, holes=()), replace(bar, holes=(hole,))
            taken = solid(whole, 0.0005).volume() - solid(bored, 0.0005).volume()
            assert whole.volume - bored.volume == pytest.approx(taken, rel=5e-4)


@pytest.mark.parametrize("share", [0.2, 0.5, 0.85])
@pytest.mark.parametrize("off", [0.0, 6.0])
def test_a_hole_in_a_tube_is_integrated_over_its_bent_wall(share: float, off: float) -> None:
    """A grid of strips over the opening, each as deep as the wall there: no formula of the program."""
    outer, inner = 88.9 / 2, 88.9 / 2 - 5.0
    diameter = 2 * (inner - off) * share
    hole = Hole((150.0, off, 42.0), Z, diameter, 5.0)
    bar = Bar(SECTIONS["CHS"], 300.0, holes=(hole,))
    s = (np.arange(400_000) + 0.5) / 400_000 * diameter - diameter / 2
    width = 2 * np.sqrt((diameter / 2) ** 2 - s**2)
    depth = np.sqrt(outer**2 - (s + off) ** 2) - np.sqrt(inner**2 - (s + off) ** 2)
    taken = float((width * depth).sum()) * diameter / 400_000
    assert replace(bar, holes=()).volume - bar.volume == pytest.approx(taken, rel=1e-8)
    painted = float((width * outer / np.sqrt(outer**2 - (s + off) ** 2)).sum()) * diameter / 400_000
    assert replace(bar, holes=()).surface - bar.surface == pytest.approx(painted, rel=1e-8)


@pytest.mark.parametrize("name", ["CHS", "RHS", "SHS"])
def test_a_drill_in_one_wall_of_a_tube_leaves_the_others(name: str) -> None:
    section = SECTIONS[name]
    whole = solid(Bar(section, 300.0))
    for wall in range(len(walls(name))):
        # Nearly as wide as the tube is inside.
        hole = drilled_hole(name, wall, 150.0, 0.8 * (min(section.width, section.height) - 2 * 5.0))
        hole = replace(
            hole, centre=(150.0, *(round(v / 12) * 12 if abs(v) < 12 else v for v in hole.centre[1:]))
        )
        taken = whole - solid(Bar(section, 300.0, holes=(hole,)))
        box = np.array(taken.bounding_box()).reshape(2, 3)
        outwards = np.array(hole.axis)
        depth = np.sort(box @ outwards)
        assert depth[0] > 0 if name != "CHS" else depth.mean() > 0
        assert len(taken.decompose()) == 1


def test_a_drill_goes_half_a_millimetre_beyond_a_flat_wall() -> None:
    assert drill_reach(PROFILES["I"], drilled_hole("I", 0, 100.0, 13.0)) == (-3.0, 3.0)
    thin = Hole((100.0, 0.0, 0.0), Y, 9.0, 2.0)
    assert drill_reach(PROFILES["Z"], thin) == (-1.5, 1.5)


def painted_area(shape: Bar | Plate) -> float:
    """Area of the faces of a solid that lie on its outer sides, and on both faces of a plate."""
    made = solid(shape, 0.001)
    mesh = made.to_mesh64()
    points = np.asarray(mesh.vert_properties)[:, :3]
    a, b, c = np.moveaxis(points[np.asarray(mesh.tri_verts)], 1, 0)
    cross = np.cross(b - a, c - a)
    area = np.linalg.norm(cross, axis=1) / 2
    middle = (a + b + c) / 3
    if isinstance(shape, Plate):
        low_x, low_y, high_x, high_y = shape.outline.bounds
        flat = np.abs(cross[:, 2]) > 1.999 * area
        rim = (np.abs(middle[:, 0] - low_x) < 1e-6) | (np.abs(middle[:, 0] - high_x) < 1e-6)
        rim |= (np.abs(middle[:, 1] - low_y) < 1e-6) | (np.abs(middle[:, 1] - high_y) < 1e-6)
        return float(area[flat | rim].sum())
    rim = shape.section.outline.outer.polygon(0.001)
    step = np.roll(rim, -1, axis=0) - rim
    normal = np.column_stack([step[:, 1], -step[:, 0]]) / np.linalg.norm(step, axis=1)[:, None]
    on = np.zeros(len(area), bool)
    unit = cross / np.maximum(np.linalg.norm(cross, axis=1), 1e-30)[:, None]
    for p, d, n in zip(rim, step, normal, strict=True):
        along = (middle[:, 1:] - p) @ d / (d @ d)
        on |= (
            (np.abs((middle[:, 1:] - p) @ n) < 1e-6)
            & (along > -1e-9)
            & (along < 1 + 1e-9)
            & (unit[:, 1:] @ n > 0.99)
        )
    return float(area[on].sum())


@pytest.mark.parametrize(
    "shape",
    [b for n in ("I", "RHS", "CHS", "FL", "RD") for b in bars(n)[:2]] + SQUARE_NOTCHED + PLATES[:1],
    ids=named,
)
def test_the_painted_surface_is_that_of_the_outer_sides_left(shape: Bar | Plate) -> None:
    whole = replace(shape, holes=()) if isinstance(shape, Plate) else replace(shape, holes=(), notches=())
    assert painted_area(whole) == pytest.approx(whole.surface, rel=1e-4)
    taken = painted_area(whole) - painted_area(shape)
    assert whole.surface - shape.surface == pytest.approx(taken, rel=2e-3)


@pytest.mark.parametrize("shape", SHAPES, ids=named)
def test_the_box_holds_the_solid_and_touches_it(shape: Shape) -> None:
    low, high = np.array(shape.box)
    box = np.array(solid(shape, 0.001).bounding_box()).reshape(2, 3)
    assert (low <= box[0] + 1e-6).all()
    assert (box[1] <= high + 1e-6).all()
    # A notch may take a corner of the box: the slots here are 90 mm long.
    slack = 90.0 if isinstance(shape, Bar) and shape.notches else 0.0
    assert np.abs(box - [low, high]).max() <= slack + 2e-3


@pytest.mark.parametrize("chord_error", [0.02, 0.5, 2.0])
@pytest.mark.parametrize("shape", SHAPES, ids=named)
def test_a_shell_is_closed_and_as_large_as_the_solid(shape: Shape, chord_error: float) -> None:
    made, body = shell(shape, chord_error), solid(shape, chord_error)
    directed = Counter(
        (a, b)
        for triangle in made.triangles.tolist()
        for a, b in zip(triangle, triangle[1:] + triangle[:1], strict=True)
    )
    assert set(directed.values()) == {1}
    assert all((b, a) in directed for a, b in directed)
    a, b, c = np.moveaxis(made.points[made.triangles], 1, 0)
    cross = np.cross(b - a, c - a)
    assert np.einsum("ij,ij->", a, cross) / 6 == pytest.approx(body.volume(), rel=1e-6)
    box = np.array(body.bounding_box()).reshape(2, 3)
    assert np.allclose([made.points.min(axis=0), made.points.max(axis=0)], box, atol=1e-6)
    assert np.allclose(np.linalg.norm(made.normals, axis=1), 1, atol=1e-12)
    assert (np.einsum("ij,ij->i", cross, made.normals) > 0.999 * np.linalg.norm(cross, axis=1)).all()
    for face in np.unique(made.faces):
        same = made.normals[made.faces == face]
        assert np.abs(same - same[0]).max() < 2e-3


def test_a_plate_becomes_a_shell_in_less_than_a_millisecond() -> None:
    times = []
    for _ in range(30):
        fresh = replace(PLATES[0])  # nothing of it is kept from the last time
        begin = perf_counter()
        shell(fresh, 0.5)
        times.append(perf_counter() - begin)
    assert min(times) < 1e-3


@settings(max_examples=25, deadline=None)
@given(
    st.sampled_from([12.0, 16.0, 20.0, 24.0, 27.0, 30.0, 36.0]),
    st.floats(0, 2 * pi),
    st.sampled_from([0.02, 0.5, 1.6, 3.0]),
    st.sampled_from([0.02, 0.5, 1.6, 3.0]),
)
def test_a_bolt_keeps_clear_of_its_holes_however_coarse_both_are(
    diameter: float, angle: float, one: float, other: float
) -> None:
    hole = hole_diameter(diameter)
    plate = Plate(rectangle(150.0, 160.0), 15.0, (drilled.plate_hole(0.0, 0.0, hole, 15.0),))
    section = SECTIONS["FL"]
    flat = Bar(section, 400.0, holes=(Hole((200.0, 0.0, 0.0), Y, hole, 12.0),))
    group = BoltGroup(catalogue_bolt(diameter, "8.8", 27.0), ((0.0, 0.0),))
    fastener = solid(group, one)
    plates = solid(plate, other).rotate((0.0, 0.0, float(np.degrees(angle))))
    # The flat below the plate: its wall square to z, its hole under that of the plate.
    below = (
        solid(flat, other).translate((-200.0, 0.0, 0.0)).rotate((90.0, 0.0, 0.0)).translate((0.0, 0.0, 21.0))
    )
    assert (fastener ^ plates).volume() < 1e-6
    assert (fastener ^ below).volume() < 1e-6
    assert (plates ^ below).volume() < 1e-6
    box = fastener.bounding_box()
    assert box[2] < 0.0
    assert box[5] > group.fastener.grip


def test_hexagons_have_their_flats_along_x() -> None:
    (head,) = [solid(GROUPS[1], 0.001).slice(-5.0).bounds()]
    low_x, low_y, high_x, high_y = head
    assert high_y - low_y == pytest.approx(30.0)
    assert high_x - low_x == pytest.approx(30.0 / cos(pi / 6))


def test_a_slot_is_as_long_as_the_drill_and_its_travel() -> None:
    hole = drilled.plate_hole(10.0, 20.0, 14.0, 8.0, 21.0, 0.7)
    plate = Plate(rectangle(200.0, 160.0), 8.0, (hole,))
    gone = Manifold.cube((200.0, 160.0, 8.0)).translate((-100.0, -80.0, 0.0)) - solid(plate, 0.0005)
    box = gone.rotate((0.0, 0.0, float(-np.degrees(0.7)))).bounding_box()
    assert box[3] - box[0] == pytest.approx(35.0, abs=2e-3)
    assert box[4] - box[1] == pytest.approx(14.0, abs=2e-3)
    middle = np.array([10 * cos(0.7) + 20 * sin(0.7), -10 * sin(0.7) + 20 * cos(0.7)])
    assert np.allclose([(box[0] + box[3]) / 2, (box[1] + box[4]) / 2], middle, atol=1e-3)
    assert plate.size == (200.0, 160.0)
