"""What outputs share of findings: ids that stay, counts, and figures and places in words."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from hashlib import sha1
from uuid import UUID

from shedbim.checks.figures import figure
from shedbim.checks.finding import Finding, Place
from shedbim.checks.whereabouts import whereabouts
from shedbim.limits import Severity
from shedbim.model.identity import namespace
from shedbim.model.shed import Shed

__all__ = [
    "COUNTED",
    "counts",
    "few",
    "finding_ids",
    "limit_text",
    "marks_of",
    "of_the_whole",
    "value_text",
    "where",
]

#: What findings are counted by: the severities while they are open, and those that are waived.
COUNTED: tuple[str, ...] = (*(severity.value for severity in Severity), "waived")


def finding_ids(project_id: str, findings: Iterable[Finding]) -> list[UUID]:
    """Give an id for each finding: the same when the building is regenerated after a change of dimension.

    Made from the project, the code and what the finding is about. Where places of one finding are waived and others
    open, the open one keeps the id and each of the others has one that its reason goes into.
    """
    scope, seen, ids = namespace(project_id).bytes, set[str](), []
    for finding in findings:
        name = f"finding/{finding.code.name}/{finding.about}"
        text = f"{name}/waived/{finding.waived}" if name in seen else name
        # The library's own function refuses text that is no text, which another's model may hold.
        raw = sha1(scope + text.encode("utf-8", "surrogatepass")).digest()[:16]
        ids.append(UUID(bytes=raw, version=5))
        seen.add(name)
    return ids


def counts(findings: Iterable[Finding]) -> dict[str, int]:
    """Give how many findings there are of each kind of ``COUNTED``."""
    found = dict.fromkeys(COUNTED, 0)
    for finding in findings:
        found["waived" if finding.waived else finding.code.severity.value] += 1
    return found


def value_text(finding: Finding) -> str:
    """Give the measured value with its unit; empty where nothing is measured."""
    return "" if finding.value is None else figure(finding.value, finding.unit)


def limit_text(finding: Finding) -> str:
    """Give the limit with its unit; empty where there is none."""
    return "" if finding.limit is None else figure(finding.limit, finding.unit)


def of_the_whole(place: Place) -> bool:
    """Give whether something is said of no place in particular, such as of a model that was not read."""
    return not place.pieces and not any(place.point)


def where(shed: Shed, place: Place) -> str:
    """Give where a place is in words of the grid."""
    return "as a whole" if of_the_whole(place) else whereabouts(shed.grid, place.point)


def marks_of(shed: Shed, pieces: Iterable[int]) -> list[str]:
    """Give the marks of pieces, each once, in order."""
    part = shed.pieces.part
    return list(dict.fromkeys(shed.parts[int(part[piece])].mark for piece in pieces))


def few(words: Sequence[str], most: int) -> str:
    """Give words as a list that stays short: the first ones, and how many more there are."""
    more = len(words) - most
    return ", ".join(words) if more <= 0 else f"{', '.join(words[:most])} and {more:,} more"
