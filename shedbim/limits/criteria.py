"""What a shed is held against in one run: the value and the source of every limit, and what is waived."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from shedbim.limits.limit import LIMITS, REGIONS

__all__ = ["GIVEN", "Criteria", "Waiver", "criteria"]

#: The source of a limit that the user set.
GIVEN = "set in the description"


@dataclass(frozen=True)
class Waiver:
    """Findings that were looked at and accepted.

    Attributes:
        code: of the findings.
        pieces: pattern of keys (``*`` for any run of letters); it covers a place that has a piece of such a key.
        reason: why, in the user's words.
    """

    code: str
    pieces: str
    reason: str


@dataclass(frozen=True)
class Criteria:
    """All limits as they hold in one run.

    Attributes:
        region: whose limits of supply and transport hold.
        values: value by name of the limit: mm, rad, kg or a bare number.
        sources: source by name of the limit.
        waivers: in the order of the description.
    """

    region: str
    values: Mapping[str, float]
    sources: Mapping[str, str]
    waivers: tuple[Waiver, ...] = ()

    def limit(self, name: str) -> tuple[float, str]:
        """Give the value of a limit and its source."""
        return self.values[name], self.sources[name]


def criteria(
    given: Mapping[str, float] | None = None,
    *,
    region: str = REGIONS[0],
    waivers: tuple[Waiver, ...] = (),
) -> Criteria:
    """Give the criteria of a region, but with the limits that a user set: value inside by name."""
    values, sources = {}, {}
    for name, limit in LIMITS.items():
        text, source = limit.regions.get(region, (limit.default, limit.source))
        values[name], sources[name] = limit.read(text), source
    for name, value in (given or {}).items():
        values[name], sources[name] = value, GIVEN
    return Criteria(region, values, sources, waivers)
