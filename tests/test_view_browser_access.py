"""The view for who does not see or use a mouse: names, contrast, announcements and keys, in a real browser."""

from __future__ import annotations

import cast
import numpy as np
import pytest
from view_access import CONTRAST, NAMED_ROLES, REFERENCES, REPEATED_IDS, TARGETS, VISIBLE_RING
from view_browser import Sight
from view_eye import eye_of

from shedbim.model.shed import Shed

#: WCAG 2.2, success criterion 1.4.3: text of ordinary size.
_LEAST_CONTRAST = 4.5


#: What the fixtures `view` and `shed` show.
SPECIMEN = "flat"


@pytest.fixture(scope="module")
def shed() -> Shed:
    return cast.members_of(SPECIMEN)


# Words


def test_every_control_has_a_name(view: Sight) -> None:
    view.page.click("#schedule")
    view.page.click("#measure")
    view.ask("shedView.select([shedView.keys[0]])")
    view.page.fill("#search", "purlin")
    tools = view.page.context.new_cdp_session(view.page)
    nameless, named = [], 0
    for tab in ("pieces", "colours", "cut", "notes"):
        view.ask("(tab) => document.getElementById(`tab-${tab}`).click()", tab)
        for node in tools.send("Accessibility.getFullAXTree")["nodes"]:
            role = node.get("role", {}).get("value")
            if node["ignored"] or role not in NAMED_ROLES:
                continue
            named += 1
            if not node.get("name", {}).get("value", "").strip():
                nameless.append((tab, role, node))
    tools.detach()
    assert nameless == []
    assert named > 150


def test_ids_and_references_hold(view: Sight) -> None:
    view.ask("shedView.select([shedView.keys[0]])")
    view.page.fill("#search", "purlin")
    view.page.press("#search", "ArrowDown")
    assert view.ask(REPEATED_IDS) == []
    assert view.ask(REFERENCES) == []
    assert view.ask("[document.documentElement.lang, document.querySelectorAll('h1').length]") == ["en", 1]
    assert view.ask("document.querySelectorAll('main, header, footer').length") == 3


@pytest.mark.parametrize("theme", ["light", "dark"])
def test_text_stands_out_from_its_ground(view: Sight, theme: str) -> None:
    view.page.select_option("#theme", theme)
    view.page.click("#schedule")
    view.page.click("#measure")
    view.ask("shedView.select([shedView.keys[0]])")
    seen_texts = 0
    for tab in ("pieces", "colours", "cut", "notes"):
        view.page.click(f"#tab-{tab}")
        found = view.ask(CONTRAST)
        seen_texts += len(found)
        assert [each for each in found if each["ratio"] < _LEAST_CONTRAST] == []
    view.page.fill("#search", "purlin")
    view.page.press("#search", "ArrowDown")
    view.page.hover("#found li:nth-child(3)")
    assert [each for each in view.ask(CONTRAST) if each["ratio"] < _LEAST_CONTRAST] == []
    view.page.press("#search", "Escape")
    view.page.click("#help-open")
    assert [each for each in view.ask(CONTRAST) if each["ratio"] < _LEAST_CONTRAST] == []
    assert seen_texts > 100
    view.shot(f"contrast-{theme}")


def test_selection_is_announced(view: Sight, shed: Shed) -> None:
    assert view.page.get_attribute("#say", "aria-live") == "polite"
    key = shed.pieces.keys[5]
    part = shed.parts[shed.pieces.part[5]]
    view.ask("(key) => shedView.select([key])", key)
    said = view.text("#say")
    for word in (key, part.mark, part.bar.section.designation):
        assert word in said
    view.ask("(keys) => shedView.select(keys)", list(shed.pieces.keys[:3]))
    assert "3 pieces selected" in view.text("#say")
    view.page.keyboard.press("Escape")
    assert view.text("#say") == "Nothing selected"


# Keys


def test_tab_reaches_every_control_with_a_ring_and_is_never_caught(view: Sight) -> None:
    view.page.click("#schedule")
    view.ask("document.activeElement.blur(); window.wanted = " + TARGETS)
    reached, ends = set(), 0
    for _ in range(2 * view.ask("wanted.length") + 20):
        view.page.keyboard.press("Tab")
        at, is_end = view.ask(
            "[wanted.indexOf(document.activeElement), document.activeElement === document.body]"
        )
        # The first round starts in the midst of the page, the second at its head.
        ends += is_end
        if ends == 2:
            break
        if at >= 0:
            reached.add(at)
            assert view.ask(VISIBLE_RING), view.ask("document.activeElement.outerHTML")
    assert ends == 2
    missing = view.ask(
        "(reached) => wanted.filter((_, at) => !reached.includes(at)).map((each) => each.outerHTML)",
        list(reached),
    )
    assert missing == []
    assert len(reached) > 25


def test_keys_turn_move_zoom_and_look(view: Sight) -> None:
    view.page.focus("#canvas")
    camera = view.ask("shedView.camera")
    view.page.keyboard.press("ArrowLeft")
    turned = view.ask("shedView.camera")
    assert turned["yaw"] != camera["yaw"]
    assert turned["pitch"] == camera["pitch"]
    view.page.keyboard.press("ArrowUp")
    assert view.ask("shedView.camera.pitch") != camera["pitch"]
    view.page.keyboard.press("Shift+ArrowRight")
    moved = view.ask("shedView.camera")
    assert moved["target"] != turned["target"]
    assert moved["yaw"] == turned["yaw"]
    view.page.keyboard.press("+")
    assert view.ask("shedView.camera.distance") < moved["distance"]
    view.page.keyboard.press("-")
    assert view.ask("shedView.camera.distance") == pytest.approx(moved["distance"])
    view.page.keyboard.press("p")
    assert view.ask("shedView.camera.parallel")
    assert view.page.input_value("#projection") == "parallel"
    view.page.keyboard.press("5")
    view.settle()
    assert np.allclose(eye_of(view).turn[2], (0, 0, -1))


def test_keys_step_through_hide_and_isolate(view: Sight, shed: Shed) -> None:
    view.page.focus("#canvas")
    view.page.keyboard.press("n")
    view.page.keyboard.press("n")
    assert view.selection == [shed.pieces.keys[1]]
    view.page.keyboard.press("h")
    assert not view.ask("(key) => shedView.isShown(key)", shed.pieces.keys[1])
    view.page.keyboard.press("n")
    assert view.selection == [shed.pieces.keys[2]]
    view.page.keyboard.press("b")
    # A hidden piece is passed over.
    assert view.selection == [shed.pieces.keys[0]]
    view.page.keyboard.press("o")
    assert view.ask("shedView.visibleCount") == 1
    view.page.keyboard.press("a")
    assert view.ask("shedView.visibleCount") == len(shed.pieces)
    view.page.keyboard.press("Escape")
    assert view.selection == []
    view.page.keyboard.press("/")
    assert view.ask("document.activeElement.id") == "search"
    # Letters typed into a field are text.
    view.page.keyboard.type("hax")
    assert view.page.input_value("#search") == "hax"
    assert view.ask("shedView.visibleCount") == len(shed.pieces)
    view.page.focus("#canvas")
    view.page.keyboard.press("?")
    assert view.page.is_visible("#help")
    view.page.keyboard.press("Escape")
    assert view.page.is_hidden("#help")
    view.page.keyboard.press("m")
    assert view.page.get_attribute("#measure", "aria-pressed") == "true"
    view.page.keyboard.press("Escape")
    assert view.page.get_attribute("#measure", "aria-pressed") == "false"


def test_keys_walk_the_tree(view: Sight, shed: Shed) -> None:
    view.page.click("#tree-modes [data-mode=role]")
    view.page.locator("#tree .row").first.focus()
    label = view.page.locator("#tree .row").first.locator(".label").inner_text()
    ours = {
        key
        for key, index in zip(shed.pieces.keys, shed.pieces.part, strict=True)
        if shed.parts[index].role.word == label
    }
    press = view.page.keyboard.press
    press("Enter")
    assert set(view.selection) == ours
    press("Space")
    assert view.ask("shedView.visibleCount") == len(shed.pieces) - len(ours)
    press("Space")
    press("ArrowRight")
    assert view.ask("document.activeElement.getAttribute('aria-expanded')") == "true"
    press("ArrowRight")
    assert view.ask("document.activeElement.getAttribute('aria-level')") == "2"
    press("ArrowLeft")
    assert view.ask("document.activeElement.getAttribute('aria-level')") == "1"
    press("ArrowLeft")
    assert view.ask("document.activeElement.getAttribute('aria-expanded')") == "false"
    press("End")
    last = view.ask("document.activeElement.querySelector('.label').textContent")
    press("o")
    only = {key for key in shed.pieces.keys if view.ask("(key) => shedView.isShown(key)", key)}
    assert only == {
        key
        for key, index in zip(shed.pieces.keys, shed.pieces.part, strict=True)
        if shed.parts[index].role.word == last
    }
