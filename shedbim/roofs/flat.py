"""The flat roof: one plane with a fall that drains it."""

from __future__ import annotations

from typing import Annotated, Literal, get_args

from shedbim import units
from shedbim.fields import Choice, Quantity, default, required
from shedbim.roofs.form import RoofForm, single_slope
from shedbim.roofs.slope import Slope

__all__ = ["Flat"]

_Side = Literal["left", "right"]


class Flat(RoofForm):
    """One plane over all spans with a drained fall; steeper roofs are mono-pitch roofs."""

    form: Literal["flat"] = required("one plane over all spans with a drained fall")
    fall: Annotated[float, Quantity(units.ANGLE, "1:200", "1:20", "a steeper roof has form: mono-pitch")] = (
        default("1:60", "fall of the roof towards its low side")
    )
    high: Annotated[_Side, Choice(*get_args(_Side))] = default("right", "side of the building that is high")

    def slopes(self, spans: tuple[float, ...]) -> tuple[Slope, ...]:
        """One slope for each span (mm), all in one plane."""
        return single_slope(spans, self.fall, self.high)
