"""The schedule of findings: what the checks found, the severe first, where, and what to change."""

from __future__ import annotations

from collections.abc import Iterable

from shedbim.checks.finding import Finding
from shedbim.model.shed import Shed
from shedbim.writers.finding_words import few, limit_text, marks_of, value_text, where
from shedbim.writers.schedules.table import Cell, Column, Table

__all__ = ["findings_table"]

#: Marks that a cell lists.
_MOST_MARKS = 12

_COLUMNS = (
    Column("severity"),
    Column("code"),
    Column("finding"),
    Column("places", decimals=0),
    Column("where it is worst"),
    Column("marks"),
    Column("value"),
    Column("limit"),
    Column("source"),
    Column("what to change"),
    Column("waived"),
)


def findings_table(shed: Shed, findings: Iterable[Finding]) -> Table:
    """Give one row for each finding, in their order; figures are texts, for their units differ from row to row."""
    return Table("Findings", _COLUMNS, tuple(_row(shed, finding) for finding in findings))


def _row(shed: Shed, finding: Finding) -> tuple[Cell, ...]:
    return (
        finding.code.severity.value,
        finding.code.name,
        finding.says,
        len(finding.places),
        where(shed, finding.places[0]),
        few(marks_of(shed, finding.pieces), _MOST_MARKS),
        value_text(finding),
        limit_text(finding),
        finding.source,
        finding.change,
        finding.waived,
    )
