"""The check of reserved zones: what of the steel stands in them, and what is too near to them."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from shedbim.checks.finding import Hit
from shedbim.checks.others.bodies import Bodies, body_of_box
from shedbim.checks.others.meetings import Meeting, meetings
from shedbim.checks.subject import Subject
from shedbim.geometry.placements import translation
from shedbim.limits.criteria import GIVEN
from shedbim.limits.zone_kinds import ZONE_KINDS
from shedbim.model.zones import Zone

__all__ = ["zones"]

_CHANGE = (
    "Move the zone under reserved, or the steel that stands there: bracing.bays, rails.spacing or frames."
)


def zones(subject: Subject) -> Iterator[Hit]:
    """Give the hits of all reserved zones of a shed."""
    kept = subject.shed.zones
    if not kept:
        return
    asked = [_asked(zone, subject) for zone in kept]
    bodies = Bodies(
        np.array([(zone.low, zone.high) for zone in kept], float),
        translation(np.zeros((len(kept), 3))),
        np.arange(len(kept)),
        np.array([value for value, _ in asked], float),
        np.zeros(len(kept)),
    )
    for meeting in meetings(subject, bodies, lambda k: body_of_box(kept[k].low, kept[k].high)):
        yield _hit(subject, meeting, kept[meeting.body], *asked[meeting.body])


def _asked(zone: Zone, subject: Subject) -> tuple[float, str]:
    """How far steel keeps from a zone, mm, and who says so."""
    if zone.clearance is not None:
        return zone.clearance, GIVEN
    return subject.criteria.limit(ZONE_KINDS[zone.kind])


def _hit(subject: Subject, meeting: Meeting, zone: Zone, limit: float, source: str) -> Hit:
    """The hit of a piece and a zone."""
    role = subject.role[meeting.piece].word
    named = f"zone {zone.name!r} ({zone.kind})"
    about = f"{zone.name} + {subject.about((meeting.piece,))}"
    if meeting.shares:
        says = f"The {role} stands in {named}, with {{value}} of it."
        return Hit(
            "zone-overlap",
            (meeting.piece,),
            meeting.point,
            says,
            _CHANGE,
            meeting.volume,
            None,
            "cm³",
            "",
            about,
        )
    says = f"The {role} is {{value}} from {named}; at least {{limit}} is asked for."
    return Hit(
        "zone-too-near",
        (meeting.piece,),
        meeting.point,
        says,
        _CHANGE,
        meeting.gap,
        limit,
        "mm",
        source,
        about,
    )
