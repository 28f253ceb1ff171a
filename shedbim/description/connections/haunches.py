"""The haunches that a user describes."""

from __future__ import annotations

from typing import Annotated, Literal, get_args

from shedbim import units
from shedbim.fields import Choice, Options, Quantity, default, left_out

__all__ = ["ApexHaunch", "ColumnHaunch"]

_Where = Literal["none", "inner", "all"]
_DEPTH = Quantity(units.LENGTH, "100 mm", "1.5 m")
_LENGTH = Quantity(units.LENGTH, "300 mm", "1.4 m")


class ColumnHaunch(Options):
    """Haunches of rafters at columns, of a web plate and a flange plate."""

    rafters: Annotated[_Where, Choice(*get_args(_Where))] = default(
        "inner", "which rafters have haunches: none, those of inner frames, or gable rafters too"
    )
    depth: Annotated[float, _DEPTH] | None = left_out(
        "0.8 of the rafter's depth", "depth of a haunch below the rafter at its end plate"
    )
    length: Annotated[float, _LENGTH] | None = left_out(
        "3.5 times the rafter's depth, and clear of gable posts", "length of a haunch from the column's face"
    )


class ApexHaunch(Options):
    """Haunches of rafters at the apex; none in an end frame where a gable post stands under one."""

    depth: Annotated[float, _DEPTH] | None = left_out(
        "no haunch",
        "depth of a haunch below the rafter at the apex; an end frame with a gable post there has none",
    )
    length: Annotated[float, _LENGTH] | None = left_out(
        "twice the rafter's depth", "length of a haunch from the ridge"
    )
