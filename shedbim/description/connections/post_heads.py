"""The heads of gable posts that a user describes."""

from __future__ import annotations

from typing import Annotated, Literal, get_args

from shedbim.fields import Choice, Options, default

__all__ = ["PostHeadOptions"]

_Size = Literal["M12", "M16", "M20", "M24"]


class PostHeadOptions(Options):
    """The heads of gable posts, which slide so that the roof puts no load on the post."""

    size: Annotated[_Size, Choice(*get_args(_Size))] = default("M16", "thread of the two bolts in long slots")
