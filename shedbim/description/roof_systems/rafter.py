"""A roof carried by solid rafters."""

from __future__ import annotations

from typing import Annotated, Literal

from shedbim.description.roof_systems.system import RoofSystem
from shedbim.fields import ROLLED, SectionOf, default, required
from shedbim.sections.profiles import IShape
from shedbim.sections.section import Section

__all__ = ["RafterRoof"]


class RafterRoof(RoofSystem):
    """Solid rafters, one for each slope."""

    system: Literal["rafter"] = required("solid rafters, one for each slope")
    section: Annotated[Section, SectionOf(IShape)] = required("section of the rafters")
    grade: Annotated[str, ROLLED] = default("S355", "steel grade of the rafters")
