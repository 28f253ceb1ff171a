"""The bracing that a user describes: roof, walls, struts, ties."""

from __future__ import annotations

from typing import Annotated, Literal, get_args

from shedbim import units
from shedbim.fields import (
    ROLLED,
    Choice,
    NumbersOr,
    Options,
    Quantity,
    SectionOf,
    Whole,
    default,
    left_out,
    required,
)
from shedbim.sections.profiles import Angle, Hollow, Pipe
from shedbim.sections.section import Section

__all__ = ["Bracing", "EavesStrut", "RoofBracing", "Struts", "Ties", "WallBracing"]

_Pattern = Literal["crossed", "single"]
_Lines = Literal["outer", "all"]
_BRACE = SectionOf(Angle, Pipe)
_STRUT = SectionOf(Hollow, Pipe)


class RoofBracing(Options):
    """Bracing in the plane of the roof."""

    pattern: Annotated[_Pattern, Choice(*get_args(_Pattern))] = required(
        "two braces that cross in a panel, or one"
    )
    section: Annotated[Section, _BRACE] = required("section of the roof braces")
    grade: Annotated[str, ROLLED] = default("S355", "steel grade of the roof braces")
    panels: Annotated[int, Whole(1, 60)] | None = left_out(
        "chosen for a good angle", "number of braced panels in a slope"
    )


class WallBracing(Options):
    """Bracing in the planes of the column lines along the building."""

    pattern: Annotated[_Pattern, Choice(*get_args(_Pattern))] = required(
        "two braces that cross in a tier, or one"
    )
    section: Annotated[Section, _BRACE] = required("section of the wall braces")
    grade: Annotated[str, ROLLED] = default("S355", "steel grade of the wall braces")
    tiers: Annotated[int, Whole(1, 20)] | None = left_out(
        "chosen for a good angle", "number of tiers one above the other"
    )
    lines: Annotated[_Lines, Choice(*get_args(_Lines))] = default("all", "column lines that are braced")


class Struts(Options):
    """Struts along the building between the braced panels of the roof."""

    section: Annotated[Section, _STRUT] = default("CHS 88.9x4", "section of the struts")
    grade: Annotated[str, ROLLED] = default("S355", "steel grade of the struts")


class EavesStrut(Options):
    """Struts along the building at the column heads."""

    section: Annotated[Section, _STRUT] = default(
        "SHS 100x100x5", "section of eaves struts and valley struts"
    )
    grade: Annotated[str, ROLLED] = default("S355", "steel grade of eaves struts and valley struts")


class Ties(Options):
    """Ties along the building between the bottom chords of trusses."""

    section: Annotated[Section, _STRUT] = default("CHS 76.1x4", "section of the bottom chord ties")
    grade: Annotated[str, ROLLED] = default("S355", "steel grade of the bottom chord ties")
    spacing: Annotated[float, Quantity(units.LENGTH, "1 m", "60 m")] = default(
        "12 m", "greatest distance of the ties across the truss"
    )


class Bracing(Options):
    """All bracing of the building."""

    bays: Annotated[Literal["rule"] | tuple[int | str, ...], NumbersOr("rule", ("first", "last"), 1, 500)] = (
        default("rule", "braced bays; rule: first, last and between them so that they are at most 50 m apart")
    )
    roof: RoofBracing = required("bracing in the plane of the roof")
    walls: WallBracing = required("bracing in the column lines along the building")
    struts: Struts = default({}, "struts along the building in the plane of the roof")
    eaves_strut: EavesStrut = default({}, "struts along the building at the column heads")
    ties: Ties = default({}, "ties along the building between the bottom chords of trusses")
