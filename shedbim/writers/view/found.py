"""Findings as the view shows them: a line for each, flying to its worst place."""

from __future__ import annotations

from collections.abc import Iterable

from shedbim.checks.finding import Finding
from shedbim.limits import Severity
from shedbim.model.shed import Shed
from shedbim.writers.finding_words import where
from shedbim.writers.view.shown import ShownFinding

__all__ = ["rows_of", "shown_findings"]

#: Pieces that one line selects, those of the worst places first.
_MOST_PIECES = 1000


def shown_findings(shed: Shed, findings: Iterable[Finding], drawn: Shed) -> list[ShownFinding]:
    """Give the lines of findings, in their order; waived ones come as notes with their reason.

    Args:
        shed: the building that findings speak of.
        findings: of the checks.
        drawn: what the view shows of it; pieces it leaves out are not selected.
    """
    findings = list(findings)
    pieces = [finding.pieces[:_MOST_PIECES] for finding in findings]
    row = rows_of(shed, drawn, {piece for some in pieces for piece in some})
    return [
        ShownFinding(
            code=finding.code.name,
            severity=(Severity.NOTE if finding.waived else finding.code.severity).value,
            text=_text(shed, finding),
            point=finding.places[0].point,
            pieces=tuple(row[piece] for piece in some if piece in row),
        )
        for finding, some in zip(findings, pieces, strict=True)
    ]


def rows_of(shed: Shed, drawn: Shed, wanted: set[int]) -> dict[int, int]:
    """Give the index in ``drawn`` of each wanted piece that is there."""
    if drawn.pieces.keys == shed.pieces.keys:
        return {piece: piece for piece in wanted}
    there = {key: row for row, key in enumerate(drawn.pieces.keys)}
    keys = shed.pieces.keys
    return {piece: there[keys[piece]] for piece in wanted if keys[piece] in there}


def _text(shed: Shed, finding: Finding) -> str:
    """The sentence, and where; for a waived one the reason before it."""
    places = len(finding.places)
    at = where(shed, finding.places[0])
    text = f"{finding.says} {at[0].upper()}{at[1:]}{f'; {places:,} places' if places > 1 else ''}."
    return f"Waived ({finding.waived}): {text}" if finding.waived else text
