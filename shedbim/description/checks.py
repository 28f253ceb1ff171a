"""What the user says of the checks: the region, limits of one's own, and findings that are waived."""

from __future__ import annotations

from typing import Annotated, Any

from pydantic import create_model

from shedbim.fields import Choice, Groups, Kind, Number, Options, Quantity, Text, default, left_out, required
from shedbim.limits import CODES, LIMITS, REGIONS, Criteria, Limit, Waiver, criteria
from shedbim.limits.limit import MEASURES

__all__ = ["Checks", "Limits", "Waived"]

_MOST_WAIVERS = 200


class Waived(Options):
    """Findings that were looked at and accepted; they are still listed."""

    code: Annotated[str, Choice(*CODES)] = required("code of the findings")
    pieces: Annotated[str, Text(longest=200)] = default(
        "*", "key of a piece at the place, or a pattern as 3/truss/*"
    )
    reason: Annotated[str, Text(longest=300)] = required("why they are accepted")


def _kind(limit: Limit) -> Kind:
    """The kind of field that a limit is."""
    measure = MEASURES[limit.measure]
    if measure is None:
        return Number(float(limit.low), float(limit.high))
    return Quantity(measure, limit.low, limit.high)


def _field(limit: Limit) -> tuple[Any, Any]:
    """The type and the field of a limit; left out, the region's value holds, or the table's."""
    regional = [f"{text} ({region})" for region, (text, _) in limit.regions.items()]
    meaning = ", ".join(regional) if regional else limit.default
    return Annotated[float, _kind(limit)] | None, left_out(meaning, limit.meaning)


_FIELDS: dict[str, Any] = {name: _field(limit) for name, limit in LIMITS.items()}

#: A field for each row of the table of limits, so that no limit is written down twice.
Limits = create_model("Limits", __base__=Options, __doc__="Limits of the checks.", **_FIELDS)


class Checks(Options):
    """What the checks hold the shed against."""

    region: Annotated[str, Choice(*REGIONS)] = default(
        REGIONS[0], "whose usual limits of supply and transport hold"
    )
    limits: Limits = default({}, "limits of one's own")  # type: ignore[valid-type]
    waive: Annotated[tuple[Waived, ...], Groups(Waived, _MOST_WAIVERS)] = default(
        (), "findings that were looked at and accepted"
    )

    @property
    def criteria(self) -> Criteria:
        """What one run of the checks holds the shed against."""
        given = {name: value for name in LIMITS if (value := getattr(self.limits, name)) is not None}
        waivers = tuple(Waiver(each.code, each.pieces, each.reason) for each in self.waive)
        return criteria(given, region=self.region, waivers=waivers)
