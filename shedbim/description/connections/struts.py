"""The ends of struts, ties and tubular braces that a user describes."""

from __future__ import annotations

from typing import Annotated, Literal, get_args

from shedbim import units
from shedbim.fields import Choice, Options, Quantity, default, left_out

__all__ = ["StrutOptions", "TubeEndOptions"]

_Count = Literal["2", "3"]
_Size = Literal["M12", "M16", "M20", "M24"]
_Form = Literal["capped", "slotted", "flattened"]


class StrutOptions(Options):
    """The ends of struts and ties."""

    bolts: Annotated[_Count, Choice(*get_args(_Count))] = default("2", "number of bolts in an end of a strut")
    size: Annotated[_Size, Choice(*get_args(_Size))] | None = left_out(
        "the largest up to M20 that fits the tube", "thread of the bolts of struts"
    )
    thickness: Annotated[float, Quantity(units.LENGTH, "6 mm", "25 mm")] = default(
        "10 mm", "thickness of the fin plates of struts"
    )


class TubeEndOptions(Options):
    """How tubes end: a fin plate stands out of the tube and is bolted beside another plate, or the tube itself is."""

    struts: Annotated[_Form, Choice(*get_args(_Form))] = default(
        "capped",
        "struts and ties: a fin on a cap plate, or in a slot of the tube, or a round tube pressed flat",
    )
    braces: Annotated[_Form, Choice(*get_args(_Form))] = default(
        "slotted",
        "tubular braces: a fin in a slot of the tube, or on a cap plate, or a round tube pressed flat",
    )
