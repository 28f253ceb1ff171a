"""US W shapes of ASTM A6, named by nominal depth in mm and mass in kg/m, or by their names in inches and lb/ft."""

from __future__ import annotations

from shedbim.sections.family import Entry, Family, Size, read_rows, sized
from shedbim.sections.profiles import IShape

__all__ = ["FAMILIES"]

_INCH = 25.4


def shape(dimensions: Size) -> IShape:
    """Give the I from depth, width, web, flange and the distance k from the outer face to the end of the fillet.

    The root radius is k - tf, with the k that the properties are computed with (kdes).
    """
    d, bf, tw, tf, k = dimensions
    return IShape(d, bf, tw, tf, k - tf)


def entries() -> list[Entry]:
    """Give the listed shapes, their dimensions turned from the published inches into mm."""
    columns = ("d_in", "bf_in", "tw_in", "tf_in", "kdes_in")
    return [
        Entry(
            sized(row["size"]),
            tuple(float(row[column]) * _INCH for column in columns),
            row["source"],
            tuple(sized(other) for other in row["other"].split()),
        )
        for row in read_rows("us_w")
    ]


FAMILIES = (
    Family(
        "W", "ASTM A6", "US wide flange shape", "W depth x kg/m (or W inches x lb/ft)", "W 310x38.7",
        shape, entries,
    ),
)  # fmt: skip
