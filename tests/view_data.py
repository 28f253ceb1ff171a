"""What a view page holds, read back by its own reader: scripts, style, policy, and the columns of its data."""

from __future__ import annotations

import json
import zlib
from base64 import b64decode
from dataclasses import dataclass, field
from html.parser import HTMLParser
from typing import Any

import numpy as np


@dataclass
class Element:
    """An element of the page: its name, attributes, and the text right inside it."""

    name: str
    attributes: dict[str, str | None]
    text: str = ""


@dataclass
class PageReader(HTMLParser):
    """Collects all elements of a page in their order."""

    elements: list[Element] = field(default_factory=list)
    open: list[Element] = field(default_factory=list)

    def __post_init__(self) -> None:
        super().__init__(convert_charrefs=True)

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        element = Element(tag, dict(attrs))
        self.elements.append(element)
        if tag not in ("meta", "link", "input"):
            self.open.append(element)

    def handle_endtag(self, tag: str) -> None:
        assert self.open.pop().name == tag

    def handle_data(self, data: str) -> None:
        if self.open:
            self.open[-1].text += data


def elements(page: str) -> list[Element]:
    """All elements of a page; every one that opens must close."""
    reader = PageReader()
    reader.feed(page)
    reader.close()
    assert reader.open == []
    return reader.elements


def data_text(page: str) -> str:
    """The compressed text of a page's data."""
    (found,) = (each for each in elements(page) if each.attributes.get("id") == "data")
    return found.text


def unpacked(text: str) -> tuple[dict[str, Any], dict[str, np.ndarray]]:
    """The texts and the columns (n, w) in a compressed text, by the form that columns.py tells."""
    raw = zlib.decompress(b64decode(text, validate=True))
    start = 4 + int.from_bytes(raw[:4], "little")
    head = json.loads(raw[4:start])
    columns: dict[str, np.ndarray] = {}
    for name, rows, width in head.pop("columns"):
        count = rows * width
        planes = np.frombuffer(raw, np.uint8, 4 * count, start).reshape(4, count).astype(np.int64)
        signed = planes[0] + (planes[1] << 8) + (planes[2] << 16) + (planes[3] << 24)
        steps = np.where(signed % 2, -(signed // 2) - 1, signed // 2).reshape(width, rows)
        values = (np.cumsum(steps, axis=1) + 2**31) % 2**32 - 2**31
        columns[name] = values.T
        start += 4 * count
    assert start == len(raw)
    return head, columns
