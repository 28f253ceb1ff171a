"""The gussets of angle trusses that a user describes."""

from __future__ import annotations

from typing import Annotated, Literal, get_args

from shedbim import units
from shedbim.fields import Choice, Options, Quantity, default, left_out

__all__ = ["TrussGussetOptions"]

_Fastening = Literal["welded", "bolted"]
_Count = Literal["2", "3", "4"]
_Size = Literal["M12", "M16", "M20", "M24"]


class TrussGussetOptions(Options):
    """The gussets at the nodes of trusses of angles."""

    fastening: Annotated[_Fastening, Choice(*get_args(_Fastening))] = default(
        "welded",
        "how webs are fastened to the gussets; one joined on site is always bolted, chords are always welded",
    )
    lap: Annotated[float, Quantity(units.LENGTH, "60 mm", "600 mm")] | None = left_out(
        "twice the leg", "length of the weld along the heel of an angle that ends at a gusset"
    )
    bolts: Annotated[_Count, Choice(*get_args(_Count))] = default("2", "number of bolts in an end of a web")
    size: Annotated[_Size, Choice(*get_args(_Size))] | None = left_out(
        "the largest up to M20 that the leg takes", "thread of the bolts of webs"
    )
    packs: Annotated[float, Quantity(units.LENGTH, "300 mm", "3 m")] = default(
        "1 m", "greatest distance of the plates that hold the two angles of a pair together"
    )
