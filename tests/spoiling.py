"""Descriptions made wrong on purpose: specimens with words exchanged, and the faults they give.

The specimens in ``descriptions/`` are kept apart from the presets, which change with the trade's taste.
"""

from __future__ import annotations

from pathlib import Path

from shedbim.description.reading import read_text
from shedbim.errors import DescriptionError, Fault

_FILES = {path.stem: path for path in (Path(__file__).parent / "descriptions").glob("*.yaml")}

#: The names of the specimens.
SPECIMENS = tuple(sorted(_FILES))


def changed(specimen: str, *exchanges: tuple[str, str]) -> str:
    """The text of a specimen with each first word exchanged for the second; every word must be there once."""
    text = _FILES[specimen].read_text(encoding="utf-8")
    for old, new in exchanges:
        assert text.count(old) == 1, f"{old!r} is {text.count(old)} times in {specimen}"
        text = text.replace(old, new)
    return text


def faults(text: str) -> tuple[Fault, ...]:
    """The faults of a text that must be refused."""
    try:
        read_text(text, "shed.yaml")
    except DescriptionError as error:
        return error.faults
    raise AssertionError("the text was read without a fault")


def only_fault(text: str) -> Fault:
    """The one fault of a text that must have one only."""
    found = faults(text)
    assert len(found) == 1, "\n".join(map(str, found))
    return found[0]
