"""The lists of the view in a real browser: search, tree, card and schedule, and how they follow one another."""

from __future__ import annotations

from collections import Counter

import cast
import numpy as np
import pytest
from view_browser import Sight
from view_eye import eye_of, seen, steady
from view_pages import is_rounded, keys_of, number, rows_of

from shedbim.model.shed import Shed

#: What the fixtures `view` and `shed` show.
SPECIMEN = "flat"


@pytest.fixture(scope="module")
def shed() -> Shed:
    return cast.members_of(SPECIMEN)


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
    (heads,) = rows_of(view, "#schedule-head")
    for name, column in ((name, heads.index(name)) for name in ("length mm", "mass each kg", "quantity")):
        head = view.page.locator(
            f"#schedule-head th[data-column='{name.removesuffix(' mm').removesuffix(' kg')}']"
        )
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
