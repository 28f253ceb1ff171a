"""A real browser without a screen, off the network, with a record of all that its pages ask for and say.

Words: a *sight* is one page opened from its file; its *picture* is what a screen would show, (h, w, 3) uint8.
Pictures are kept in the folder that the variable SHEDBIM_PICTURES names, or in one of the test run's own.
"""

from __future__ import annotations

import os
import shutil
from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass, field
from io import BytesIO
from pathlib import Path
from typing import Any, NoReturn

import numpy as np
import pytest
from numpy.typing import NDArray
from PIL import Image
from playwright.sync_api import Browser, Page, sync_playwright

__all__ = ["PROGRAM_NAMES", "Desk", "Picture", "Sight", "started", "unharmed"]

Picture = NDArray[np.uint8]

#: Debian's name first; the others are what the same program is called elsewhere.
PROGRAM_NAMES = ("chromium", "chromium-browser")
#: WebGL2 in software, nothing that calls home.
_FLAGS = (
    "--headless=new",
    "--no-sandbox",
    "--use-gl=angle",
    "--use-angle=swiftshader",
    "--enable-unsafe-swiftshader",
    "--disable-background-networking",
    "--disable-component-update",
    "--disable-sync",
    "--no-first-run",
    "--disable-quic",
)


@dataclass(eq=False)
class Sight:
    """One open page.

    Attributes:
        page: as the driver knows it.
        url: the address of its file.
        asked: addresses of all requests, in order.
        said: kind and text of all messages of the console and of all errors and dialogues, in order.
        folder: where pictures are kept.
    """

    page: Page
    url: str
    folder: Path
    asked: list[str] = field(default_factory=list)
    said: list[tuple[str, str]] = field(default_factory=list)

    def ask(self, script: str, value: Any = None) -> Any:
        """Give what an expression or function of the page comes to; promises are waited for."""
        return self.page.evaluate(script, value)

    def settle(self) -> None:
        """Wait until nothing moves and the last picture is drawn."""
        self.ask("shedView.settle()")

    def text(self, selector: str) -> str:
        """The visible text of an element, thin spaces taken out of numbers and no-break signs made plain."""
        return self.page.inner_text(selector).replace("\u202f", "").replace("\u2212", "-").strip()

    def shot(self, name: str = "") -> Picture:
        """Take a picture of the whole window, and keep it where it has a name."""
        self.settle()
        data = self.page.screenshot()
        if name:
            (self.folder / f"{name}.png").write_bytes(data)
        return np.asarray(Image.open(BytesIO(data)).convert("RGB"))

    def sheet(self, name: str = "") -> Picture:
        """Take a picture of what the model is drawn on, labels and cards left out."""
        hidden = "['labels', 'say', 'scale', 'details', 'measure-panel', 'measure-drawing', 'snap']"
        self.ask(f"{hidden}.forEach((id) => {{ document.getElementById(id).style.visibility = 'hidden'; }})")
        whole = self.shot(name)
        self.ask(f"{hidden}.forEach((id) => {{ document.getElementById(id).style.visibility = ''; }})")
        x, y, width, height = (round(value) for value in self.box())
        return whole[y : y + height, x : x + width]

    def start_over(self) -> None:
        """Bring the page back to how it opens, seen from the isometric view in perspective."""
        self.ask("""() => {
          const set = (id, value) => {
            const made = document.getElementById(id);
            made.value = value;
            for (const kind of ['input', 'change']) made.dispatchEvent(new Event(kind, { bubbles: true }));
          };
          if (document.getElementById('help').open) document.getElementById('help').close();
          if (!document.getElementById('measure-panel').hidden) document.getElementById('measure-close').click();
          if (!document.getElementById('dock').hidden) document.getElementById('schedule-close').click();
          for (const id of ['search', 'schedule-filter']) set(id, '');
          set('theme', 'light');
          set('colour-by', 'role');
          set('projection', 'perspective');
          set('measure-what', 'points');
          for (const axis of 'xyz') shedView.cut(axis, { on: false, depth: 0 });
          if (!document.getElementById('grid-on').checked) document.getElementById('grid-on').click();
          document.getElementById('tab-pieces').click();
          document.querySelector('#tree-modes [data-mode=grid]').click();
          shedView.showAll();
          shedView.select([]);
          document.activeElement.blur();
          shedView.look('isometric');
        }""")
        self.settle()

    def keys_at(self, places: list[tuple[float, float]]) -> list[tuple[str | None, str | None]]:
        """The keys at pixels of the canvas: by the numbers the card draws, and by the line of sight."""
        x, y, _, _ = self.box()
        script = (
            "(places) => places.map(([x, y]) => [shedView.keyAt(x, y), shedView.meetAt(x, y)?.key ?? null])"
        )
        return [tuple(pair) for pair in self.ask(script, [[x + a + 0.5, y + b + 0.5] for a, b in places])]

    def click(self, place: tuple[float, float], **how: Any) -> None:
        """Click on a pixel of the canvas with the mouse."""
        x, y, _, _ = self.box()
        self.page.mouse.click(x + place[0], y + place[1], **how)

    @property
    def selection(self) -> list[str]:
        """Keys of the selected pieces."""
        return self.ask("shedView.selection")

    def box(self) -> tuple[float, float, float, float]:
        """Left, top, width and height of the canvas in the window, pixels."""
        found = self.ask("(({x, y, width, height}) => [x, y, width, height])(canvas.getBoundingClientRect())")
        return tuple(found)

    def colour(self, name: str) -> NDArray[np.int64]:
        """A colour of the style sheet, red, green and blue 0 to 255."""
        text = self.ask(
            "(name) => getComputedStyle(document.documentElement).getPropertyValue(name).trim()", name
        )
        return np.array([int(text[at : at + 2], 16) for at in (1, 3, 5)])


def unharmed(sight: Sight) -> Iterator[Sight]:
    """Lend a page as it opens; afterwards nothing was said, and nothing was asked for but the file itself."""
    sight.start_over()
    yield sight
    assert sight.said == []
    assert sight.asked == [sight.url]


@dataclass(eq=False)
class Desk:
    """The running browser and the folders it works with."""

    browser: Browser
    pages: Path
    pictures: Path

    @contextmanager
    def opened(
        self, text: str, name: str, *, before: str = "", wait: bool = True, **options: Any
    ) -> Iterator[Sight]:
        """Open a page in a window of its own, off the network.

        Args:
            text: of the page.
            name: of its file, without ending.
            before: script to run before those of the page.
            wait: until the page says that it is ready.
            options: of the window, as the driver names them.
        """
        path = self.pages / f"{name}.html"
        path.write_text(text, encoding="utf-8", newline="\n")
        settings = {"viewport": {"width": 1010, "height": 640}, "reduced_motion": "reduce", **options}
        context = self.browser.new_context(offline=True, **settings)
        try:
            page = context.new_page()
            page.set_default_timeout(20_000)
            sight = Sight(page, path.as_uri(), self.pictures)
            page.on("request", lambda request: sight.asked.append(request.url))
            page.on("console", lambda message: sight.said.append((message.type, message.text)))
            page.on("pageerror", lambda error: sight.said.append(("error", str(error))))
            page.on(
                "dialog", lambda dialog: (sight.said.append(("dialog", dialog.message)), dialog.dismiss())
            )
            if before:
                page.add_init_script(before)
            page.goto(sight.url)
            if wait:
                sight.ask("window.shedView.ready")
            yield sight
        finally:
            context.close()


@contextmanager
def started(folder: Path, *flags: str) -> Iterator[Desk]:
    """Start the browser with a fresh user folder; its pages and pictures go into ``folder``."""
    program = next((found for name in PROGRAM_NAMES if (found := shutil.which(name))), None)
    if program is None:
        _cannot(f"no browser is installed: looked for {' and '.join(PROGRAM_NAMES)}")
    pictures = Path(os.environ.get("SHEDBIM_PICTURES") or folder / "pictures")
    pictures.mkdir(parents=True, exist_ok=True)
    with sync_playwright() as driver:
        browser = driver.chromium.launch(executable_path=program, args=[*_FLAGS, *flags])
        try:
            yield Desk(browser, folder, pictures)
        finally:
            browser.close()


def _cannot(reason: str) -> NoReturn:
    """Skip on somebody's own machine; fail where the whole suite must run."""
    text = f"the page was not tested in a browser: {reason}"
    if os.environ.get("CI"):
        pytest.fail(text)
    pytest.skip(text)
