"""Rules of reserved zones."""

from __future__ import annotations

from collections.abc import Iterator

from shedbim.description.models import Description
from shedbim.description.rules.broken import Broken

__all__ = ["RULES"]

_FORMS = "line with along, or x with y"


def zones_are_boxes_or_in_a_wall(description: Description) -> Iterator[Broken]:
    """A zone has either x and y, or a line and where along it."""
    for number, zone in enumerate(description.reserved):
        box, wall = (zone.x, zone.y), (zone.line, zone.along)
        whole = [each for each in (box, wall) if None not in each]
        begun = [each for each in (box, wall) if each != (None, None)]
        if len(whole) != 1 or len(begun) != 1:
            said = (
                "says both where it is in a wall and a box" if len(begun) == 2 else "does not say where it is"
            )
            yield Broken(f"reserved[{number}]", f"zone {zone.name} {said}", _FORMS, zone.name)


def zones_have_names_of_their_own(description: Description) -> Iterator[Broken]:
    """No two zones have one name."""
    names = [zone.name for zone in description.reserved]
    for number, name in enumerate(names):
        if name in names[:number]:
            yield Broken(f"reserved[{number}].name", f"two zones are called {name}", "another name", name)


RULES = (zones_are_boxes_or_in_a_wall, zones_have_names_of_their_own)
