"""The joints of purlins and rails that a user describes: cleats, sleeves, sag bars, flange stays."""

from __future__ import annotations

from typing import Annotated, Literal, get_args

from shedbim import units
from shedbim.fields import ROLLED, Choice, Options, Quantity, SectionOf, Whole, WordOr, default
from shedbim.sections.profiles import Angle
from shedbim.sections.section import Section

__all__ = ["CleatOptions", "SagBarOptions", "StayOptions"]

_Bolt = Literal["by depth", "M12", "M16"]
_Continuity = Literal["butted", "sleeved", "lapped"]
_Sides = Literal["one", "both"]


class CleatOptions(Options):
    """The cleats that purlins and rails are bolted to."""

    thickness: Annotated[float, Quantity(units.LENGTH, "5 mm", "20 mm")] = default(
        "8 mm", "thickness of the cleats"
    )
    bolt: Annotated[_Bolt, Choice(*get_args(_Bolt))] = default(
        "by depth", "bolts of purlins and rails; by depth: M16 where these are 200 mm deep or more, else M12"
    )
    continuity: Annotated[_Continuity, Choice(*get_args(_Continuity))] = default(
        "butted",
        "purlins over a frame: butted with a gap, sleeved by a channel bolted to both webs, or lapped: each runs "
        "on over the frame and nests in the next, which lies the other flange up and lower by its wall",
    )
    sleeve: Annotated[float, Quantity(units.LENGTH, "400 mm", "2.8 m")] = default(
        "1.4 m", "overall length of the sleeves"
    )
    lap: Annotated[float, Quantity(units.LENGTH, "400 mm", "2.8 m")] = default(
        "1.2 m", "overall length of the laps, half on either side of a frame"
    )


class SagBarOptions(Options):
    """The ends of sag bars."""

    slant: Annotated[float, Quantity(units.ANGLE, "0 deg", "5 deg")] = default(
        "5 deg", "greatest slant to the web at which a bar passes it; beyond, the bar gets an end plate"
    )


class StayOptions(Options):
    """The stays between the lower flanges of rafters and the purlins."""

    every: Annotated[int | Literal["by rule"], WordOr("by rule", Whole(0, 20))] = default(
        "by rule",
        "a stay at every so many purlins, 0: none; by rule: every second one over rafters of inner frames",
    )
    sides: Annotated[_Sides, Choice(*get_args(_Sides))] = default(
        "one", "one side of the rafter, then the stay is an angle; or both"
    )
    section: Annotated[Section, SectionOf(Angle)] = default("L 50x50x5", "section of the stays")
    grade: Annotated[str, ROLLED] = default("S275", "steel grade of the stays")
