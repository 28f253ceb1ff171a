"""Pictures as SVG: sound XML without scripts, what is hidden left out, faces as large as their pixels."""

from __future__ import annotations

import re
from dataclasses import replace
from typing import Any
from xml.etree import ElementTree

import numpy as np
import pytest
from cast import shed_of
from numpy.typing import NDArray
from picture_scenes import HALL, block, scene

from shedbim.model.roles import Role
from shedbim.model.shed import Shed
from shedbim.sections.profiles import Flat
from shedbim.writers.pictures.annotations import Words
from shedbim.writers.pictures.composition import Composition, compose
from shedbim.writers.pictures.main_faces import despeckled
from shedbim.writers.pictures.projection import View
from shedbim.writers.pictures.regions import outlines, straightened
from shedbim.writers.pictures.shot import FINER
from shedbim.writers.pictures.svg import svg_picture
from shedbim.writers.pictures.vectors import vectors
from shedbim.writers.pictures.views import render_view, selected

FRONT = View((0.0, 1.0, 0.0))
SPACE = "{http://www.w3.org/2000/svg}"
Floats = NDArray[np.float64]


def composed(shed: Shed, view: str, argument: str | None = None, **options: Any) -> Composition:
    chosen = selected(shed, view, argument)
    return compose(shed, chosen.view, chosen.pieces, width=1000, height=625, **options)


def area(points: Floats) -> float:
    """Signed area of a polygon (n, 2), positive when clockwise as seen (y down)."""
    x, y = points.T
    return float(x @ np.roll(y, -1) - y @ np.roll(x, -1)) / 2


def test_it_is_sound_xml_of_shapes_and_text_alone() -> None:
    size: dict[str, Any] = {"form": "svg", "width": 1000, "height": 625}
    data = render_view(shed_of("lopsided"), "frame", "2", **size)
    root = ElementTree.fromstring(data)
    assert root.get("viewBox") == "0 0 1000 625"
    names = {element.tag.removeprefix(SPACE) for element in root.iter()}
    assert names <= {"svg", "title", "rect", "g", "path", "text", "circle"}
    attributes = {name for element in root.iter() for name in element.attrib}
    assert not [
        name for name in attributes if name.startswith("on") or "href" in name or name in ("style", "id")
    ]
    assert b"url(" not in data
    assert render_view(shed_of("lopsided"), "frame", "2", **size) == data


@pytest.mark.parametrize(
    "name", ["</text><script>alert(1)</script>", '"&quot;&amp; <b> \x07 ]]> \ufffe', "Zoë’s 界 Shed"]
)
def test_what_a_user_typed_is_text_whatever_it_is(name: str) -> None:
    shed = replace(HALL, project=replace(HALL.project, name=name))
    root = ElementTree.fromstring(render_view(shed, "side", form="svg", width=600, height=400))
    shown = name.replace("\x07", "\ufffd").replace("\ufffe", "\ufffd")
    (title,) = root.iter(f"{SPACE}title")
    assert title.text == f"{shown} · 1 · P01 · side"
    assert [each.text for each in root.iter(f"{SPACE}text")][-1] == f"{shown} · 1 · P01 · side"
    assert not [each for each in root.iter() if "script" in each.tag]


def test_its_texts_are_those_of_the_png_in_the_same_places() -> None:
    composition = composed(HALL, "side", labels="marks", caption="A caption")
    root = ElementTree.fromstring(svg_picture(composition))
    shown = {(each.text, float(each.get("x", 0))) for each in root.iter(f"{SPACE}text")}
    for each in composition.annotations:
        if isinstance(each, Words):
            assert (each.text, round(each.x, 1)) in {(text, round(x, 1)) for text, x in shown}
    assert {text for text, _ in shown} >= {"1", "2", "3", "A caption", "C0"}


def test_what_lies_wholly_behind_leaves_no_trace_of_face_or_edge() -> None:
    front, hidden = block("front", Role.COLUMN, 0, 0, 300), block("hidden", Role.PURLIN, 80, 400, 120)
    alone = svg_picture(compose(scene(front), FRONT, width=300, height=200))
    assert svg_picture(compose(scene(front, hidden), FRONT, width=300, height=200)) == alone
    assert svg_picture(compose(scene(front, hidden), View((0.0, -1.0, 0.0)), width=300, height=200)) != alone


def test_edges_are_cut_where_a_nearer_piece_covers_them() -> None:
    far = block("far", Role.PURLIN, 0, 700, 300)
    # The near block stands before a quarter of the right side of the far one and before its lower edge.
    near = block("near", Role.COLUMN, 225, 0, 150)
    composition = compose(scene(far, near), FRONT, width=600, height=400)
    seen = vectors(composition.shot)
    lines = np.concatenate(list(seen.edges.values()))
    scale, corner = composition.projection.scale, composition.projection.points(np.zeros(3))
    upright = lines[np.abs(lines[:, 0] - lines[:, 2]) < 0.5]
    right = upright[np.abs(upright[:, 0] - (corner[0] + 300 * scale)) < 1.0]
    heights = (corner[1] - np.sort(right[:, [1, 3]], axis=1)) / scale
    assert heights[:, 1].min() == pytest.approx(150, abs=1.5 / scale)
    assert heights[:, 0].max() == pytest.approx(300, abs=1e-6)


@pytest.mark.parametrize(("view", "argument"), [("bay", "1"), ("place", "0,5200,5800")])
def test_faces_are_as_large_as_their_pixels(view: str, argument: str) -> None:
    composition = composed(shed_of("lopsided"), view, argument)
    seen = vectors(composition.shot)
    polygons = sum(area(points) for points_of in seen.faces.values() for points in points_of)
    bars = sum(
        float((np.hypot(lines[:, 2] - lines[:, 0], lines[:, 3] - lines[:, 1]) * width).sum())
        for (_, width), lines in seen.bars.items()
    )
    numbers = composition.shot.canvas.seen(len(composition.shot.owners))
    pixels = (numbers < len(composition.shot.owners)).sum() / FINER**2
    # Bars meet with square ends and cover their neighbours by a part of their width.
    assert polygons + bars == pytest.approx(pixels, rel=0.02 if view == "place" else 0.12)


def test_outlines_of_regions_have_their_areas_and_holes_and_no_specks() -> None:
    image = np.full((40, 60), -1)
    image[5:30, 10:50] = 3
    image[10:20, 20:35] = -1
    image[12:15, 22:30] = 8
    image[30, 50] = 3  # touches the region at a corner only
    image[0, 0] = image[39, 59] = 5
    found: dict[int, list[float]] = {}
    for number, points in outlines(image):
        found.setdefault(number, []).append(area(points))
    assert sorted(found[3]) == pytest.approx([-(10 * 15), 25 * 40])  # and no lone pixel
    assert 3 * 8 - 8 <= found[8][0] <= 3 * 8  # three pixels high: no straight stretch, corners cut
    assert len(found[8]) == 1
    assert set(found) == {3, 8}
    assert outlines(np.full((4, 4), -1)) == []


def test_a_sheet_seen_edge_on_is_a_line() -> None:
    plates = [
        (f"{n}", Role.POST, Flat(2.0, 300.0), (x, 0.0, 0.0), (x, 90.0, 0.0), (0.0, 0.3 * n, 1.0))
        for n, x in enumerate((0.0, 400.0, 900.0))
    ]
    data = svg_picture(compose(scene(*plates), FRONT, width=100, height=60)).decode()
    faces = data[: data.index("stroke-linecap")]
    assert len(re.findall(r"M\d+ \d+l", faces)) == 3


@pytest.mark.parametrize("slope", [0.0, 0.37, 1.0, -0.6])
def test_a_slanting_edge_becomes_a_straight_line(slope: float) -> None:
    row, column = np.mgrid[0:120, 0:160]
    image = np.where(row + 0.5 > 60 + slope * (column + 0.5 - 80), 1, -1)
    ((_, points),) = outlines(image)
    assert len(points) <= 9
    exact = float(np.clip(120 - (60 + slope * (np.arange(160) + 0.5 - 80)), 0, 120).sum())
    # The tolerance of a pixel along the edge, and its two ends.
    assert area(points) == pytest.approx(exact, abs=1.0 * np.hypot(160, 160 * slope) + 2)


def test_straightening_keeps_a_circle_round() -> None:
    angle = np.linspace(0, 2 * np.pi, 400, endpoint=False)
    circle = np.stack([np.cos(angle), np.sin(angle)], axis=1) * 50
    kept = straightened(circle)
    assert 8 < len(kept) < 40
    assert area(kept) == pytest.approx(area(circle), rel=0.04)
    assert np.array_equal(straightened(circle[:3]), circle[:3])


def test_specks_between_equal_neighbours_go_and_the_background_stays() -> None:
    image = np.full((7, 7), 4)
    image[3, 1:6] = 9
    image[5, 5] = -1
    clean = despeckled(image)
    assert (clean[3] == 4).all()
    assert clean[5, 5] == -1
    assert (image[3, 1:6] == 9).all()


def test_files_stay_small() -> None:
    frame = render_view(shed_of("lopsided"), "frame", "2", form="svg", width=1000, height=625)
    whole = render_view(shed_of("valley"), "isometric", form="svg", width=1000, height=625)
    assert len(frame) < 25_000
    assert len(whole) < 300 * len(shed_of("valley").pieces)
