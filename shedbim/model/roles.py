"""What a piece does in the building: one row a role."""

from __future__ import annotations

from enum import Enum

__all__ = ["Role", "Sort"]


class Sort(Enum):
    """What kind of thing a role's pieces are."""

    MEMBER = "member"
    FITTING = "fitting"
    FASTENER = "fastener"


class Role(Enum):
    """A duty in the building: the word people read, the letters its marks begin with, and its sort."""

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
    BASE_PLATE = ("base plate", "BP", Sort.FITTING)
    PACK = ("pack", "PK", Sort.FITTING)
    SHEAR_KEY = ("shear key", "SK", Sort.FITTING)
    CAP_PLATE = ("cap plate", "CP", Sort.FITTING)
    END_PLATE = ("end plate", "EP", Sort.FITTING)
    FIN_PLATE = ("fin plate", "FP", Sort.FITTING)
    HAUNCH = ("haunch plate", "HP", Sort.FITTING)
    STIFFENER = ("stiffener", "SF", Sort.FITTING)
    SEAT = ("seat plate", "SE", Sort.FITTING)
    GUSSET = ("gusset", "GU", Sort.FITTING)
    CLEAT = ("cleat", "CL", Sort.FITTING)
    SPLICE_PLATE = ("splice plate", "SP", Sort.FITTING)
    SLEEVE = ("sleeve", "SL", Sort.FITTING)
    STAY = ("flange stay", "FS", Sort.FITTING)
    BOLTS = ("bolts", "BG", Sort.FASTENER)
    ANCHORS = ("anchor bolts", "AB", Sort.FASTENER)
    NUTS = ("bar nuts", "NU", Sort.FASTENER)

    def __init__(self, word: str, prefix: str, sort: Sort = Sort.MEMBER) -> None:
        self.word = word
        self.prefix = prefix
        self.sort = sort
