"""What all trusses have in common: shape, pattern, depth, and a section for each kind of bar."""

from __future__ import annotations

from typing import Annotated, Literal, get_args

from shedbim import units
from shedbim.description.roof_systems.system import RoofSystem
from shedbim.fields import ROLLED, Choice, Quantity, SectionOf, Whole, WordOr, default, left_out, required
from shedbim.sections.profiles import Angle, Hollow, Pipe
from shedbim.sections.section import Section
from shedbim.webs import PATTERNS

__all__ = ["TrussedRoof"]

_Shape = Literal["parallel", "pitched"]
_BAR = SectionOf(Hollow, Pipe, Angle)
#: The default: a rigid load of 18.65 m is the longest on British roads without notice (published guidance).
_LONGEST = WordOr("none", Quantity(units.LENGTH, "6 m", "60 m"))


class TrussedRoof(RoofSystem):
    """Trusses, one in each span; each kind names the sections that its bars may have."""

    system: str = required("trusses, one in each span")
    shape: Annotated[_Shape, Choice(*get_args(_Shape))] = default(
        "parallel", "parallel: both chords follow the roof; pitched: the bottom chord is level or flatter"
    )
    pattern: Annotated[str, Choice(*PATTERNS)] = required("how the webs run")
    panels: Annotated[int, Whole(2, 60)] = required("number of panels in a span")
    depth: Annotated[float, Quantity(units.LENGTH, "200 mm", "12 m")] = required(
        "distance of the chord axes, measured upright; of a pitched truss at the eaves"
    )
    bottom_pitch: Annotated[float, Quantity(units.ANGLE, "0 deg", "45 deg")] = default(
        "0 deg",
        "pitch of the bottom chord of a pitched truss, under the left-hand slope where the slopes differ",
    )
    top_chord: Annotated[Section, _BAR] = required("section of the top chord")
    bottom_chord: Annotated[Section, _BAR] = required("section of the bottom chord")
    diagonals: Annotated[Section, _BAR] = required("section of the diagonals")
    end_diagonals: Annotated[Section, _BAR] | None = left_out(
        "as diagonals", "section of the diagonals next to the columns"
    )
    posts: Annotated[Section, _BAR] | None = left_out("as diagonals", "section of the upright webs")
    grade: Annotated[str, ROLLED] = default("S355", "steel grade of chords and webs")
    longest: Annotated[float | Literal["none"], _LONGEST] = default(
        "18 m", "greatest length of a truss or a part of one as it leaves the shop; none: never divided"
    )

    @property
    def end_section(self) -> Section:
        """Section of the diagonals next to the columns."""
        return self.end_diagonals or self.diagonals

    @property
    def post_section(self) -> Section:
        """Section of the upright webs."""
        return self.posts or self.diagonals
