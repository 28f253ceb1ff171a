"""The view where little can be taken for granted: small screens, no card, old browsers, hostile text, no browser."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import cast
import numpy as np
import pytest
from view_browser import Desk, started
from view_eye import eye_of, seen, spots
from view_pages import BLOCKS, page_of, page_text

from shedbim.model.shed import Shed
from shedbim.writers.view import ShownFinding


@pytest.fixture(scope="module")
def shed() -> Shed:
    return cast.members_of("flat")


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
        small = sight.ask("""[...document.querySelectorAll('button, select, input')]
          .map((each) => [each.outerHTML, each.getBoundingClientRect()])
          .filter(([, box]) => box.width && (box.height < 24 || box.width < 24)).map(([html]) => html)""")
        # WCAG 2.2, success criterion 2.5.8; a tick in a label that is large enough is itself part of it.
        assert [html for html in small if 'type="checkbox"' not in html] == []


# Without a card, and old


def test_page_without_webgl2_says_so_and_still_lists(desk: Desk, shed: Shed) -> None:
    before = "HTMLCanvasElement.prototype.getContext = () => null;"
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
        failed = {}
        sight.page.on("requestfailed", lambda request: failed.update({request.url: request.failure}))
        policy = sight.page.get_attribute("meta[http-equiv='Content-Security-Policy']", "content")
        rules = dict(rule.strip().split(" ", 1) for rule in policy.split(";"))
        assert rules["default-src"] == "'none'"
        assert rules["script-src"].startswith("'sha256-")
        assert "unsafe" not in policy
        broken = sight.ask("""async () => {
          const broken = [];
          document.addEventListener('securitypolicyviolation', (event) => broken.push(event.effectiveDirective));
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
        # What the page was made to ask for never left it.
        assert set(sight.asked) - {sight.url} == set(failed)
        assert set(failed.values()) <= {"csp"}


def test_page_of_an_empty_shed_says_so_without_error(desk: Desk) -> None:
    none = np.zeros(0, np.int64)
    pieces = replace(BLOCKS.pieces, keys=(), part=none, placement=np.zeros((0, 3, 4)), assembly=none)
    with desk.opened(page_text(replace(BLOCKS, parts=(), pieces=pieces)), "empty") as sight:
        assert sight.text("#piece-count") == "0 pieces"
        assert sight.said == []


@pytest.mark.parametrize(("run", "outcome"), [("", pytest.skip.Exception), ("1", pytest.fail.Exception)])
def test_without_a_browser_the_test_says_so(
    monkeypatch: pytest.MonkeyPatch, tmp_path: Path, run: str, outcome: type[BaseException]
) -> None:
    monkeypatch.setenv("CI", run)
    monkeypatch.setenv("PATH", str(tmp_path))
    with pytest.raises(outcome, match="no browser is installed: looked for chromium"), started(tmp_path):
        pass
