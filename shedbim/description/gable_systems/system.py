"""What every gable system has."""

from __future__ import annotations

from typing import Annotated

from shedbim import units
from shedbim.fields import ROLLED, Options, Quantity, SectionOf, default, required
from shedbim.sections.profiles import Hollow, IShape
from shedbim.sections.section import Section

__all__ = ["GableSystem"]


class GableSystem(Options):
    """Base of the ways of framing the end walls; each adds its field ``system`` and its options."""

    posts: Annotated[Section, SectionOf(IShape, Hollow)] = required("section of the gable posts")
    post_spacing: Annotated[float, Quantity(units.LENGTH, "1 m", "15 m")] = default(
        "6 m", "greatest distance of the gable posts"
    )
    grade: Annotated[str, ROLLED] = default("S355", "steel grade of gable posts and gable rafters")
