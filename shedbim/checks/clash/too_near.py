"""Pieces that neither touch nor keep the distance of their roles."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from shedbim.checks.clash.clearances import CLEARANCES
from shedbim.checks.clash.measures import SLACK
from shedbim.checks.clash.meetings import Meetings
from shedbim.checks.clash.role_fields import fields_of
from shedbim.checks.finding import Hit

__all__ = ["too_near"]


def too_near(found: Meetings) -> Iterator[Hit]:
    """Give the hits of pairs that neither touch nor keep their distance."""
    subject, pairs = found.subject, found.pairs
    contact, _ = subject.criteria.limit("contact_gap")
    open_pairs = np.flatnonzero(
        (pairs.gap >= contact - SLACK) & ~found.doubled[pairs.first] & ~found.doubled[pairs.second]
    )
    first, second = subject.role[pairs.first[open_pairs]], subject.role[pairs.second[open_pairs]]
    for each in CLEARANCES:
        limit, source = subject.criteria.limit(each.limit)
        mine = (first == each.first) & (second == each.second)
        mine |= (first == each.second) & (second == each.first)
        rows = open_pairs[mine]
        for k in rows[pairs.gap[rows] < limit - SLACK].tolist():
            i, j = int(pairs.first[k]), int(pairs.second[k])
            yield Hit(
                "too-near",
                (i, j) if subject.role[i] is each.first else (j, i),
                found.place(k),
                f"The {each.first.word} passes the {each.second.word} at {{value}}, less than {{limit}}.",
                f"Leave more room between the two: see {fields_of(each.first, each.second)}.",
                float(pairs.gap[k]),
                limit,
                "mm",
                source,
                found.about(k),
            )
