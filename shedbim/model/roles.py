"""What a piece does in the building: one row a role."""

from __future__ import annotations

from enum import Enum

__all__ = ["Role"]


class Role(Enum):
    """A duty in the building: the word people read, and the letters its marks begin with."""

    COLUMN = ("column", "C")
    GABLE_POST = ("gable post", "GP")
    RAFTER = ("rafter", "R")
    GABLE_RAFTER = ("gable rafter", "GR")
    TOP_CHORD = ("top chord", "TC")
    BOTTOM_CHORD = ("bottom chord", "BC")
    DIAGONAL = ("diagonal", "D")
    POST = ("post", "V")
    PURLIN = ("purlin", "P")
    SIDE_RAIL = ("side rail", "SR")
    GABLE_RAIL = ("gable rail", "ER")
    EAVES_STRUT = ("eaves strut", "ES")
    VALLEY_STRUT = ("valley strut", "VS")
    STRUT = ("strut", "S")
    ROOF_BRACE = ("roof brace", "RB")
    WALL_BRACE = ("wall brace", "WB")
    TIE = ("bottom chord tie", "T")
    SAG_BAR = ("sag bar", "SB")

    def __init__(self, word: str, prefix: str) -> None:
        self.word = word
        self.prefix = prefix
