"""I and H sections with parallel flanges of EN 10365."""

from __future__ import annotations

from shedbim.sections.family import Family, Size, table_of
from shedbim.sections.profiles import IShape

__all__ = ["FAMILIES"]

#: Each family: name, CSV, what it is, how it is written, one of it. HE names give a depth class: HEA 300 is
#: 290 mm deep; UB and UC names give serial depth x serial width x kg/m.
_TABLES = (
    ("IPE", "ipe", "I section", "IPE depth", "IPE 300"),
    ("IPE A", "ipe_a", "I section, lighter than IPE", "IPE A depth", "IPE A 300"),
    ("IPE O", "ipe_o", "I section, heavier than IPE", "IPE O depth", "IPE O 300"),
    ("HEAA", "heaa", "wide flange H section, lightest", "HEAA depth", "HEAA 300"),
    ("HEA", "hea", "wide flange H section, light", "HEA depth", "HEA 300"),
    ("HEB", "heb", "wide flange H section", "HEB depth", "HEB 300"),
    ("HEM", "hem", "wide flange H section, heavy", "HEM depth", "HEM 300"),
    ("UB", "ub", "universal beam", "UB depth x width x kg/m", "UB 457x191x67"),
    ("UC", "uc", "universal column", "UC depth x width x kg/m", "UC 203x203x46"),
)


def shape(dimensions: Size) -> IShape:
    """Give the I from depth, width, web, flange and root radius."""
    h, b, tw, tf, r = dimensions
    return IShape(h, b, tw, tf, r)


FAMILIES = tuple(
    Family(name, "EN 10365", what, pattern, example, shape, table_of(table, ("h", "b", "tw", "tf", "r")))
    for name, table, what, pattern, example in _TABLES
)
