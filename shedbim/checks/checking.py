"""The findings of all checks of a shed."""

from __future__ import annotations

from collections.abc import Callable

from shedbim.checks.finding import Finding, Hit
from shedbim.checks.grouping import findings_of
from shedbim.checks.subject import Subject
from shedbim.checks.table import CHECKS
from shedbim.limits import Criteria, criteria
from shedbim.model.other_trades import OtherModel
from shedbim.model.shed import Shed

__all__ = ["check"]


def check(
    shed: Shed,
    held_against: Criteria | None = None,
    *,
    others: tuple[OtherModel, ...] = (),
    tell: Callable[[str], None] = lambda name: None,
) -> list[Finding]:
    """Give the findings of all checks, the severe first; waived ones among them.

    Args:
        shed: the building.
        held_against: limits and waivers; those of the tables where not given.
        others: models of other trades, as read by ``readers.read_other``.
        tell: called with the name of a check before it runs.
    """
    subject = Subject(shed, held_against or criteria(), others)
    hits: list[Hit] = []
    for row in CHECKS:
        tell(row.name)
        hits += row.run(subject)
    return findings_of(subject, hits)
