"""The bases of columns and gable posts that a user describes."""

from __future__ import annotations

from typing import Annotated, Literal, get_args

from shedbim import units
from shedbim.fields import Choice, Options, Quantity, SectionOf, default, left_out
from shedbim.sections.profiles import Hollow, IShape
from shedbim.sections.section import Section

__all__ = ["AnchoredBase", "BaseOptions", "PostBaseOptions"]

_Count = Literal["4", "6", "8"]
_Size = Literal["M20", "M24", "M30", "M36"]
_Grade = Literal["4.6", "8.8"]
_Packs = Literal["four", "none"]
_Stiffeners = Literal["none", "gussets"]


class AnchoredBase(Options):
    """What the bases of columns and posts have in common: plate, cast-in anchors, grout, packs."""

    thickness: Annotated[float, Quantity(units.LENGTH, "10 mm", "100 mm")] | None = left_out(
        "from plate stock, no thinner than the flange or wall", "thickness of the base plate"
    )
    anchors: Annotated[_Count, Choice(*get_args(_Count))] | None = left_out(
        "4, or 6 in fixed bases of sections over 350 mm", "number of anchors in a base"
    )
    size: Annotated[_Size, Choice(*get_args(_Size))] | None = left_out(
        "by the size of the section", "thread of the anchors"
    )
    grade: Annotated[_Grade, Choice(*get_args(_Grade))] = default("8.8", "property class of the anchors")
    embedment: Annotated[float, Quantity(units.LENGTH, "150 mm", "2 m")] | None = left_out(
        "20 diameters, in steps of 50 mm", "depth of the anchors in the concrete"
    )
    grout: Annotated[float, Quantity(units.LENGTH, "15 mm", "100 mm")] = default(
        "30 mm", "grout under the base plate"
    )
    packs: Annotated[_Packs, Choice(*get_args(_Packs))] = default(
        "four", "steel packs in the grout that the base stands on until it is filled"
    )


class BaseOptions(AnchoredBase):
    """The bases of columns."""

    stiffeners: Annotated[_Stiffeners, Choice(*get_args(_Stiffeners))] = default(
        "none", "gussets between flanges and plate of fixed bases"
    )
    shear_key: Annotated[Section, SectionOf(IShape, Hollow)] | None = left_out(
        "none", "section of a short bar under the plate that takes shear into the concrete"
    )
    shear_key_depth: Annotated[float, Quantity(units.LENGTH, "60 mm", "600 mm")] = default(
        "150 mm", "depth of the shear key under the plate, grout included"
    )


class PostBaseOptions(AnchoredBase):
    """The bases of gable posts."""
