"""A roof carried by trusses of hollow sections, webs welded to the chord faces."""

from __future__ import annotations

from typing import Annotated, Literal

from shedbim.description.roof_systems.trussed import TrussedRoof
from shedbim.fields import SectionOf, left_out, required
from shedbim.sections.profiles import Hollow, Pipe
from shedbim.sections.section import Section

__all__ = ["TrussRoof"]

_CHORD = SectionOf(Hollow, why="webs are welded to a flat chord face")
_WEB = SectionOf(Hollow, Pipe)


class TrussRoof(TrussedRoof):
    """Trusses of hollow sections, one in each span."""

    system: Literal["truss"] = required("trusses of hollow sections, one in each span")
    top_chord: Annotated[Section, _CHORD] = required("section of the top chord")
    bottom_chord: Annotated[Section, _CHORD] = required("section of the bottom chord")
    diagonals: Annotated[Section, _WEB] = required("section of the diagonals")
    end_diagonals: Annotated[Section, _WEB] | None = left_out(
        "as diagonals", "section of the diagonals next to the columns"
    )
    posts: Annotated[Section, _WEB] | None = left_out("as diagonals", "section of the upright webs")
