"""Channels with parallel flanges: UPE of EN 10365 and the parallel flange channels (PFC)."""

from __future__ import annotations

from shedbim.sections.family import Family, Size, table_of
from shedbim.sections.profiles import Channel

__all__ = ["FAMILIES"]

_COLUMNS = ("h", "b", "tw", "tf", "r")


def shape(dimensions: Size) -> Channel:
    """Give the channel from depth, width, web, flange and root radius."""
    h, b, tw, tf, r = dimensions
    return Channel(h, b, tw, tf, r)


FAMILIES = (
    Family(
        "UPE", "EN 10365", "channel with parallel flanges", "UPE depth", "UPE 200",
        shape, table_of("upe", _COLUMNS),
    ),
    Family(
        "PFC", "EN 10365", "parallel flange channel", "PFC depth x width x kg/m", "PFC 200x75x23",
        shape, table_of("pfc", _COLUMNS),
    ),
)  # fmt: skip
