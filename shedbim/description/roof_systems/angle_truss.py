"""A roof carried by trusses of angles in pairs, back to back on either side of gussets."""

from __future__ import annotations

from typing import Annotated, Literal

from shedbim import units
from shedbim.description.roof_systems.trussed import TrussedRoof
from shedbim.fields import Quantity, SectionOf, default, left_out, required
from shedbim.sections.profiles import Angle
from shedbim.sections.section import Section

__all__ = ["AngleTrussRoof"]

_PAIR = SectionOf(Angle, why="with equal legs; bars are pairs of angles on either side of a gusset")


class AngleTrussRoof(TrussedRoof):
    """Trusses of pairs of angles, one in each span."""

    system: Literal["angle-truss"] = required("trusses of pairs of angles with gussets, one in each span")
    top_chord: Annotated[Section, _PAIR] = required("one angle of the pair that is the top chord")
    bottom_chord: Annotated[Section, _PAIR] = required("one angle of the pair that is the bottom chord")
    diagonals: Annotated[Section, _PAIR] = required("one angle of the pair that is a diagonal")
    end_diagonals: Annotated[Section, _PAIR] | None = left_out(
        "as diagonals", "one angle of the pairs that are the diagonals next to the columns"
    )
    posts: Annotated[Section, _PAIR] | None = left_out(
        "as diagonals", "one angle of the pairs that are the upright webs"
    )
    gusset: Annotated[float, Quantity(units.LENGTH, "6 mm", "25 mm")] = default(
        "10 mm", "thickness of the gussets, and so the gap between the two angles of a pair"
    )
