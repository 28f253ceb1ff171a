"""The caps of columns that a user describes."""

from __future__ import annotations

from typing import Annotated

from shedbim import units
from shedbim.fields import Options, Quantity, left_out

__all__ = ["CapOptions"]


class CapOptions(Options):
    """The plates on the heads of columns, and of gable posts that are tubes."""

    thickness: Annotated[float, Quantity(units.LENGTH, "5 mm", "40 mm")] | None = left_out(
        "half the flange or the wall, at least 10 mm", "thickness of the cap plate"
    )
