"""The view for everybody: without a mouse, by touch, in words, on a small screen, without a card; and unharmed."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import replace

import cast
import numpy as np
import pytest
from view_access import CONTRAST, NAMED_ROLES, REFERENCES, REPEATED_IDS, TARGETS, VISIBLE_RING
from view_browser import Desk, Sight
from view_eye import eye_of, seen, spots
from view_pages import BLOCKS, page_of, page_text

from shedbim.model.shed import Shed
from shedbim.writers.view import ShownFinding

#: WCAG 2.2, success criterion 1.4.3: text of ordinary size.
_LEAST_CONTRAST = 4.5


@pytest.fixture(scope="module")
def opened_shed(desk: Desk) -> Iterator[Sight]:
    with desk.opened(page_of("flat"), "flat-access") as sight:
        yield sight


@pytest.fixture
def view(opened_shed: Sight) -> Iterator[Sight]:
    opened_shed.start_over()
    yield opened_shed
    assert opened_shed.said == []
    assert opened_shed.asked == [opened_shed.url]


@pytest.fixture(scope="module")
def shed() -> Shed:
    return cast.shed_of("flat")


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
    reached = set()
    for _ in range(view.ask("wanted.length") + 20):
        view.page.keyboard.press("Tab")
        found = view.ask("[wanted.indexOf(document.activeElement), document.activeElement === document.body]")
        if found[1]:
            break
        if found[0] >= 0:
            reached.add(found[0])
            assert view.ask(VISIBLE_RING), view.ask("document.activeElement.outerHTML")
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


# Touch and small screens


def test_fingers_turn_pinch_and_pick_on_a_small_screen(desk: Desk, shed: Shed) -> None:
    small = {
        "viewport": {"width": 390, "height": 780},
        "has_touch": True,
        "is_mobile": True,
        "device_scale_factor": 2,
    }
    with desk.opened(page_of("flat"), "touch", **small) as sight:
        sight.shot("phone")
        # Nothing runs out of the window at its side.
        assert sight.ask("document.scrollingElement.scrollWidth <= innerWidth && innerWidth === 390")
        sight.page.click("#grid-on")
        sight.page.click("#view-isometric")
        sight.settle()
        left, top, width, height = sight.box()
        (piece, (x, y)), *_ = spots(seen(eye_of(sight), shed), 3).items()
        sight.page.touchscreen.tap(left + x, top + y)
        assert sight.selection == [shed.pieces.keys[piece]]
        assert sight.page.is_visible("#piece-key")
        sight.shot("phone-selection")
        tools = sight.page.context.new_cdp_session(sight.page)

        def touch(kind: str, *points: tuple[float, float]) -> None:
            at = [{"x": a, "y": b, "id": number} for number, (a, b) in enumerate(points)]
            tools.send("Input.dispatchTouchEvent", {"type": kind, "touchPoints": at})

        x, y = left + width / 2, top + height / 2
        before = sight.ask("shedView.camera")
        touch("touchStart", (x, y))
        for step in range(1, 5):
            touch("touchMove", (x + 15 * step, y))
        touch("touchEnd")
        sight.settle()
        turned = sight.ask("shedView.camera")
        assert abs(turned["yaw"] - before["yaw"]) > 0.1
        assert turned["distance"] == before["distance"]
        assert sight.selection == [shed.pieces.keys[piece]]
        # Two fingers move apart to twice their distance: the model comes twice as near.
        touch("touchStart", (x - 40, y))
        touch("touchStart", (x - 40, y), (x + 40, y))
        for step in range(1, 5):
            touch("touchMove", (x - 40 - 10 * step, y), (x + 40 + 10 * step, y))
        touch("touchEnd")
        sight.settle()
        pinched = sight.ask("shedView.camera")
        assert pinched["distance"] == pytest.approx(turned["distance"] / 2, rel=0.08)
        assert pinched["yaw"] == turned["yaw"]
        # The page itself was neither zoomed nor scrolled.
        assert sight.ask("[visualViewport.scale, scrollX, scrollY]") == [1, 0, 0]
        assert sight.said == []


def test_buttons_are_large_enough_for_fingers(desk: Desk) -> None:
    with desk.opened(
        page_text(BLOCKS), "fingers", viewport={"width": 390, "height": 780}, has_touch=True, is_mobile=True
    ) as sight:
        small = sight.ask("""[...document.querySelectorAll('button, select, input')].map((each) => [each.outerHTML, each.getBoundingClientRect()])
          .filter(([, box]) => box.width && (box.height < 24 || box.width < 24)).map(([html]) => html)""")
        # WCAG 2.2, success criterion 2.5.8; a tick in a label that is large enough is itself part of it.
        assert [html for html in small if 'type="checkbox"' not in html] == []


# Without a card, and old


@pytest.mark.parametrize(
    "before",
    ["HTMLCanvasElement.prototype.getContext = () => null;"],
    ids=["no context"],
)
def test_page_without_webgl2_says_so_and_still_lists(desk: Desk, shed: Shed, before: str) -> None:
    with desk.opened(page_of("flat"), "no-card", before=before) as sight:
        assert sight.page.is_visible("#no-webgl")
        assert "WebGL2" in sight.text("#no-webgl")
        sight.shot("no-webgl")
        mark = shed.parts[0].mark
        sight.page.fill("#search", mark)
        sight.page.press("#search", "Enter")
        assert len(sight.selection) == shed.quantities[0]
        sight.page.click("#schedule")
        assert sight.page.locator("#schedule-body tr").count() == len(shed.parts)
        for control in ("#fit", "#view-front", "#show-all", "#measure"):
            sight.ask("(control) => document.querySelector(control).click()", control)
        sight.page.locator("#tree .row .tick").first.click()
        assert sight.said == []


def test_old_browser_is_told_so(desk: Desk) -> None:
    with desk.opened(
        page_text(BLOCKS), "old", before="delete globalThis.DecompressionStream;", wait=False
    ) as sight:
        sight.page.wait_for_selector("#too-old", state="visible")
        assert sight.page.is_hidden("#loading")


# Harm

_HOSTILE = "</script><script>alert(1)</script>"
_IMAGE = "<img src=x onerror=alert(2)>"


def test_what_a_user_typed_is_shown_as_text_and_runs_nothing(desk: Desk, shed: Shed) -> None:
    parts = tuple(
        replace(part, mark=f"{part.mark}{_IMAGE}", grade=_HOSTILE, finish="{{script}}<b>")
        for part in shed.parts
    )
    spoiled = replace(
        shed,
        project=replace(shed.project, name=_HOSTILE, number=_IMAGE, revision="'\"&amp;<!--"),
        parts=parts,
        pieces=replace(shed.pieces, keys=tuple(f"{key}{_IMAGE}" for key in shed.pieces.keys)),
        grid=replace(shed.grid, letters=tuple(f"{label}{_IMAGE}" for label in shed.grid.letters)),
        defaults=((_HOSTILE, _IMAGE),),
        notes=(_HOSTILE, "]]>{{data}}\u2028</style><!-- <script>"),
    )
    findings = (ShownFinding(_IMAGE, "error", _HOSTILE, (0.0, 0.0, 0.0), (0,)),)
    with desk.opened(page_text(spoiled, findings=findings), "hostile") as sight:
        assert sight.page.title() == _HOSTILE
        assert sight.text("h1") == _HOSTILE
        assert sight.page.text_content("#job") == f"{_IMAGE} · '\"&amp;<!--"
        sight.ask("shedView.select([shedView.keys[0]])")
        assert sight.text("#piece-key") == spoiled.pieces.keys[0]
        assert _HOSTILE in sight.text("#details-body")
        assert "{{script}}<b>" in sight.text("#details-body")
        sight.page.click("#schedule")
        sight.page.fill("#search", "img")
        for tab in ("notes", "findings", "cut", "colours", "pieces"):
            sight.ask("(tab) => document.getElementById(`tab-${tab}`).click()", tab)
            if tab == "notes":
                assert sight.page.locator("#notes li").all_inner_texts()[0] == _HOSTILE
                assert sight.text("#defaults dt") == _HOSTILE
            if tab == "findings":
                assert _HOSTILE in sight.text("#findings")
        sight.shot("hostile")
        assert sight.ask("document.querySelectorAll('script').length") <= 2
        assert sight.ask("document.images.length") == 0
        assert sight.asked == [sight.url]
        assert sight.said == []


def test_policy_forbids_all_else(desk: Desk) -> None:
    with desk.opened(page_text(BLOCKS), "policy") as sight:
        policy = sight.page.get_attribute("meta[http-equiv='Content-Security-Policy']", "content")
        rules = dict(rule.strip().split(" ", 1) for rule in policy.split(";"))
        assert rules["default-src"] == "'none'"
        assert rules["script-src"].startswith("'sha256-")
        assert "unsafe" not in policy
        broken = sight.ask("""async () => {
          const broken = [];
          document.addEventListener('securitypolicyviolation', ({ effectiveDirective }) => broken.push(effectiveDirective));
          const script = document.createElement('script');
          script.textContent = 'window.harmed = true';
          const image = document.createElement('img');
          image.src = 'https://example.invalid/a.png';
          const style = document.createElement('style');
          style.textContent = 'body { display: none }';
          const frame = document.createElement('iframe');
          frame.src = 'https://example.invalid/';
          document.body.append(script, image, style, frame);
          await fetch('https://example.invalid/').catch(() => {});
          await new Promise((done) => setTimeout(done, 300));
          return [broken.sort(), window.harmed ?? false, getComputedStyle(document.body).display];
        }""")
        directives = {"connect-src", "frame-src", "img-src", "script-src-elem", "style-src-elem"}
        assert set(broken[0]) == directives
        assert broken[1:] == [False, "grid"]
        assert sight.asked == [sight.url]
