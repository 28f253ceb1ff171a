"""Plates, cleats and bolts in the view, in a real browser: lists, cards, switches, search, and what a click picks."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import replace
from math import radians, sqrt, tan

import cast
import numpy as np
import pytest
import view_data
from bolted_frames import bolted_frames
from view_access import VISIBLE_RING
from view_browser import Desk, Sight, unharmed
from view_eye import eye_of, seen, spots, steady
from view_pages import assert_card_tells_of, hue_of, keys_of, number, page_text, rows_of

from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.levels import at_level
from shedbim.model.roles import Role, Sort
from shedbim.model.shed import Shed
from shedbim.writers.described import described
from shedbim.writers.palette import PALETTE

BOLTS, PLATE, COLUMN = "1/rafter/A-B/start/bolts", "1/rafter/A-B/start/end plate", "1/column/A"


@pytest.fixture(scope="module")
def shed() -> Shed:
    return bolted_frames()


@pytest.fixture(scope="module")
def bolted_page(desk: Desk, shed: Shed) -> Iterator[Sight]:
    with desk.opened(page_text(shed), "bolted") as sight:
        yield sight


@pytest.fixture
def view(bolted_page: Sight) -> Iterator[Sight]:
    yield from unharmed(bolted_page)


def keys_of_sort(shed: Shed, *sorts: Sort) -> set[str]:
    """Keys of the pieces whose role is of a sort."""
    return {
        key
        for key, part in zip(shed.pieces.keys, shed.pieces.part.tolist(), strict=True)
        if shed.parts[part].role.sort in sorts
    }


def shown(view: Sight) -> set[str]:
    """Keys of the pieces that are shown."""
    return set(view.ask("shedView.keys.filter((key) => shedView.isShown(key))"))


def tree(view: Sight) -> dict[str, tuple[str, float]]:
    """Of each row of the tree whether it is ticked, and its count; by its label."""
    script = """[...document.querySelectorAll('#tree .row')].map((row) =>
      [row.querySelector('.label').textContent, row.ariaChecked, row.querySelector('.count').textContent])"""
    return {label: (ticked, number(count or "1")) for label, ticked, count in view.ask(script)}


def test_cards_tell_sizes_holes_thickness_and_grip_and_what_is_joined(view: Sight, shed: Shed) -> None:
    for piece, key in enumerate(shed.pieces.keys):
        view.ask("(key) => shedView.select([key])", key)
        assert_card_tells_of(view, shed, piece)
    view.ask("(key) => shedView.select([key])", COLUMN)
    view.page.get_by_role("button", name="EP1, BG1").click()
    assert view.selection == [PLATE, BOLTS]


def test_schedule_has_a_row_for_each_plate_and_bolt_group(view: Sight, shed: Shed) -> None:
    view.page.click("#schedule")
    (heads,) = rows_of(view, "#schedule-head")
    rows = [dict(zip(heads, row, strict=True)) for row in rows_of(view, "#schedule-body tr")]
    assert [row["section"] for row in rows] == [described(part.shape) for part in shed.parts]
    by_mark = {row["mark"]: row for row in rows}
    assert by_mark["BP1"]["section"] == "PL 20x230x410"
    assert by_mark["BG1"]["section"] == "M20x60 8.8 x6"
    assert [by_mark["BP1"][name] for name in ("length mm", "thickness mm", "grip mm", "holes")] == [
        "410.0", "20.0", "", "4",
    ]  # fmt: skip
    assert [by_mark["BG1"][name] for name in ("length mm", "thickness mm", "grip mm", "holes")] == [
        "60.0", "", "26.9", "",
    ]  # fmt: skip
    assert [by_mark["NU1"][name] for name in ("length mm", "grip mm")] == ["", "2.5"]
    # What a part does not have comes before the least number.
    view.page.click("#schedule-head [data-column=grip] button")
    view.page.click("#schedule-head [data-column=grip] button")
    marks = [row[0] for row in rows_of(view, "#schedule-body tr")]
    assert marks[:4] == ["BG1", "AB1", "BG2", "NU1"]
    view.page.fill("#schedule-filter", "fastener 8.8")
    view.page.click("#schedule-select")
    assert sorted(view.selection) == sorted(keys_of(shed, mark="BG1") + keys_of(shed, mark="AB1"))


def test_columns_of_fittings_stand_only_where_there_are_some(desk: Desk) -> None:
    with desk.opened(page_text(cast.members_of("flat")), "no fittings") as sight:
        sight.page.click("#schedule")
        (heads,) = rows_of(sight, "#schedule-head")
        assert not {"thickness mm", "grip mm"} & set(heads)
        assert not sight.page.is_visible("#sorts")
        sight.page.click("#tree-modes [data-mode=role]")
        assert "Members" not in tree(sight)
        sight.page.keyboard.press("c")
        assert sight.ask("shedView.visibleCount") == sight.ask("shedView.pieceCount")
        assert sight.said == []


def test_tree_by_role_has_members_fittings_and_fasteners(view: Sight, shed: Shed) -> None:
    view.page.click("#tree-modes [data-mode=role]")
    sorts = {"Members": Sort.MEMBER, "Fittings": Sort.FITTING, "Fasteners": Sort.FASTENER}
    assert tree(view) == {label: ("true", len(keys_of_sort(shed, sort))) for label, sort in sorts.items()}
    assert list(tree(view)) == list(sorts)
    view.page.locator("#tree .row").first.focus()
    for key in ("ArrowDown", "ArrowRight"):
        view.page.keyboard.press(key)
    words = {part.role.word for part in shed.parts if part.role.sort is Sort.FITTING}
    assert set(tree(view)) == {*sorts, *words}
    view.page.keyboard.press("ArrowDown")
    view.page.keyboard.press("Enter")
    assert sorted(view.selection) == keys_of(shed, role="base plate")


def test_search_finds_plates_and_bolts_by_size(view: Sight, shed: Shed) -> None:
    for query, mark in (("PL 16x170", "EP1"), ("m20x60", "BG1"), ("bg2", "BG2")):
        view.page.fill("#search", query)
        view.page.press("#search", "Enter")
        assert sorted(view.selection) == keys_of(shed, mark=mark)


def test_switches_are_reached_by_keys_have_names_and_hide_their_sort(view: Sight, shed: Shed) -> None:
    everything = set(shed.pieces.keys)
    view.page.click("#tree-modes [data-mode=assembly]")
    for name, sort in (("Fittings", Sort.FITTING), ("Bolts", Sort.FASTENER)):
        view.page.keyboard.press("Tab")
        focused = view.page.locator("*:focus")
        assert focused.get_attribute("type") == "checkbox"
        assert focused.evaluate("(box) => box.labels[0].textContent") == name
        assert view.ask(VISIBLE_RING)
        view.page.keyboard.press("Space")
        assert shown(view) == everything - keys_of_sort(shed, sort)
        assert "hidden" in view.text("#say")
        assert not view.ask("(sort) => shedView.sortOn(sort)", sort.value)
        view.page.keyboard.press("Space")
        assert shown(view) == everything
    # The key switches both, whatever has the focus.
    view.page.keyboard.press("c")
    assert shown(view) == keys_of_sort(shed, Sort.MEMBER)
    assert not view.page.is_checked("#fittings-on")
    assert not view.page.is_checked("#fasteners-on")
    view.page.keyboard.press("c")
    assert shown(view) == everything


def test_what_is_switched_off_stays_off_until_it_alone_is_asked_for(view: Sight, shed: Shed) -> None:
    view.page.uncheck("#fasteners-on")
    first = {key for key in shed.pieces.keys if key.startswith("1/")}
    view.ask("(keys) => shedView.isolate(keys)", sorted(first))
    assert shown(view) == first - keys_of_sort(shed, Sort.FASTENER)
    # The tree does not call a line half shown for bolts that are switched off, and can still hide it.
    view.page.click("#tree-modes [data-mode=grid]")
    assert tree(view)["Line 1"][0] == "true"
    view.page.locator("#tree .row", has_text="Line 1").locator(".tick").click()
    assert shown(view) == set()
    view.page.locator("#tree .row", has_text="Line 1").locator(".tick").click()
    assert shown(view) == first - keys_of_sort(shed, Sort.FASTENER)
    # Switched on again, only the bolts of what was asked for come back.
    view.page.check("#fasteners-on")
    assert shown(view) == first
    assert view.ask("document.getElementById('fasteners-on').indeterminate")
    view.page.uncheck("#fasteners-on")
    view.page.fill("#search", BOLTS)
    view.page.press("#search", "Enter")
    assert shown(view) == first - keys_of_sort(shed, Sort.FASTENER) | {BOLTS}
    view.page.keyboard.press("Escape")
    view.page.click("#show-all")
    assert shown(view) == set(shed.pieces.keys)
    assert view.page.is_checked("#fasteners-on")


@pytest.fixture(scope="module")
def coordination_page(desk: Desk, shed: Shed) -> Iterator[Sight]:
    with desk.opened(page_text(at_level(shed, "coordination")), "bolted-coordination") as sight:
        yield sight


@pytest.mark.parametrize("around", [BOLTS, "1/column/A/start/anchors", "1-2/purlin/A-B/1/at 1/bolts"])
@pytest.mark.parametrize("level", ["fabrication", "coordination"])
def test_a_click_picks_the_plate_or_bolts_that_are_seen(
    bolted_page: Sight, coordination_page: Sight, shed: Shed, around: str, level: str
) -> None:
    drawn = at_level(shed, level)
    for view in unharmed(bolted_page if level == "fabrication" else coordination_page):
        view.page.uncheck("#grid-on")
        view.page.select_option("#projection", "parallel")
        view.ask("(key) => shedView.fit([key])", around)
        view.settle()
        found = seen(eye_of(view), drawn)
        rows, columns = np.nonzero(steady(found, 2) & (found >= 0))
        # As many places on the fasteners as elsewhere: they are small, and what this is about.
        small = np.array([part.role.sort is Sort.FASTENER for part in drawn.parts])[
            drawn.pieces.part[found[rows, columns]]
        ]
        random = np.random.default_rng(5)
        chosen = np.concatenate(
            [random.choice(np.flatnonzero(kind), 60, replace=False) for kind in (small, ~small)]
        )
        places = [(int(columns[i]), int(rows[i])) for i in chosen]
        wanted = [drawn.pieces.keys[found[y, x]] for x, y in places]
        right = [got == (want, want) for want, got in zip(wanted, view.keys_at(places), strict=True)]
        # Shanks and washers have eight sides in the view: beside their outline the exact ones may be seen.
        assert np.mean(right) > 0.97
        assert around in wanted
        for piece, place in spots(found[:, :350], 5, reach=3).items():
            view.click(place)
            assert view.selection == [drawn.pieces.keys[piece]]
            assert_card_tells_of(view, drawn, piece)
        view.ask("shedView.select([])")
        view.shot(f"bolted-{level}-{around.split('/')[1]}")


def head_pixels(view: Sight) -> float:
    """How many pixels a bolt's head is wide, over its corners."""
    eye = eye_of(view)
    return 30.0 * 2 / sqrt(3) * eye.height / (2 * eye.distance * tan(radians(35.0 / 2)))


def test_bolts_are_hidden_by_nothing_but_their_size_and_drawn_in_their_colour(view: Sight) -> None:
    """From near they are drawn, from afar they are not, and what is not drawn is not picked."""
    view.ask("(key) => shedView.fit([key])", BOLTS)
    view.settle()
    place = view.ask("(key) => shedView.spotOf(key)", BOLTS)
    x, y = (round(value) for value in place)
    red, green, blue = (int(value) for value in view.shot()[y, x])
    hue, saturation = hue_of((red, green, blue))
    assert abs(hue - hue_of(PALETTE[Role.BOLTS])[0]) < 0.04
    assert saturation > 0.5
    view.ask("(keys) => shedView.isolate(keys)", [BOLTS])
    view.page.uncheck("#grid-on")
    assert view.ask("shedView.filledShare()") > 0.005
    view.page.focus("#canvas")
    # Each step goes a quarter farther away: one ends where a head is between 1.1 and 1.4 pixels wide.
    sizes = [head_pixels(view)]
    while sizes[-1] > 1.4:
        view.page.keyboard.press("-")
        sizes.append(head_pixels(view))
    view.settle()
    assert sizes[-1] > 1.1
    assert view.ask("shedView.filledShare()") == 0
    assert view.ask("(key) => shedView.spotOf(key)", BOLTS) is None
    # A selected group is found again however far away it is.
    view.ask("(key) => shedView.select([key])", BOLTS)
    view.settle()
    assert view.ask("shedView.filledShare()") > 0


def test_meshes_of_bolts_are_coarse_and_their_edges_are_no_chords(shed: Shed) -> None:
    _, columns = view_data.unpacked(view_data.data_text(page_text(shed)))
    for part, (_, triangles, surface) in zip(shed.parts, columns["mesh counts"].tolist(), strict=True):
        if isinstance(part.shape, BoltGroup):
            # Prisms of six or eight sides, 4 k - 4 triangles each.
            assert triangles <= part.shape.count * len(part.shape.fastener.stack) * (4 * 8 - 4)
            assert surface == 2


@pytest.mark.parametrize("level", ["coordination", "fabrication"])
def test_the_page_of_a_hall_with_all_its_bolts_stays_small(level: str) -> None:
    """Bounds of our own: twice what the issue of the view allows for members alone may not be reached."""
    shed = at_level(cast.shed_of("distribution-hall"), level)
    assert len(shed.pieces) > 50_000
    assert len(page_text(shed).encode()) < 1_000_000


def test_coordination_shows_less_and_tells_the_same(shed: Shed) -> None:
    less, whole = (
        view_data.unpacked(view_data.data_text(page_text(at_level(shed, level))))
        for level in ("coordination", "fabrication")
    )
    for name in ("parts", "masses", "figures", "kinds", "keys"):
        assert less[0][name] == whole[0][name]
    assert (less[1]["part sizes"][:, :2] == whole[1]["part sizes"][:, :2]).all()
    assert len(less[1]["mesh triangles"]) < len(whole[1]["mesh triangles"])
    drilled = replace(shed, parts=tuple(replace(part, drawn=None) for part in shed.parts))
    assert whole[1]["mesh triangles"].tolist() == (
        view_data.unpacked(view_data.data_text(page_text(drilled)))[1]["mesh triangles"].tolist()
    )
