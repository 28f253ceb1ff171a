"""Overlaps, doubled pieces, contacts that no joint declares, and pieces that are too near."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from shedbim.checks.clash.loose_joints import loose_joints
from shedbim.checks.clash.measures import SLACK
from shedbim.checks.clash.meetings import Meetings, meetings
from shedbim.checks.clash.role_fields import fields_of
from shedbim.checks.clash.too_near import too_near
from shedbim.checks.figures import figure
from shedbim.checks.finding import Hit
from shedbim.checks.subject import Subject
from shedbim.tolerance import SHARED_VOLUME

__all__ = ["clashes"]

_GRINDER = "below what a grinder takes off (common practice)"


def clashes(subject: Subject) -> Iterator[Hit]:
    """Give the hits of all pairs of pieces, and of all joints whose pieces do not reach one another."""
    found = meetings(subject)
    yield from _overlaps(found)
    yield from _doubles(found)
    yield from _contacts(found)
    yield from too_near(found)
    yield from loose_joints(found)


def _overlaps(found: Meetings) -> Iterator[Hit]:
    """Pairs that share more space than a grinder takes off."""
    role, pairs = found.subject.role, found.pairs
    for k in np.flatnonzero(found.overlapping & ~found.same).tolist():
        i, j = int(pairs.first[k]), int(pairs.second[k])
        yield Hit(
            "overlap",
            (i, j),
            found.place(k),
            f"The {role[i].word} and the {role[j].word} share {{value}}, "
            f"{figure(float(pairs.depth[k]), 'mm')} deep; {{limit}} is let pass.",
            f"Move one of the two or take a smaller section: see {fields_of(role[i], role[j])}.",
            float(pairs.volume[k]),
            SHARED_VOLUME,
            "cm³",
            _GRINDER,
        )


def _doubles(found: Meetings) -> Iterator[Hit]:
    """Pairs of one part that stand in one place."""
    role, pairs = found.subject.role, found.pairs
    for k in np.flatnonzero(found.same).tolist():
        i, j = int(pairs.first[k]), int(pairs.second[k])
        yield Hit(
            "duplicate",
            (j, i),
            found.place(k),
            f"The {role[i].word} {found.subject.mark(i)} stands twice in one place: {{value}} are shared.",
            f"Take one of the two away: see {fields_of(role[i])}.",
            float(pairs.volume[k]),
            SHARED_VOLUME,
            "cm³",
            _GRINDER,
        )


def _contacts(found: Meetings) -> Iterator[Hit]:
    """Pairs that touch, though no joint and no shop assembly holds both."""
    role, pairs = found.subject.role, found.pairs
    limit, source = found.subject.criteria.limit("contact_gap")
    touch = (pairs.gap < limit - SLACK) & ~found.overlapping & ~found.declared
    touch &= ~found.doubled[pairs.first] & ~found.doubled[pairs.second]
    for k in np.flatnonzero(touch).tolist():
        i, j = int(pairs.first[k]), int(pairs.second[k])
        yield Hit(
            "contact-without-joint",
            (i, j),
            found.place(k),
            f"The {role[i].word} and the {role[j].word} touch, less than {{limit}} apart, and no joint says how they "
            f"are joined.",
            f"Leave a gap between the two: see {fields_of(role[i], role[j])}.",
            float(pairs.gap[k]),
            limit,
            "mm",
            source,
            found.about(k),
        )
