"""Rules of the layout: labels, bays, spans and heights."""

from __future__ import annotations

from collections.abc import Iterator

from shedbim.description.models import Description
from shedbim.description.rules.broken import Broken
from shedbim.units import format_length

__all__ = ["RULES"]

#: Bays and spans shorter than this many column depths leave no room for bracing (common practice).
_COLUMNS_IN_A_BAY = 3.0

#: No shed is higher; a steep roof over very many spans would be, mm.
_HIGHEST = 100_000.0


def labels_fit_the_lines(description: Description) -> Iterator[Broken]:
    """One label for each line."""
    building = description.building
    for field, labels, lines in (
        ("letters", building.letters, len(building.spans) + 1),
        ("numbers", building.numbers, len(building.bays) + 1),
    ):
        if labels is not None and len(labels) != lines:
            yield Broken(f"building.{field}", f"{len(labels)} labels for {lines} lines", f"{lines} labels")


def bays_hold_columns(description: Description) -> Iterator[Broken]:
    """A bay is longer than a few columns, and so is a span."""
    section = description.frames.columns.section
    least = _COLUMNS_IN_A_BAY * max(section.width, section.height)
    allowed = f"at least {format_length(least)} for columns {section.designation}"
    for field, word, lengths in (
        ("bays", "bay", description.building.bays),
        ("spans", "span", description.building.spans),
    ):
        for number, length in enumerate(lengths, start=1):
            if length < least:
                message = f"{word} {number} is too short for its columns"
                yield Broken(f"building.{field}", message, allowed, format_length(length))
                break


def building_is_no_tower(description: Description) -> Iterator[Broken]:
    """The roof stays below the height that any shed has."""
    building = description.building
    top = building.eaves + max(max(s.z0, s.z1) for s in building.roof.slopes(building.spans))
    if top > _HIGHEST:
        message = "the roof is too high above the floor"
        yield Broken("building.roof", message, f"at most {format_length(_HIGHEST)}", format_length(top))


def braced_bays_exist(description: Description) -> Iterator[Broken]:
    """Braced bays are bays of the building."""
    bays = description.bracing.bays
    last = len(description.building.bays)
    if isinstance(bays, tuple):
        beyond = [str(bay) for bay in bays if isinstance(bay, int) and bay > last]
        if beyond:
            message = f"there is no bay {', '.join(beyond)}"
            yield Broken("bracing.bays", message, f"first | last | a number, 1 to {last}")


RULES = (labels_fit_the_lines, bays_hold_columns, building_is_no_tower, braced_bays_exist)
