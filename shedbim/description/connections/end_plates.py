"""The end plates that a user describes: rafters and chords on columns, rafters at the apex, brackets of tubes."""

from __future__ import annotations

from typing import Annotated, Literal, get_args

from shedbim import units
from shedbim.description.connections.haunches import ApexHaunch, ColumnHaunch
from shedbim.fields import Choice, Options, Quantity, default, left_out

__all__ = ["ApexOptions", "BracketOptions", "ChordOptions", "RafterOptions"]

_Size = Literal["M12", "M16", "M20", "M24", "M27", "M30", "M36"]
_Stiffeners = Literal["none", "haunch"]
_Seat = Literal["none", "plate"]
_BOLT = Choice(*get_args(_Size))
_PLATE = Quantity(units.LENGTH, "8 mm", "60 mm")


class RafterOptions(Options):
    """The end plates between rafters and columns."""

    thickness: Annotated[float, _PLATE] = default(
        "20 mm", "thickness of the end plates of rafters at columns"
    )
    bolt: Annotated[_Size, _BOLT] | None = left_out(
        "M24 over 400 mm of depth, else M20; smaller where flanges are narrow", "bolts of these end plates"
    )
    haunch: ColumnHaunch = default({}, "haunches of rafters at columns")
    stiffeners: Annotated[_Stiffeners, Choice(*get_args(_Stiffeners))] = default(
        "haunch",
        "plates between the flanges of a column at a haunch's flange; its cap is at the upper flange",
    )


class ApexOptions(Options):
    """The end plates of rafters at the apex."""

    thickness: Annotated[float, _PLATE] = default("20 mm", "thickness of the end plates at the apex")
    bolt: Annotated[_Size, _BOLT] | None = left_out(
        "M24 over 400 mm of depth, else M20; smaller where flanges are narrow", "bolts of these end plates"
    )
    haunch: ApexHaunch = default({}, "haunches at the apex")


class ChordOptions(Options):
    """The end plates between truss chords and columns."""

    thickness: Annotated[float, _PLATE] = default("20 mm", "thickness of the end plates of chords at columns")
    bolt: Annotated[_Size, _BOLT] | None = left_out(
        "M20; smaller where the column is narrow", "bolts of these end plates"
    )
    seat: Annotated[_Seat, Choice(*get_args(_Seat))] = default(
        "none", "a plate on the column that the end plate of the bottom chord is set down on"
    )


class BracketOptions(Options):
    """The brackets on tubular columns, whose bolts cannot be tightened inside."""

    thickness: Annotated[float, _PLATE] = default("20 mm", "thickness of a bracket's plate that is bolted to")
    stand_off: Annotated[float, Quantity(units.LENGTH, "30 mm", "200 mm")] = default(
        "45 mm", "from the column's face to the back of that plate: room for the nuts"
    )
