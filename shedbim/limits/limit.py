"""The limits that findings are measured by: each with its default, its bounds, its meaning and its source."""

from __future__ import annotations

from dataclasses import dataclass

from shedbim import units
from shedbim.limits.rows import rows_of

__all__ = ["LIMITS", "MEASURES", "REGIONS", "Limit"]

#: Measure of a limit by the word in the table; None for a bare number.
MEASURES: dict[str, units.Measure | None] = {
    "length": units.LENGTH,
    "angle": units.ANGLE,
    "mass": units.MASS,
    "number": None,
}


@dataclass(frozen=True)
class Limit:
    """One limit.

    Attributes:
        name: how the description sets it.
        measure: a word of ``MEASURES``.
        default, low, high: as a user writes them.
        meaning: what it limits.
        source: standard, guide, or common practice, that the default comes from.
        regions: (default, source) by region, where a region has its own.
    """

    name: str
    measure: str
    default: str
    low: str
    high: str
    meaning: str
    source: str
    regions: dict[str, tuple[str, str]]

    def read(self, text: str) -> float:
        """Give the value of a text in the unit used inside: mm, rad, kg, or a bare number."""
        measure = MEASURES[self.measure]
        return float(text) if measure is None else units.parse(text, measure)


def _limits() -> dict[str, Limit]:
    """The table by name; refuses doubles."""
    regional: dict[str, dict[str, tuple[str, str]]] = {}
    for row in rows_of("regions"):
        regional.setdefault(row["limit"], {})[row["region"]] = (row["value"], row["source"])
    found: dict[str, Limit] = {}
    for row in rows_of("limits"):
        if row["name"] in found:
            raise ValueError(f"two limits are called {row['name']}")
        found[row["name"]] = Limit(**row, regions=regional.pop(row["name"], {}))
    if regional:
        raise ValueError(f"regions name limits that are not there: {', '.join(sorted(regional))}")
    return found


LIMITS: dict[str, Limit] = _limits()

#: The regions whose limits of supply and transport are known, the default first.
REGIONS: tuple[str, ...] = tuple(dict.fromkeys(row["region"] for row in rows_of("regions")))
