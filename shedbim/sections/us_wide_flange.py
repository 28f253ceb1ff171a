"""US W shapes of ASTM A6, named by nominal depth (mm) and mass (kg/m), or in inches and lb/ft."""

from __future__ import annotations

from shedbim.sections.family import Family, Size, table_of
from shedbim.sections.profiles import IShape

__all__ = ["FAMILIES"]

_INCH = 25.4


def shape(dimensions: Size) -> IShape:
    """Give the I from depth, width, web, flange and the distance k from outer face to fillet end.

    The root radius is k - tf, with the k that the properties are computed with (kdes).
    """
    d, bf, tw, tf, k = dimensions
    return IShape(d, bf, tw, tf, k - tf)


FAMILIES = (
    Family(
        "W", "ASTM A6", "US wide flange shape", "W depth x kg/m (or W inches x lb/ft)", "W 310x38.7",
        shape, table_of("us_w", ("d_in", "bf_in", "tw_in", "tf_in", "kdes_in"), unit=_INCH),
    ),
)  # fmt: skip
