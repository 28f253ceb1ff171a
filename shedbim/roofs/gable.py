"""The gable roof: two slopes over each span, which meet in a ridge."""

from __future__ import annotations

from math import tan
from typing import Annotated, Literal

from shedbim import units
from shedbim.fields import Quantity, left_out, required
from shedbim.roofs.form import RoofForm, extents
from shedbim.roofs.slope import Slope

__all__ = ["Gable"]

_PITCH = Quantity(units.ANGLE, "1 deg", "60 deg")


class Gable(RoofForm):
    """Two slopes over each span, valleys between spans; the eaves are level on both sides of a span."""

    form: Literal["gable"] = required("two slopes over each span, valleys between spans")
    pitch: Annotated[float, _PITCH] = required("angle of the slopes to the horizontal")
    pitch_right: Annotated[float, _PITCH] | None = left_out(
        "as pitch",
        "angle of the right-hand slopes, where it is another; the ridge moves towards the steeper slope",
    )

    @property
    def right(self) -> float:
        """Pitch of the right-hand slopes, rad."""
        return self.pitch if self.pitch_right is None else self.pitch_right

    def slopes(self, spans: tuple[float, ...]) -> tuple[Slope, ...]:
        """A rising and a falling slope for each span (mm)."""
        left, right = tan(self.pitch), tan(self.right)
        found: list[Slope] = []
        for span, x0, x1 in extents(spans):
            ridge = x0 + (x1 - x0) * right / (left + right)
            top = (ridge - x0) * left
            found += [Slope(span, x0, ridge, 0.0, top), Slope(span, ridge, x1, top, 0.0)]
        return tuple(found)
