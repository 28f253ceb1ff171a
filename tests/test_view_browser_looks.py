"""How the view shows a shed in a real browser: colours, themes, standard views, measuring and findings."""

from __future__ import annotations

from collections import Counter

import cast
import numpy as np
import pytest
from view_browser import Desk, Sight
from view_eye import eye_of, seen, steady
from view_pages import BLOCKS, hue_of, keys_of, number, page_text

from shedbim.model.shed import Shed
from shedbim.writers.view import ShownChange, ShownFinding

#: What the fixtures `view` and `shed` show.
SPECIMEN = "flat"


@pytest.fixture(scope="module")
def shed() -> Shed:
    return cast.members_of(SPECIMEN)


# Colours and themes


@pytest.mark.parametrize("by", ["role", "section", "mark"])
def test_colours_mean_what_the_legend_says(view: Sight, shed: Shed, by: str) -> None:
    view.page.click("#tab-colours")
    view.page.select_option("#colour-by", by)
    view.page.uncheck("#grid-on")
    word = {
        "role": lambda part: part.role.word,
        "section": lambda part: part.bar.section.designation,
        "mark": lambda part: part.mark,
    }[by]
    entries = view.ask("""[...document.querySelectorAll('#legend li')].map((line) => [
      line.querySelector('.label').textContent, line.querySelector('.count').textContent,
      getComputedStyle(line.querySelector('.swatch')).backgroundColor.match(/\\d+/g).map(Number)])""")
    counts = Counter(word(shed.parts[index]) for index in shed.pieces.part)
    assert {label: number(count) for label, count, _ in entries} == counts
    colours = {label: colour for label, _, colour in entries}
    picture = view.sheet(f"colours-by-{by}")
    found = seen(eye_of(view), shed)
    checked = set()
    calm = steady(found, 1)
    for piece in np.unique(found[calm & (found >= 0)]):
        label = word(shed.parts[shed.pieces.part[piece]])
        hue, saturation = hue_of(colours[label])
        inside = calm & (found == piece)
        # Shades and edges change how light a colour is, the haze how full: the hue stays.
        got, full = hue_of(np.median(picture[inside], axis=0))
        if saturation > 0.2 and full > 0.08:
            assert abs((got - hue + 0.5) % 1 - 0.5) < 0.06, (shed.pieces.keys[piece], colours[label])
            checked.add(label)
    assert len(checked) >= 3
    label = next(iter(counts))
    view.page.locator("#legend button").filter(has=view.page.get_by_text(label, exact=True)).click()
    assert len(view.selection) == counts[label]


def test_light_and_dark(view: Sight) -> None:
    papers = {}
    for theme in ("light", "dark"):
        view.page.select_option("#theme", theme)
        assert view.ask("shedView.theme") == theme
        picture = view.shot(f"theme-{theme}")
        x, y, _, height = (round(value) for value in view.box())
        paper = picture[y + height - 30, x + 5].astype(int)
        assert np.abs(paper - view.colour("--paper")).max() <= 4
        papers[theme] = paper.mean()
        view.page.select_option("#theme", "system")
        view.page.emulate_media(color_scheme=theme)
        view.page.wait_for_function("(theme) => shedView.theme === theme", arg=theme)
    view.page.emulate_media(color_scheme="light")
    assert papers["light"] > 200
    assert papers["dark"] < 60


# Views


#: The way the eye looks in building axes: x across from line A, y along from line 1, z up.
_LOOKS = {
    "front": (0, 1, 0),
    "back": (0, -1, 0),
    "left": (1, 0, 0),
    "right": (-1, 0, 0),
    "plan": (0, 0, -1),
}


@pytest.mark.parametrize("projection", ["perspective", "parallel"])
def test_standard_views_look_where_they_say_and_hold_all(view: Sight, shed: Shed, projection: str) -> None:
    view.page.select_option("#projection", projection)
    view.page.uncheck("#grid-on")
    for name in [*_LOOKS, "isometric"]:
        view.page.click(f"#view-{name}")
        view.settle()
        eye = eye_of(view)
        if name in _LOOKS:
            assert np.allclose(eye.turn[2], _LOOKS[name], atol=1e-9)
        else:
            # Isometric: all axes are foreshortened alike.
            assert np.allclose(np.abs(eye.turn[2]), 1 / np.sqrt(3))
        ends = np.array([view.ask("(key) => shedView.ends(key)", key) for key in shed.pieces.keys[::5]])
        pixels = eye.picture(ends)[..., :2].reshape(-1, 2)
        assert (pixels > 0).all()
        assert (pixels < [eye.width, eye.height]).all()
        found = np.argwhere(seen(eye, shed) >= 0)
        filled = (found.max(axis=0) - found.min(axis=0)) / [eye.height, eye.width]
        # The model fills one of both sides, and stands in the middle.
        assert 0.75 < filled.max() <= 1
        middle = (found.max(axis=0) + found.min(axis=0)) / 2 / [eye.height, eye.width]
        assert np.abs(middle - 0.5).max() < 0.05


def test_places_fall_where_the_page_says(view: Sight, shed: Shed) -> None:
    left, top, _, _ = view.box()
    for projection in ("perspective", "parallel"):
        view.page.select_option("#projection", projection)
        view.settle()
        places = np.array([[0.0, 0.0, 0.0], [1234.5, 678.9, 2500.0], [9000.0, 6000.0, 100.0]])
        theirs = np.array(
            [view.ask("(place) => shedView.projectPlace(place)", list(place)) for place in places]
        )
        assert np.abs(theirs - [left, top] - eye_of(view).picture(places)[:, :2]).max() < 0.51


def test_wheel_zooms_to_the_pointer(view: Sight, shed: Shed) -> None:
    view.page.uncheck("#grid-on")
    found = seen(eye_of(view), shed)
    rows, columns = np.nonzero(steady(found, 2) & (found >= 0))
    x, y = int(columns[0]), int(rows[0])
    left, top, _, _ = view.box()
    before = view.ask("([x, y]) => shedView.meetAt(x, y)", [left + x, top + y])
    distance = view.ask("shedView.camera.distance")
    view.page.mouse.move(left + x, top + y)
    for _ in range(4):
        view.page.mouse.wheel(0, -200)
    view.settle()
    assert view.ask("shedView.camera.distance") < 0.5 * distance
    after = view.ask("(place) => shedView.projectPlace(place)", before["place"])
    assert np.abs(np.subtract(after, [left + x, top + y])).max() < 1.0


def test_dragging_turns_moves_and_never_selects(view: Sight) -> None:
    x, y, width, height = view.box()
    middle = x + width / 2, y + height / 2
    for how, changed in (("left", "yaw"), ("right", "target")):
        before = view.ask("shedView.camera")
        view.page.mouse.move(*middle)
        view.page.mouse.down(button=how)
        view.page.mouse.move(middle[0] + 60, middle[1] + 10, steps=3)
        view.page.mouse.up(button=how)
        view.settle()
        after = view.ask("shedView.camera")
        assert after[changed] != before[changed]
        assert (after["yaw"] == before["yaw"]) == (how == "right")
        assert view.selection == []


# Measuring


def test_measures_between_points_and_faces(desk: Desk) -> None:
    with desk.opened(page_text(BLOCKS), "measure") as sight:
        sight.page.uncheck("#grid-on")
        sight.page.click("#measure")
        # The view leaves room for the list of measurements.
        sight.page.click("#view-isometric")
        sight.settle()
        eye = eye_of(sight)
        # Corners of the solid bar and of the cube that the eye sees from the front left above.
        places = np.array([(-100.0, -150.0, 3000.0), (3000.0, 650.0, 1300.0)])
        for x, y, _ in eye.picture(places):
            sight.click((x + 2, y + 2))
        (made,) = sight.ask("shedView.measurements")
        assert made["kinds"] == ["corner", "corner"]
        step = np.abs(places[1] - places[0])
        assert made["distance"] == pytest.approx(float(np.linalg.norm(step)), abs=1.0)
        assert [made["dx"], made["dy"], made["dz"]] == pytest.approx(list(step), abs=1.0)
        assert sight.text("#measure-list").split("\n")[1].replace(",", "") == f"{made['distance']:.1f} mm"
        sight.shot("measure-points")
        sight.page.click("#measure-clear")
        # Front faces of the solid bar (y = -150) and of the cube (y = 650).
        sight.page.select_option("#measure-what", "faces")
        for place in ((0.0, -150.0, 2600.0), (2800.0, 650.0, 800.0)):
            x, y, _ = eye.picture(np.array(place))
            sight.click((x, y))
        (made,) = sight.ask("shedView.measurements")
        assert made["faces"] == pytest.approx(800.0, abs=1.0)
        sight.page.click("#measure-clear")
        # The left face of the bar and the front face of the cube are not parallel.
        for place in ((-100.0, 0.0, 2600.0), (2800.0, 650.0, 800.0)):
            x, y, _ = eye.picture(np.array(place))
            sight.click((x, y))
        assert sight.ask("shedView.measurements[0].faces") is None
        sight.page.click("#measure-close")
        assert sight.ask("shedView.measurements") == []
        assert sight.page.is_hidden("#measure-panel")
        assert sight.said == []


# Findings and changes


def test_findings_fly_to_their_places(desk: Desk, shed: Shed) -> None:
    column, purlin = (shed.pieces.keys.index(keys_of(shed, role=word)[0]) for word in ("column", "purlin"))
    point = tuple(shed.pieces.placement[purlin][:, 3])
    findings = (
        ShownFinding("note-about", "note", "A purlin & <b>its</b> neighbour", point, (purlin,)),
        ShownFinding("too-near", "error", "A column stands too near", (0.0, 0.0, 1500.0), (column,)),
    )
    changes = (ShownChange("added", (column,)), ShownChange("moved", (purlin,)))
    with desk.opened(page_text(shed, findings=findings, changes=changes), "findings") as sight:
        sight.page.click("#tab-findings")
        buttons = sight.page.locator("#findings button")
        assert [button.get_attribute("data-code") for button in buttons.all()] == ["too-near", "note-about"]
        assert "A purlin & <b>its</b> neighbour" in buttons.nth(1).inner_text()
        sight.ask("(key) => shedView.show([key], false)", shed.pieces.keys[purlin])
        buttons.nth(1).click()
        sight.settle()
        assert sight.selection == [shed.pieces.keys[purlin]]
        assert sight.ask("(key) => shedView.isShown(key)", shed.pieces.keys[purlin])
        left, top, width, height = sight.box()
        x, y = sight.ask("(place) => shedView.projectPlace(place)", list(point))
        assert left < x < left + width - 320
        assert abs(y - top - height / 2) < height / 4
        sight.page.click("#tab-colours")
        for by, words in (
            ("finding", ["error", "note", "no finding"]),
            ("change", ["added", "moved", "unchanged"]),
        ):
            sight.page.select_option("#colour-by", by)
            labels = sight.page.locator("#legend .label").all_inner_texts()
            assert labels == words
        assert sight.said == []


def test_findings_and_changes_are_not_offered_when_there_are_none(view: Sight) -> None:
    assert view.page.is_hidden("#tab-findings")
    assert view.page.is_hidden("#panel-findings")
    offered = view.ask("[...document.getElementById('colour-by').options].map(({ value }) => value)")
    assert offered == ["role", "section", "mark"]
