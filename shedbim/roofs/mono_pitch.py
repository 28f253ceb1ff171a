"""The mono-pitch roof: one slope over all spans."""

from __future__ import annotations

from typing import Annotated, Literal, get_args

from shedbim import units
from shedbim.fields import Choice, Quantity, default, required
from shedbim.roofs.form import RoofForm, single_slope
from shedbim.roofs.slope import Slope

__all__ = ["MonoPitch"]

_Side = Literal["left", "right"]


class MonoPitch(RoofForm):
    """One slope over all spans, from the low side of the building to the high side."""

    form: Literal["mono-pitch"] = required("one slope over all spans")
    pitch: Annotated[float, Quantity(units.ANGLE, "1 deg", "45 deg")] = required(
        "angle of the slope to the horizontal"
    )
    high: Annotated[_Side, Choice(*get_args(_Side))] = default("right", "side of the building that is high")

    def slopes(self, spans: tuple[float, ...]) -> tuple[Slope, ...]:
        """One slope for each span (mm), all in one plane."""
        return single_slope(spans, self.pitch, self.high)
