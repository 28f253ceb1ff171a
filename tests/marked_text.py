"""A part of a document between two marks: reading it, and writing it anew."""

from __future__ import annotations

import re
from pathlib import Path

ROOT = Path(__file__).parent.parent


def marked(path: Path, name: str) -> str:
    """The text between ``<!-- name -->`` and ``<!-- end of name -->``."""
    text = path.read_text(encoding="utf-8")
    start, end = f"<!-- {name} -->", f"<!-- end of {name} -->"
    return text[text.index(start) + len(start) : text.index(end)].strip()


def mark(path: Path, name: str, inner: str) -> None:
    """Put ``inner`` between the marks."""
    text = path.read_text(encoding="utf-8")
    pattern = re.compile(f"<!-- {name} -->.*?<!-- end of {name} -->", re.DOTALL)
    whole = f"<!-- {name} -->\n{inner}\n<!-- end of {name} -->"
    path.write_text(pattern.sub(lambda _: whole, text), encoding="utf-8")
