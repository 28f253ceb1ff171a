"""Lapped purlins: the bars of odd and even bays lie nested in each other over the inner frames.

The wide flange is up in odd bays. In even bays the section is turned half round its axis, its web against the
other's on the open side and lower by the wall, so that each wide flange takes in the other's narrow one. The line
of a course is the middle of the nest.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import replace

from shedbim.description.models import Description
from shedbim.expand.bays import Bay
from shedbim.expand.cold_formed import Course
from shedbim.expand.impossible import impossible

__all__ = ["are_lapped", "check_room_beside", "laid", "lies", "line_over_steel", "overlap"]

#: From the end of a sleeve or lap to the row of sag bars beside it: their stagger, a nut and air, mm.
_BESIDE = 60.0


def are_lapped(description: Description) -> bool:
    """Whether purlins run on over the frames beside each other."""
    return description.connections.cleats.continuity == "lapped"


def overlap(description: Description) -> tuple[str, float]:
    """Give the option that says how long sleeves or laps are, and that length in all, mm; 0 where there are none."""
    cleats = description.connections.cleats
    return {
        "butted": ("", 0.0),
        "sleeved": ("connections.cleats.sleeve", cleats.sleeve),
        "lapped": ("connections.cleats.lap", cleats.lap),
    }[cleats.continuity]


def line_over_steel(description: Description) -> float:
    """Give how far the lines of the purlins lie over the upper face of the roof steel, mm.

    The lift is that of the lower ones where they lap.
    """
    purlins = description.purlins
    nest = purlins.section.profile.thickness / 2 if are_lapped(description) else 0.0
    return purlins.lift + purlins.section.height / 2 + nest


def laid(description: Description, course: Course, *, odd: bool) -> Course:
    """Give a course as its bars lie in the odd or even bays; the same in all where they do not lap."""
    if not are_lapped(description):
        return course
    half = description.purlins.section.profile.thickness / 2
    return replace(course, aside=-half if odd else half, turned=not odd)


def lies(description: Description, course: Course) -> Iterable[Course]:
    """Give a course in every way that its bars lie."""
    turns = (True, False) if are_lapped(description) else (True,)
    return [laid(description, course, odd=odd) for odd in turns]


def check_room_beside(description: Description, bay: Bay, places: Sequence[float]) -> None:
    """Refuse sleeves or laps that reach the sag bars at ``places`` in a bay, or each other."""
    field, length = overlap(description)
    if not length:
        return
    room = [bay.length] if bay.first or bay.last else [bay.length / 2]
    room += [place for place in places if not bay.first]
    room += [bay.length - place for place in places if not bay.last]
    most = 2 * (min(room) - _BESIDE)
    if length > most:
        what = "laps" if are_lapped(description) else "sleeves"
        raise impossible(
            field, f"the {what} reach the sag bars of a bay, or each other",
            given=f"{length:.0f} mm", allowed=f"{most:.0f} mm at most, or fewer rows of sag bars",
        )  # fmt: skip
