"""Pictures of plates, cleats and bolts: what they are called, their colours, edges, sizes, labels; what is left out."""

from __future__ import annotations

from dataclasses import replace
from math import pi, sqrt
from typing import Any

import numpy as np
import pytest
from bolted_frames import ANCHORS, BOLTS, NUTS, bolted_frames
from numpy.typing import NDArray
from picture_scenes import Pixels, decoded
from test_pictures import hue_of

from shedbim.geometry.placements import apply, placement
from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.holes import Hole
from shedbim.model.levels import at_level
from shedbim.model.plates import Plate, rectangle
from shedbim.model.roles import Role, Sort
from shedbim.model.shapes import Shape
from shedbim.model.shed import Assemblies, Grid, Part, Pieces, ProjectInfo, Shed
from shedbim.model.shells import shell
from shedbim.writers.coarse import coarse
from shedbim.writers.described import described, figures
from shedbim.writers.palette import PALETTE, RGB
from shedbim.writers.pictures.annotations import Stroke, Words
from shedbim.writers.pictures.boxes import piece_boxes
from shedbim.writers.pictures.composition import Composition, compose
from shedbim.writers.pictures.picture import png_picture
from shedbim.writers.pictures.projection import View
from shedbim.writers.pictures.shot import FINER, part_mesh
from shedbim.writers.pictures.tints import HIGHLIGHT, Emphasis
from shedbim.writers.pictures.vectors import vectors
from shedbim.writers.pictures.views import render_view, selected

#: From above: plates that lie flat are seen in their full size.
DOWN = View((0.0, 0.0, -1.0), (0.0, 1.0, 0.0))
#: Of the page in its dark theme (page.css).
DARK_PAPER = (0x14, 0x18, 0x1B)


def flat_scene(*pieces: tuple[str, Role, Shape, tuple[float, float, float], tuple[int, int, int]]) -> Shed:
    """Pieces with key, role, shape, origin and the direction of their z axis; x runs along the building's."""
    none = np.zeros(0, np.int64)
    parts = tuple(
        Part(f"{role.prefix}{i}", role, shape, "S355", "") for i, (_, role, shape, *_) in enumerate(pieces)
    )
    places = np.array([placement(origin, (1, 0, 0), z) for *_, origin, z in pieces])
    return Shed(
        project=ProjectInfo("p", "test", "1", "P01"),
        georeference=None,
        grid=Grid(("A", "B"), (0.0, 900.0), ("1", "2"), (0.0, 500.0)),
        parts=parts,
        pieces=Pieces(tuple(p[0] for p in pieces), np.arange(len(pieces)), places, np.full(len(pieces), -1)),
        assembly_types=(),
        assemblies=Assemblies((), none, np.zeros((0, 3, 4)), none),
        joints=(),
    )


def part_of(mark: str) -> Part:
    return next(part for part in bolted_frames().parts if part.mark == mark)


def seen_from_above(shed: Shed, width: int = 600, height: int = 400) -> tuple[Pixels, float]:
    """The picture from above and its scale, pixels per mm."""
    composition = compose(shed, DOWN, width=width, height=height)
    return decoded(png_picture(composition)), composition.projection.scale


def composed(shed: Shed, view: str, argument: str, **options: Any) -> Composition:
    chosen = selected(shed, view, argument)
    return compose(shed, chosen.view, chosen.pieces, width=1000, height=700, **options)


# Words


def test_shapes_are_described_in_one_line() -> None:
    described_as = {part.mark: described(part.shape) for part in bolted_frames().parts}
    assert described_as == {
        "C1": "I 310x150", "R1": "I 310x150", "P1": "Z 200x75x21x2.5", "SB1": "RD 17", "FS1": "L 70x50x6",
        "BP1": "PL 20x230x410", "EP1": "PL 16x170x430", "GU1": "PL 12x180x260", "CL1": "PL 6x140x170",
        "BG1": "M20x60 8.8 x6", "BG2": "M12x30 4.6 x2", "AB1": "M24x480 8.8 x4", "NU1": "M16 4.6 x1",
    }  # fmt: skip
    assert described(Plate(rectangle(100.25, 80.0), 7.1)) == "PL 7.1x80x100.2"


def test_figures_tell_holes_thickness_and_grip() -> None:
    assert figures(part_of("C1").shape) == {"length_mm": 4210.0, "holes": 6}
    assert figures(part_of("R1").shape) == {"length_mm": 3829.0}
    assert figures(part_of("CL1").shape) == {"thickness_mm": 6.0, "size_mm": [170.0, 140.0], "holes": 2}
    assert figures(part_of("BG1").shape) == {
        "designation": "M20x60 8.8", "count": 6, "diameter_mm": 20.0, "length_mm": 60.0, "grip_mm": 26.9,
        "nuts": 1, "washers": 1,
    }  # fmt: skip
    assert "length_mm" not in figures(BoltGroup(NUTS, ((0.0, 0.0),)))


def test_coarse_bolts_have_no_bores_and_equal_discs_that_touch_are_one() -> None:
    shank, thread = replace(BOLTS.stack[1], end=34.0), replace(BOLTS.stack[1], start=34.0)
    split = replace(BOLTS, stack=(thread, *BOLTS.stack[2:], BOLTS.stack[0], shank))
    made = coarse(BoltGroup(split, ((0.0, 0.0),)))
    assert isinstance(made, BoltGroup)
    assert set(made.fastener.stack) == {replace(disc, bore=0.0) for disc in BOLTS.stack}
    plate = part_of("BP1").shape
    assert coarse(plate) == plate
    assert coarse(plate, 30.0) == plate
    assert coarse(plate, 30.5) == replace(plate, holes=())


# Colours


def oklab(colour: RGB) -> NDArray[np.float64]:
    """Lightness and two axes of colour, evenly spaced to the eye (matrices of the published OKLab space)."""
    value = np.array(colour) / 255
    linear = np.where(value <= 0.04045, value / 12.92, ((value + 0.055) / 1.055) ** 2.4)
    cones = np.array(
        [
            [0.4122214708, 0.5363325363, 0.0514459929],
            [0.2119034982, 0.6806995451, 0.1073969566],
            [0.0883024619, 0.2817188376, 0.6299787005],
        ]
    )
    axes = np.array(
        [
            [0.2104542553, 0.7936177850, -0.0040720468],
            [1.9779984951, -2.4285922050, 0.4505937099],
            [0.0259040371, 0.7827717662, -0.8086757660],
        ]
    )
    return axes @ np.cbrt(cones @ linear)


def contrast(one: RGB, other: RGB) -> float:
    """Contrast of two colours as WCAG 2.2 has it, 1 to 21."""
    values = np.array([one, other]) / 255
    linear = np.where(values <= 0.04045, values / 12.92, ((values + 0.055) / 1.055) ** 2.4)
    dark, light = sorted(linear @ (0.2126, 0.7152, 0.0722))
    return float((light + 0.05) / (dark + 0.05))


def test_members_fittings_and_fasteners_are_told_apart_by_colour() -> None:
    by_sort = {sort: [PALETTE[role] for role in Role if role.sort is sort] for sort in Sort}

    def apart(one: list[RGB], other: list[RGB]) -> float:
        return min(float(np.linalg.norm(oklab(a) - oklab(b))) for a in one for b in other)

    # Just noticeable is about 0.02; members among themselves differ by as little.
    assert apart(by_sort[Sort.MEMBER], by_sort[Sort.FITTING]) > 0.08
    assert apart(by_sort[Sort.MEMBER], by_sort[Sort.FASTENER]) > 0.12
    assert apart(by_sort[Sort.FITTING], by_sort[Sort.FASTENER]) > 0.25
    assert apart([HIGHLIGHT], by_sort[Sort.FITTING] + by_sort[Sort.FASTENER]) > 0.15
    for colour in by_sort[Sort.FITTING] + by_sort[Sort.FASTENER]:
        assert contrast(colour, (255, 255, 255)) > 3
        assert contrast(colour, DARK_PAPER) > 2.2


# Geometry


@pytest.mark.parametrize("level", ["coordination", "fabrication"])
def test_boxes_hold_what_is_drawn_and_no_more(level: str) -> None:
    shed = at_level(bolted_frames(), level)
    low, high = piece_boxes(shed, np.arange(len(shed.pieces)))
    for piece, (part, motion) in enumerate(zip(shed.pieces.part, shed.pieces.placement, strict=True)):
        body = shed.parts[part].body
        points = apply(motion, shell(body, 0.01).points)
        assert (points >= low[piece] - 0.02).all()
        assert (points <= high[piece] + 0.02).all()
        if shed.pieces.keys[piece] != "1-2/purlin/A-B/1/along/stay":  # that one lies aslant
            # The box of hexagons is that of circles over their corners.
            loose = 6.0 if isinstance(body, BoltGroup) else 0.02
            assert np.abs(points.min(axis=0) - low[piece]).max() < loose
            assert np.abs(points.max(axis=0) - high[piece]).max() < loose


def test_a_part_that_is_drawn_as_less_has_the_box_of_that() -> None:
    plate = Plate(rectangle(300.0, 200.0), 12.0)
    shed = flat_scene(("plate", Role.CLEAT, plate, (10, 20, 30), (0, 0, 1)))
    less = replace(shed.parts[0], drawn=Plate(rectangle(100.0, 80.0), 8.0))
    low, high = piece_boxes(replace(shed, parts=(less,)), np.arange(1))
    assert low.tolist() == [[-40.0, -20.0, 30.0]]
    assert high.tolist() == [[60.0, 60.0, 38.0]]


def test_a_plate_has_the_edges_of_its_outline_and_the_rims_of_its_holes() -> None:
    mesh = part_mesh(part_of("CL1"))
    straight = np.ptp(mesh.points[mesh.edges], axis=1)
    upright = straight[:, 2] > 0
    assert upright.sum() == 6  # the corners; the walls of the holes are round
    assert part_mesh(part_of("CL1"), least_hole=15.0).edges.shape == (18, 2)
    ends = mesh.points[mesh.edges[~upright]]
    rims = np.linalg.norm(ends[:, 0] - ends[:, 1], axis=1)
    outline = 2 * (140.0 + 2 * 145.0 + 2 * sqrt(25.0**2 + 25.0**2) + 90.0)
    assert rims.sum() == pytest.approx(outline + 4 * pi * 14.0, rel=0.01)


def test_a_bolt_has_the_edges_of_its_hexagons_and_no_chords_of_its_shank() -> None:
    mesh = part_mesh(replace(part_of("BG1"), shape=BoltGroup(BOLTS, ((0.0, 0.0),))))
    ends = mesh.points[mesh.edges]
    along = np.abs(ends[:, 0, 2] - ends[:, 1, 2])
    # Six corners of the head and six of the nut run along the axis; no line of the shank or the washer does.
    assert np.sort(along[along > 0].round(6)).tolist() == [12.5] * 6 + [18.0] * 6
    assert set(np.hypot(*mesh.points[mesh.edges[along > 0]].reshape(-1, 3)[:, :2].T).round(6)) == {
        round(30 / sqrt(3), 6)
    }


# Pictures


def test_a_plate_is_seen_in_its_size_with_its_holes_open() -> None:
    plate = Plate(
        rectangle(420.0, 260.0),
        15.0,
        (
            Hole((-90.0, 20.0, 7.5), (0.0, 0.0, 1.0), 60.0, 15.0),
            Hole((100.0, -30.0, 7.5), (0.0, 0.0, 1.0), 40.0, 15.0, slot=70.0, along=(1.0, 0.0, 0.0)),
        ),
    )
    pixels, scale = seen_from_above(flat_scene(("plate", Role.BASE_PLATE, plate, (0, 0, 0), (0, 0, 1))))
    shown = hue_of(pixels, Role.BASE_PLATE).sum() / scale**2
    # Edges take half a pixel off each rim.
    rims = 2 * (420 + 260) + pi * 60 + pi * 40 + 140
    assert plate.outline.area - 1.2 * rims / scale < shown < plate.outline.area
    middle = np.array(pixels.shape[:2]) / 2
    for x, y in ((-90.0, 20.0), (100.0, -30.0), (125.0, -30.0)):
        row, column = (middle + np.array([-y, x]) * scale).astype(int)
        assert (pixels[row, column] == 255).all()


def test_of_bolts_in_a_plate_only_what_stands_out_is_seen() -> None:
    points = ((-100.0, 55.0), (80.0, 55.0), (-100.0, -40.0))
    holes = tuple(Hole((x, y, 13.45), (0.0, 0.0, 1.0), 22.0, 26.9) for x, y in points)
    plate = Plate(rectangle(420.0, 260.0), 26.9, holes)
    group = BoltGroup(BOLTS, points)
    # The heads lie on the plate, or stand up from under it.
    under = flat_scene(
        ("plate", Role.END_PLATE, plate, (0, 0, 0), (0, 0, 1)),
        ("bolts", Role.BOLTS, group, (0, 0, 0), (0, 0, 1)),
    )
    pixels, scale = seen_from_above(under)
    shown = hue_of(pixels, Role.BOLTS).sum() / scale**2
    washers = 3 * pi / 4 * 37.0**2
    assert 0.75 * washers < shown < washers
    for level in ("coordination", "fabrication"):
        from_under, _ = seen_from_above(at_level(under, level))
        assert np.abs(from_under.astype(int) - pixels).mean() < 0.1, level


def test_what_is_smaller_than_a_pixel_is_left_out_unless_it_is_asked_for() -> None:
    group = BoltGroup(BOLTS, ((0.0, 0.0), (70.0, 0.0)))
    long = Plate(rectangle(60_000.0, 400.0), 20.0, (Hole((0.0, 9.0, 10.0), (0.0, 0.0, 1.0), 22.0, 20.0),))
    far = flat_scene(
        ("long", Role.SPLICE_PLATE, long, (0, 0, 0), (0, 0, 1)),
        ("bolts", Role.BOLTS, group, (0, 0, 30), (0, 0, 1)),
    )
    plain = compose(far, DOWN, width=600, height=400)
    assert [batch.part.role for batch in plain.shot.batches] == [Role.SPLICE_PLATE]
    assert len(plain.shot.batches[0].mesh.triangles) == 12
    loud = compose(far, DOWN, width=600, height=400, emphasis=Emphasis(far, np.array([1])))
    assert [batch.part.role for batch in loud.shot.batches] == [Role.SPLICE_PLATE, Role.BOLTS]
    near = compose(
        far, replace(DOWN, box=((-200.0, -200.0, 0.0), (200.0, 200.0, 60.0))), width=600, height=400
    )
    assert len(near.shot.batches) == 2
    assert len(near.shot.batches[0].mesh.triangles) > 60


def test_vector_pictures_draw_only_bars_as_thick_lines() -> None:
    composition = composed(bolted_frames(), "isometric", "*")
    made = vectors(composition.shot)
    lines = {colour for colour, _ in made.bars}
    sag_bar = np.array(PALETTE[Role.SAG_BAR])
    for colour in lines:
        mixed = np.array([colour >> 16, colour >> 8 & 255, colour & 255])
        assert np.abs(mixed / mixed.max() - sag_bar / sag_bar.max()).max() < 0.06
    # Seen along the frame, end plate and base plate are as thin as lines, and still are faces.
    assert not vectors(composed(bolted_frames(), "frame", "1").shot).bars
    close = vectors(composed(bolted_frames(), "place", "321,0,3900,300").shot)
    pink = np.array(PALETTE[Role.BOLTS], float)
    found = [
        points
        for colour, polygons in close.faces.items()
        for points in polygons
        if abs((colour >> 8 & 255) / max(colour >> 16, 1) - pink[1] / pink[0]) < 0.02
    ]
    assert len(found) >= 9  # three heads, each with some of its sides


# Labels


def words(composition: Composition) -> list[Words]:
    return [each for each in composition.annotations if isinstance(each, Words)]


def test_views_of_the_building_label_members_and_close_ups_label_all() -> None:
    shed = bolted_frames()
    marks = {part.mark for part in shed.parts}
    frame = {each.text for each in words(composed(shed, "frame", "1", labels="marks"))} & marks
    assert frame == {"C1", "R1"}
    joint = {each.text for each in words(composed(shed, "place", "321,0,3900,300", labels="marks"))} & marks
    assert joint == {"C1", "R1", "EP1", "BG1"}
    base = {each.text for each in words(composed(shed, "piece", "1/column/A/start*", labels="marks"))} & marks
    assert base == {"C1", "BP1", "AB1"}


def test_a_highlighted_bolt_group_is_labelled_from_afar() -> None:
    shed = bolted_frames()
    chosen = selected(shed, "frame", "1")
    group = shed.pieces.keys.index("1/rafter/A-B/start/bolts")
    composition = compose(
        shed, chosen.view, chosen.pieces, labels="marks", emphasis=Emphasis(shed, np.array([group]))
    )
    assert "BG1" in {each.text for each in words(composition)}


def test_no_label_hides_the_bolts_it_names() -> None:
    shed = bolted_frames()
    for argument, mark in (("1850,0,4165,200", "BG2"), ("321,0,3900,300", "BG1")):
        composition = composed(shed, "place", argument, labels="marks")
        owner = composition.shot.owners[
            composition.shot.canvas.seen(len(composition.shot.owners))[::FINER, ::FINER].clip(
                max=len(composition.shot.owners) - 1
            )
        ]
        bolts = [i for i, part in enumerate(shed.pieces.part) if shed.parts[part].mark == mark]
        empty = composition.shot.canvas.seen(len(composition.shot.owners))[::FINER, ::FINER]
        own = np.isin(owner, bolts) & (empty < len(composition.shot.owners))
        (label,) = (each for each in words(composition) if each.text == mark)
        left, top, right, bottom = (round(value) for value in label.rectangle)
        assert own[top:bottom, left:right].mean() < 0.2
        # Its leader, where it has one, ends in a dot on the bolts.
        dots = [each for each in composition.annotations if isinstance(each, Stroke) and each.x1 == each.x2]
        assert any(own[int(dot.y1), int(dot.x1)] for dot in dots if dot.y1 == dot.y2)


def test_views_of_a_fitted_shed_are_drawn_in_both_forms() -> None:
    shed = bolted_frames()
    for view, argument in (("isometric", None), ("frame", "2"), ("piece", "1/column/A"), ("plan", None)):
        for form in ("png", "svg"):
            data = render_view(shed, view, argument, form=form, width=500, height=350)
            assert len(data) > 2000
    pixels = decoded(render_view(shed, "place", "150,0,60,330", width=600, height=420))
    for role in (Role.COLUMN, Role.BASE_PLATE, Role.ANCHORS):
        assert hue_of(pixels, role).sum() > 500, role
    assert ANCHORS.kind == "anchor"
