"""The secondary steel that a user describes: purlins and rails."""

from __future__ import annotations

from typing import Annotated, Literal, get_args

from shedbim import units
from shedbim.fields import (
    COLD_FORMED,
    ROLLED,
    Choice,
    Options,
    Quantity,
    SectionOf,
    Whole,
    WordOr,
    default,
    left_out,
    required,
)
from shedbim.sections.profiles import LippedC, LippedZ, Round
from shedbim.sections.section import Section

__all__ = ["Purlins", "Rails"]

_SetOut = Literal["even", "nodes"]
_SECONDARY = SectionOf(LippedC, LippedZ)
_SPACING = Quantity(units.LENGTH, "300 mm", "4 m")
_OFFSET = Quantity(units.LENGTH, "0 mm", "2 m")
_GAP = Quantity(units.LENGTH, "1 mm", "50 mm")
_LIFT = Quantity(units.LENGTH, "2 mm", "100 mm")
_ROWS = WordOr("by span", Whole(0, 5))
_BAR = SectionOf(Round)


class Purlins(Options):
    """Cold-formed sections on the roof; how they meet over the frames is chosen under connections.cleats."""

    section: Annotated[Section, _SECONDARY] = required("section of the purlins")
    grade: Annotated[str, COLD_FORMED] = default("S350GD", "steel grade of the purlins")
    spacing: Annotated[float, _SPACING] = default("1.8 m", "greatest distance of purlins along the slope")
    eaves_offset: Annotated[float, _OFFSET] | None = left_out(
        "150 mm, or over the head of a tubular column",
        "first purlin from the column line at the eaves, along the slope",
    )
    ridge_offset: Annotated[float, _OFFSET] = default(
        "150 mm", "last purlin from the ridge line, along the slope"
    )
    valley_offset: Annotated[float, _OFFSET] = default(
        "300 mm", "first purlin from the column line in a valley, along the slope"
    )
    gap: Annotated[float, _GAP] = default("6 mm", "gap between butted ends")
    lift: Annotated[float, _LIFT] = default("10 mm", "clearance of a purlin above the steel that carries it")
    set_out: Annotated[_SetOut, Choice(*get_args(_SetOut))] = default(
        "even", "even: equal distances between the offsets; nodes: over the panel points of the trusses"
    )
    sag_bars: Annotated[int | Literal["by span"], _ROWS] = default("by span", "rows of sag bars in a bay")
    sag_bar: Annotated[Section, _BAR] = default("RD 12", "section of the sag bars")
    sag_bar_grade: Annotated[str, ROLLED] = default("S275", "steel grade of the sag bars")


class Rails(Options):
    """Cold-formed sections on the walls, butted at the columns."""

    section: Annotated[Section, _SECONDARY] = required("section of the rails")
    grade: Annotated[str, COLD_FORMED] = default("S350GD", "steel grade of the rails")
    spacing: Annotated[float, _SPACING] = default("1.8 m", "greatest distance of rails up the wall")
    base_offset: Annotated[float, _OFFSET] = default("300 mm", "lowest rail above the floor")
    eaves_offset: Annotated[float, _OFFSET] = default("250 mm", "highest rail below the eaves")
    gap: Annotated[float, _GAP] = default("6 mm", "gap between butted ends")
    lift: Annotated[float, _LIFT] = default("10 mm", "clearance of a rail outside the steel that carries it")
    sag_bars: Annotated[int | Literal["by span"], _ROWS] = default("by span", "rows of sag bars in a bay")
    sag_bar: Annotated[Section, _BAR] = default("RD 12", "section of the sag bars")
    sag_bar_grade: Annotated[str, ROLLED] = default("S275", "steel grade of the sag bars")
