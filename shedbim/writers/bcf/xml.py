"""Elements of XML in one expression each, and documents of them; no text of a user can break out of its place."""

from __future__ import annotations

import re
from collections.abc import Sequence
from xml.etree import ElementTree

__all__ = ["Element", "document", "element", "line", "paragraphs"]

Element = ElementTree.Element

#: What XML 1.0 allows in no document, not even escaped (production 2, Char).
_FORBIDDEN = re.compile("[^\t\n\r\x20-\ud7ff\ue000-\ufffd\U00010000-\U0010ffff]")
#: Stands where a forbidden character was: the sign for what cannot be shown.
_INSTEAD = "\ufffd"


def element(tag: str, content: str | Sequence[Element] = "", **attributes: str) -> Element:
    """Give an element with a text or with elements in it; the library escapes what has a meaning in XML."""
    made = Element(tag, {name: _allowed(value) for name, value in attributes.items()})
    if isinstance(content, str):
        made.text = _allowed(content) or None
    else:
        made.extend(content)
    return made


def document(root: Element) -> bytes:
    """Give the bytes of a document in UTF-8, indented; ends in a line feed. Changes the white space in ``root``."""
    ElementTree.indent(root)
    text = ElementTree.tostring(root, encoding="unicode")
    return f'<?xml version="1.0" encoding="UTF-8"?>\n{text}\n'.encode()


def line(text: str) -> str:
    """Give a text in one line, without spaces at its ends or more than one together."""
    return " ".join(_allowed(text).split())


def paragraphs(lines: Sequence[str]) -> str:
    """Give lines under one another; each reads by itself, for a reader may join them (whiteSpace collapse)."""
    return "\n".join(filter(None, map(line, lines)))


def _allowed(text: str) -> str:
    """The text with a sign in place of each character that XML does not allow."""
    return _FORBIDDEN.sub(_INSTEAD, text)
