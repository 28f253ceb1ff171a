"""Findings made by hand: hits at places of a specimen, grouped as those of the checks are."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import replace
from typing import Any

from shedbim.checks.finding import Finding, Hit
from shedbim.checks.grouping import findings_of
from shedbim.checks.subject import Subject
from shedbim.limits import CODES, Severity, Waiver, criteria
from shedbim.model.roles import Role
from shedbim.model.shed import ProjectInfo, Shed

__all__ = ["CHANGE", "CODE_OF", "HOSTILE", "found", "hits_at", "hostile", "some"]

#: A code of each severity for which greater values are worse.
CODE_OF = {
    severity: next(name for name, code in CODES.items() if code.severity is severity and code.worse == "more")
    for severity in Severity
}
CHANGE = "Move it: purlins.spacing."
#: Text that would break out of XML, HTML, a formula or a terminal where it is not escaped.
HOSTILE = "=1+1 <b>&amp;</Title>]]>\"'\x1b[31m\x00 ü \ud800 ../../x"


def found(shed: Shed, hits: Iterable[Hit], waivers: tuple[Waiver, ...] = ()) -> tuple[Finding, ...]:
    """The findings of hits in a shed."""
    return tuple(findings_of(Subject(shed, criteria(waivers=waivers)), hits))


def hits_at(shed: Shed, code: str, role: Role, **more: Any) -> list[Hit]:
    """A hit at the middle of each piece of a role; the value grows from piece to piece."""
    subject = Subject(shed, criteria())
    rows = subject.having(role).tolist()
    assert rows, role
    given = {"says": "Two pieces share {value}.", "change": CHANGE, "limit": 1000.0, "unit": "cm³", **more}
    return [
        Hit(code, (row,), subject.point(row), value=2000.0 + count, source="EN 1090-2", **given)
        for count, row in enumerate(rows)
    ]


def some(shed: Shed, waivers: tuple[Waiver, ...] = ()) -> tuple[Finding, ...]:
    """Findings of each severity in any specimen: at columns, purlins, and base plates."""
    rows = (
        (Severity.ERROR, Role.COLUMN),
        (Severity.WARNING, Role.PURLIN),
        (Severity.NOTE, Role.BASE_PLATE),
    )
    hits = [hit for severity, role in rows for hit in hits_at(shed, CODE_OF[severity], role, about=role.word)]
    return found(shed, hits, waivers)


def hostile(shed: Shed) -> Shed:
    """The shed with text that bites as its project's name and in each key."""
    info: ProjectInfo = replace(shed.project, name=HOSTILE, number=HOSTILE, revision=HOSTILE)
    keys = tuple(f"{HOSTILE}/{key}" for key in shed.pieces.keys)
    return replace(shed, project=info, pieces=replace(shed.pieces, keys=keys))
