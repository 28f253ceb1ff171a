"""The gussets of braces that a user describes."""

from __future__ import annotations

from typing import Annotated, Literal, get_args

from shedbim.fields import Choice, Options, default, left_out

__all__ = ["GussetOptions"]

_Count = Literal["2", "3"]
_Size = Literal["M12", "M16", "M20", "M24"]


class GussetOptions(Options):
    """The gussets of roof and wall braces."""

    bolts: Annotated[_Count, Choice(*get_args(_Count))] = default("2", "number of bolts in an end of a brace")
    size: Annotated[_Size, Choice(*get_args(_Size))] | None = left_out(
        "the largest up to M20 that the leg or tube takes", "thread of the bolts of braces"
    )
