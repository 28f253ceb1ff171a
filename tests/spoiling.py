"""Descriptions made wrong on purpose: presets with words exchanged, and the faults they give."""

from __future__ import annotations

from shedbim.description.presets import preset_text
from shedbim.description.reading import read_text
from shedbim.errors import DescriptionError, Fault


def changed(preset: str, *exchanges: tuple[str, str]) -> str:
    """The text of a preset with each first word exchanged for the second; every word must be there once."""
    text = preset_text(preset)
    for old, new in exchanges:
        assert text.count(old) == 1, f"{old!r} is {text.count(old)} times in {preset}"
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
