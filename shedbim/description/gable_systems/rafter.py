"""End walls of rafters on posts."""

from __future__ import annotations

from typing import Annotated, Literal

from shedbim.description.gable_systems.system import GableSystem
from shedbim.fields import SectionOf, required
from shedbim.sections.profiles import IShape
from shedbim.sections.section import Section

__all__ = ["RafterGable"]


class RafterGable(GableSystem):
    """Rafters on posts whose heads stop below the rafter."""

    system: Literal["rafter"] = required("rafters on posts whose heads stop below the rafter")
    rafter: Annotated[Section, SectionOf(IShape)] = required("section of the gable rafters")
