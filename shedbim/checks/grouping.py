"""Findings from hits: what repeats in every frame, bay or course is one finding with its places."""

from __future__ import annotations

from collections.abc import Iterable

from shedbim.checks.figures import figure
from shedbim.checks.finding import Finding, Hit, Place
from shedbim.checks.subject import Subject
from shedbim.checks.waiving import waived_for
from shedbim.limits import CODES

__all__ = ["findings_of"]


def findings_of(subject: Subject, hits: Iterable[Hit]) -> list[Finding]:
    """Give the findings of hits, the worst place of each first, in order of severity, code and what they are about.

    What a user waived is a finding of its own beside the one that is still open.
    """
    groups: dict[tuple[str, str, str], list[Hit]] = {}
    for hit in hits:
        reason = waived_for(hit, subject.criteria.waivers, subject.shed.pieces.keys)
        groups.setdefault((hit.code, hit.about or subject.about(hit.pieces), reason), []).append(hit)
    found = [_finding(code, about, reason, group) for (code, about, reason), group in groups.items()]
    return sorted(found, key=lambda each: (each.code.severity.rank, each.code.name, each.about, each.waived))


def _finding(code: str, about: str, reason: str, hits: list[Hit]) -> Finding:
    """The finding of hits that are alike."""
    row = CODES[code]
    sign = -1.0 if row.worse == "more" else 1.0

    def weight(hit: Hit) -> tuple[float, tuple[int, ...]]:
        return (0.0 if hit.value is None else sign * hit.value, hit.pieces)

    ordered = sorted(hits, key=weight)
    worst = ordered[0]
    says = worst.says.replace("{value}", figure(worst.value, worst.unit))
    return Finding(
        code=row,
        about=about,
        says=says.replace("{limit}", figure(worst.limit, worst.unit)),
        change=worst.change,
        places=tuple(Place(hit.point, hit.pieces, hit.value, hit.others) for hit in ordered),
        value=worst.value,
        limit=worst.limit,
        unit=worst.unit,
        source=worst.source,
        waived=reason,
    )
