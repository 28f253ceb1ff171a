"""Findings as lines that a person reads: how many there are, then each with its places and what to change."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from textwrap import wrap

from shedbim.checks.finding import Finding, Place
from shedbim.limits import Severity
from shedbim.model.shed import Shed
from shedbim.writers.finding_words import where

__all__ = ["count_rows", "counts_line", "finding_lines"]

_WIDTH = 100  # characters of a line
_MOST_PLACES = 3  # of a finding; the files list them all
_MOST_PIECES = 4  # of a place

_PLURAL = {Severity.ERROR: "errors", Severity.WARNING: "warnings", Severity.NOTE: "notes"}


def counts_line(findings: Sequence[Finding]) -> str:
    """Give the numbers of findings by severity in one line."""
    open_ones = [each for each in findings if not each.waived]
    waived = len(findings) - len(open_ones)
    counts = [
        _counted(sum(each.code.severity is severity for each in open_ones), severity) for severity in Severity
    ]
    return f"{', '.join(counts)}{f'; {waived} waived' if waived else ''}"


def count_rows(findings: Sequence[Finding]) -> list[tuple[str, ...]]:
    """Give for each area its open errors, warnings and notes, and what is waived."""
    areas = sorted({each.code.area for each in findings})
    rows = []
    for area in areas:
        here = [each for each in findings if each.code.area == area]
        counts = [
            sum(each.code.severity is severity and not each.waived for each in here) for severity in Severity
        ]
        rows.append((area, *(str(count) for count in (*counts, sum(bool(each.waived) for each in here)))))
    return rows


def finding_lines(shed: Shed, findings: Sequence[Finding]) -> Iterator[str]:
    """Give the lines of all findings, the severe first, under a heading for each severity; waived ones last."""
    for severity in Severity:
        here = [each for each in findings if each.code.severity is severity and not each.waived]
        yield from _group(shed, _PLURAL[severity].upper(), here)
    yield from _group(shed, "WAIVED", [each for each in findings if each.waived])


def _group(shed: Shed, heading: str, findings: Sequence[Finding]) -> Iterator[str]:
    """A heading and the findings under it; nothing for none."""
    if findings:
        yield ""
        yield heading
    for each in findings:
        yield from _folded(f"{each.code.name}: {each.says}", 2)
        for place in each.places[:_MOST_PLACES]:
            yield from _folded(_place(shed, place), 6)
        more = len(each.places) - _MOST_PLACES
        if more > 0:
            yield from _folded(f"and {more:,} more {'place' if more == 1 else 'places'}", 6)
        if each.source:
            yield from _folded(f"limit: {each.source}", 6)
        yield from _folded(f"waived: {each.waived}" if each.waived else f"change: {each.change}", 6)


def _place(shed: Shed, place: Place) -> str:
    """Where it is, and the marks and keys of the pieces."""
    named = [
        f"{shed.parts[int(shed.pieces.part[piece])].mark} {shed.pieces.keys[piece]}"
        for piece in place.pieces[:_MOST_PIECES]
    ]
    if len(place.pieces) > _MOST_PIECES:
        named.append(f"{len(place.pieces) - _MOST_PIECES:,} more")
    return ": ".join(filter(None, (where(shed, place), ", ".join(named))))


def _counted(count: int, severity: Severity) -> str:
    return f"{count} {severity.value if count == 1 else _PLURAL[severity]}"


def _folded(text: str, indent: int) -> list[str]:
    """A paragraph in lines, those after the first set in."""
    return wrap(text, _WIDTH, initial_indent=" " * indent, subsequent_indent=" " * (indent + 2))
