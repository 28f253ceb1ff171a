"""Where repeated secondary members go: even places at a greatest spacing, and rows of sag bars."""

from __future__ import annotations

import itertools
from collections.abc import Sequence
from math import ceil, radians

__all__ = ["NEAREST", "even_places", "places_over", "sag_bar_rows"]

#: Two purlins nearer than this would foul each other's cleats (common practice).
NEAREST = 300.0
_STEEP = radians(14.04)  # 1 in 4


def even_places(first: float, last: float, spacing: float) -> list[float]:
    """Give the places from ``first`` to ``last`` in equal steps of ``spacing`` at most, both ends included."""
    steps = max(ceil((last - first) / spacing - 1e-9), 1)
    return [first + (last - first) * k / steps for k in range(steps + 1)]


def places_over(points: Sequence[float], first: float, last: float, spacing: float) -> list[float]:
    """Give the places over ``points`` between ``first`` and ``last``, with equal steps between them."""
    inner = [p for p in sorted(points) if first + NEAREST < p < last - NEAREST]
    stops = [first, *inner, last]
    places = [first]
    for a, b in itertools.pairwise(stops):
        places.extend(even_places(a, b, spacing)[1:])
    return places


def sag_bar_rows(asked: int | str, bay: float, pitch: float = 0.0) -> int:
    """Give the rows of sag bars in a bay (mm): as asked, or by span and pitch (rad).

    By span (common practice, values from memory): none to 5 m, one to 8 m, two to 10 m, three above; one
    more on slopes steeper than 1 in 4.
    """
    if isinstance(asked, int):
        return asked
    rows = 0 if bay <= 5000 else 1 if bay <= 8000 else 2 if bay <= 10000 else 3
    return rows + (1 if abs(pitch) > _STEEP else 0)
