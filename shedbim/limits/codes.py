"""The codes of findings: each with its severity, its area, and what it means."""

from __future__ import annotations

from dataclasses import dataclass
from enum import Enum

from shedbim.limits.rows import rows_of

__all__ = ["CODES", "Code", "Severity"]


class Severity(Enum):
    """How much a finding weighs; the worst first.

    An error is severe: the shed is not sound to hand over while it is open. A warning is to be looked at and
    answered. A note is worth knowing.
    """

    ERROR = "error"
    WARNING = "warning"
    NOTE = "note"

    @property
    def rank(self) -> int:
        """0 for the worst."""
        return list(Severity).index(self)


@dataclass(frozen=True)
class Code:
    """One code: a word that can be searched for and waived.

    Attributes:
        name: the code.
        severity: how much its findings weigh.
        area: the group it is listed with.
        worse: ``more`` where greater measured values are worse, ``less`` where smaller ones are.
        meaning: what is wrong, in one sentence.
    """

    name: str
    severity: Severity
    area: str
    worse: str
    meaning: str


def _codes() -> dict[str, Code]:
    """The table by name; refuses doubles."""
    found: dict[str, Code] = {}
    for row in rows_of("codes"):
        if row["code"] in found:
            raise ValueError(f"two codes are called {row['code']}")
        found[row["code"]] = Code(
            row["code"], Severity(row["severity"]), row["area"], row["worse"], row["meaning"]
        )
    return found


CODES: dict[str, Code] = _codes()
