"""The site splices of trusses that a user describes."""

from __future__ import annotations

from typing import Annotated, Literal, get_args

from shedbim import units
from shedbim.fields import Choice, Options, Quantity, Whole, default, left_out

__all__ = ["SpliceOptions"]

_Size = Literal["M12", "M16", "M20", "M24", "M27", "M30"]
_BOLT = Choice(*get_args(_Size))


class SpliceOptions(Options):
    """The site splices of trusses that are divided for the road."""

    thickness: Annotated[float, Quantity(units.LENGTH, "10 mm", "60 mm")] = default(
        "20 mm", "thickness of the end plates of spliced chords of hollow sections"
    )
    bolt: Annotated[_Size, _BOLT] | None = left_out(
        "M24 in chords over 160 mm deep, else M20; of angles the largest up to M20 that the leg takes, in two "
        "rows where it is wide enough",
        "bolts of spliced chords",
    )
    web_bolt: Annotated[_Size, _BOLT] | None = left_out(
        "M20 in webs of 80 mm and more, else M16; smaller where webs are narrow",
        "bolts of webs joined on site; those of angles follow truss_gussets",
    )
    row: Annotated[int, Whole(2, 8)] = default(
        3, "number of bolts in a row of a leg, on either side of a splice of angles"
    )
    cover: Annotated[float, Quantity(units.LENGTH, "6 mm", "40 mm")] | None = left_out(
        "from plate stock, no thinner than the leg", "thickness of the covers on the backs of spliced angles"
    )
