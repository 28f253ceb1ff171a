"""How a hole sits on its bolt."""

from __future__ import annotations

from enum import Enum

__all__ = ["Fit"]


class Fit(Enum):
    """The word people read (EN 1090-2 Table 11; for cast-in anchors and threaded bars: common practice)."""

    NORMAL = "normal"
    OVERSIZE = "oversize"
    SHORT_SLOT = "short slot"
    LONG_SLOT = "long slot"
    CAST_IN = "cast-in"
    BAR = "threaded bar"
