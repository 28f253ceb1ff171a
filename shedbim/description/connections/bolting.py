"""The bolts that a user describes."""

from __future__ import annotations

from typing import Annotated, Literal, get_args

from shedbim.fields import Choice, Options, default

__all__ = ["BoltOptions"]

_Finish = Literal["galvanized", "plated", "none"]
_Grade = Literal["4.6", "8.8", "10.9"]


class BoltOptions(Options):
    """The bolts of all joints."""

    grade: Annotated[_Grade, Choice(*get_args(_Grade))] = default(
        "8.8", "property class of the bolts between members"
    )
    secondary_grade: Annotated[_Grade, Choice(*get_args(_Grade))] = default(
        "4.6", "property class of the bolts of purlins and rails"
    )
    finish: Annotated[_Finish, Choice(*get_args(_Finish))] = default(
        "galvanized", "finish of bolts, nuts, washers and anchors"
    )
