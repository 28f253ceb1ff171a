"""The controls of the view in a real browser: search, tree, schedule, colours, views, measuring, findings."""

from __future__ import annotations

import colorsys
from collections import Counter
from collections.abc import Iterator

import cast
import numpy as np
import pytest
from view_browser import Desk, Sight
from view_eye import eye_of, seen, steady
from view_pages import BLOCKS, is_rounded, number, page_of, page_text, rows_of

from shedbim.model.shed import Shed
from shedbim.writers.view import ShownChange, ShownFinding


@pytest.fixture(scope="module")
def opened_shed(desk: Desk) -> Iterator[Sight]:
    with desk.opened(page_of("flat"), "flat") as sight:
        yield sight


@pytest.fixture
def view(opened_shed: Sight) -> Iterator[Sight]:
    """The smallest shed of the cast, as it opens; afterwards nothing was said or asked for."""
    opened_shed.start_over()
    yield opened_shed
    assert opened_shed.said == []
    assert opened_shed.asked == [opened_shed.url]


@pytest.fixture(scope="module")
def shed() -> Shed:
    return cast.shed_of("flat")


def keys_of(shed: Shed, **wanted: str) -> list[str]:
    """Keys, sorted, of the pieces whose parts have a mark, a section or a role."""
    found = []
    for key, index in zip(shed.pieces.keys, shed.pieces.part, strict=True):
        part = shed.parts[index]
        has = {"mark": part.mark, "section": part.bar.section.designation, "role": part.role.word}
        if all(has[name] == value for name, value in wanted.items()):
            found.append(key)
    return sorted(found)


def roles_of(shed: Shed) -> Counter[str]:
    """How many pieces have each role."""
    return Counter(shed.parts[index].role.word for index in shed.pieces.part)


def tree_row(view: Sight, label: str) -> object:
    """The row of the tree that has this label."""
    return view.page.locator("#tree .row").filter(has=view.page.get_by_text(label, exact=True)).first


# Search


def test_search_finds_by_mark_section_and_key(view: Sight, shed: Shed) -> None:
    part = shed.parts[int(np.argmax(shed.quantities))]
    section = part.bar.section.designation
    key = shed.pieces.keys[len(shed.pieces) // 2]
    for query, expected in (
        (part.mark.lower(), keys_of(shed, mark=part.mark)),
        (section, keys_of(shed, section=section)),
        (key, [key]),
    ):
        view.page.fill("#search", query)
        assert view.page.get_attribute("#search", "aria-expanded") == "true"
        view.page.press("#search", "Enter")
        assert sorted(view.selection) == expected
        assert view.page.is_hidden("#found")
    # The piece it flew to lies in the picture.
    view.settle()
    left, top, width, height = view.box()
    x, y = view.ask("(key) => shedView.project(key)", key)
    assert left < x < left + width
    assert top < y < top + height


def test_search_is_steered_by_keys_and_says_when_it_finds_nothing(view: Sight, shed: Shed) -> None:
    view.page.fill("#search", "purlin")
    assert view.page.locator("#found [role=option]").count() > 3
    view.page.press("#search", "ArrowDown")
    view.page.press("#search", "ArrowDown")
    active = view.page.get_attribute("#search", "aria-activedescendant")
    row = view.page.locator(f"#{active}")
    assert row.get_attribute("aria-selected") == "true"
    label = row.locator(".label").inner_text()
    view.page.press("#search", "Enter")
    assert set(view.selection) in ({label}, set(keys_of(shed, mark=label)), set(keys_of(shed, section=label)))
    view.page.fill("#search", "no such thing")
    assert "holds this" in view.text("#found")
    view.page.press("#search", "Escape")
    assert view.page.is_hidden("#found")


def test_search_shows_what_was_hidden(view: Sight, shed: Shed) -> None:
    key = shed.pieces.keys[3]
    view.ask("(key) => shedView.show([key], false)", key)
    view.page.fill("#search", key)
    view.page.press("#search", "Enter")
    assert view.ask("(key) => shedView.isShown(key)", key)


# Tree


@pytest.mark.parametrize("mode", ["grid", "role", "assembly"])
def test_tree_holds_every_piece_once(view: Sight, shed: Shed, mode: str) -> None:
    view.page.click(f"#tree-modes [data-mode={mode}]")
    counts = view.ask(
        "[...document.querySelectorAll('#tree .row[aria-level=\"1\"] .count')].map((cell) => cell.textContent)"
    )
    assert sum(number(count) for count in counts) == len(shed.pieces)
    labels = view.ask(
        "[...document.querySelectorAll('#tree .row[aria-level=\"1\"] .label')].map((cell) => cell.textContent)"
    )
    if mode == "role":
        found = dict(zip(labels, (number(count) for count in counts), strict=True))
        assert found == roles_of(shed)
    elif mode == "grid":
        lines = {key.split("/")[0] for key in shed.pieces.keys}
        assert {label.split(maxsplit=1)[1].replace("\u2013", "-") for label in labels} == lines
    else:
        roots = {
            key
            for key, parent in zip(shed.assemblies.keys, shed.assemblies.parent, strict=True)
            if parent < 0
        }
        assert set(labels) == roots | {"Loose pieces"}


def test_tree_selects_hides_shows_and_isolates(view: Sight, shed: Shed) -> None:
    view.page.click("#tree-modes [data-mode=role]")
    word, count = "purlin", roles_of(shed)["purlin"]
    row = tree_row(view, word)
    row.locator(".label").click()
    assert sorted(view.selection) == keys_of(shed, role=word)
    assert row.get_attribute("aria-selected") == "true"
    row.locator(".tick").click()
    assert row.get_attribute("aria-checked") == "false"
    assert view.ask("shedView.visibleCount") == len(shed.pieces) - count
    row.locator(".tick").click()
    assert row.get_attribute("aria-checked") == "true"
    assert view.ask("shedView.visibleCount") == len(shed.pieces)
    row.hover()
    row.locator(".only").click()
    shown = [key for key in shed.pieces.keys if view.ask("(key) => shedView.isShown(key)", key)]
    assert sorted(shown) == keys_of(shed, role=word)
    assert tree_row(view, "column").get_attribute("aria-checked") == "false"
    # What the tree does to a branch it does to the leaves, and a branch half shown says so.
    row.locator(".twist").click()
    view.page.locator("#tree .row[aria-level='2'] .tick").first.click()
    assert row.get_attribute("aria-checked") == "mixed"
    view.page.click("#show-all")
    assert row.get_attribute("aria-checked") == "true"
    # A selection made elsewhere is marked in the tree.
    view.ask("(keys) => shedView.select(keys)", keys_of(shed, role="column"))
    assert tree_row(view, "column").get_attribute("aria-selected") == "true"
    assert row.get_attribute("aria-selected") == "false"


def test_card_hides_and_isolates_what_is_selected(view: Sight, shed: Shed) -> None:
    key = keys_of(shed, role="column")[0]
    view.ask("(key) => shedView.select([key])", key)
    view.page.click("#piece-hide")
    assert not view.ask("(key) => shedView.isShown(key)", key)
    view.page.click("#piece-show")
    assert view.ask("(key) => shedView.isShown(key)", key)
    view.page.click("#piece-only")
    assert view.ask("shedView.visibleCount") == 1
    view.page.click("#piece-same")
    mark = shed.parts[shed.pieces.part[shed.pieces.keys.index(key)]].mark
    assert sorted(view.selection) == keys_of(shed, mark=mark)


# Schedule


def test_schedule_says_what_the_model_holds(view: Sight, shed: Shed) -> None:
    view.page.click("#schedule")
    heads = rows_of(view, "#schedule-head")[0]
    rows = rows_of(view, "#schedule-body tr")
    assert len(rows) == len(shed.parts)
    at = {head: index for index, head in enumerate(heads)}
    for part, quantity, row in zip(shed.parts, shed.quantities, rows, strict=True):
        words = [row[at[name]] for name in ("mark", "role", "section", "grade", "finish")]
        assert words == [part.mark, part.role.word, part.bar.section.designation, part.grade, part.finish]
        assert number(row[at["quantity"]]) == quantity
        assert is_rounded(row[at["length mm"]], part.bar.length, 1)
        assert is_rounded(row[at["mass each kg"]], part.bar.mass)
        assert is_rounded(row[at["mass total kg"]], part.bar.mass * quantity, 1)
        assert is_rounded(row[at["surface each m²"]], part.bar.surface / 1e6)
    assert view.text("#schedule-sum").startswith(f"{len(shed.parts)} of {len(shed.parts)} marks")
    view.shot("schedule")


def test_schedule_sorts_and_filters(view: Sight, shed: Shed) -> None:
    view.page.click("#schedule")
    for name, column in (("length", 5), ("mass each", 6), ("quantity", 2)):
        head = view.page.locator(f"#schedule-head th[data-column='{name}']")
        for order in ("ascending", "descending"):
            head.locator("button").click()
            assert head.get_attribute("aria-sort") == order
            values = [number(row[column]) for row in rows_of(view, "#schedule-body tr")]
            assert len(values) == len(shed.parts)
            assert values == sorted(values, reverse=order == "descending")
    # Words sort with the numbers in them by size: P2 before P10.
    view.page.locator("#schedule-head th[data-column='mark'] button").click()
    marks = [row[0] for row in rows_of(view, "#schedule-body tr")]
    split = [(mark.rstrip("0123456789"), int(mark[len(mark.rstrip("0123456789")) :])) for mark in marks]
    assert split == sorted(split)
    view.page.fill("#schedule-filter", "purlin galvanized")
    rows = rows_of(view, "#schedule-body tr")
    wanted = [part for part in shed.parts if part.role.word == "purlin" and part.finish == "galvanized"]
    assert sorted(row[0] for row in rows) == sorted(part.mark for part in wanted)
    assert view.text("#schedule-sum").startswith(f"{len(wanted)} of {len(shed.parts)} marks")
    view.page.click("#schedule-select")
    assert sorted(view.selection) == keys_of(shed, role="purlin")
    view.page.click("#schedule-only")
    assert view.ask("shedView.visibleCount") == len(keys_of(shed, role="purlin"))
    view.page.fill("#schedule-filter", "nothing has this")
    assert rows_of(view, "#schedule-body tr") == []


def test_schedule_selects_in_the_model_and_follows_it(view: Sight, shed: Shed) -> None:
    view.page.click("#schedule")
    mark = shed.parts[-1].mark
    row = view.page.locator(f"#schedule-body tr[data-mark='{mark}']")
    row.locator("th").click()
    assert sorted(view.selection) == keys_of(shed, mark=mark)
    view.page.click("#view-front")
    view.settle()
    found = seen(eye_of(view), shed)
    rows, columns = np.nonzero(steady(found[:, :300], 2) & (found[:, :300] >= 0))
    piece = found[rows[0], columns[0]]
    view.click((int(columns[0]), int(rows[0])))
    assert view.selection == [shed.pieces.keys[piece]]
    picked = view.ask(
        "[...document.querySelectorAll('#schedule-body tr.picked')].map((row) => row.dataset.mark)"
    )
    assert picked == [shed.parts[shed.pieces.part[piece]].mark]
    assert view.ask("""() => {
      const row = document.querySelector('#schedule-body tr.picked').getBoundingClientRect();
      const box = document.getElementById('schedule-box').getBoundingClientRect();
      return row.top >= box.top - 1 && row.bottom <= box.bottom + 1;
    }""")


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


def hue_of(colour: object) -> tuple[float, float]:
    """Hue and saturation, 0 to 1, of red, green and blue, 0 to 255."""
    red, green, blue = (float(value) / 255 for value in colour)
    hue, saturation, _ = colorsys.rgb_to_hsv(red, green, blue)
    return hue, saturation


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
        sight.page.click("#view-isometric")
        sight.page.click("#measure")
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
        for place in ((0.0, -150.0, 2600.0), (2200.0, 650.0, 900.0)):
            x, y, _ = eye.picture(np.array(place))
            sight.click((x, y))
        (made,) = sight.ask("shedView.measurements")
        assert made["faces"] == pytest.approx(800.0, abs=1.0)
        # The left face of the bar and the front face of the cube are not parallel.
        for place in ((-100.0, 0.0, 2600.0), (2200.0, 650.0, 900.0)):
            x, y, _ = eye.picture(np.array(place))
            sight.click((x, y))
        assert sight.ask("shedView.measurements[1].faces") is None
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
