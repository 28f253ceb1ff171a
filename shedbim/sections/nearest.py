"""The names and sizes nearest to one that is not there."""

from __future__ import annotations

from collections.abc import Iterable
from difflib import SequenceMatcher
from math import log

from shedbim.sections.family import Size

__all__ = ["distance", "nearest_names", "nearest_sizes"]

#: What a number too many or too few counts, as much as a number twice as great.
_MISSING = log(2)
#: What two numbers in the wrong order count, less than any step between two listed sizes.
_SWAPPED = 0.01
#: A number of zero or less counts as this many mm, far from everything.
_NOTHING = 1e-3


def distance(one: Size, other: Size) -> float:
    """Give how far two sizes are apart, 0 or more: the logarithms of the ratios of their numbers added up.

    A size whose first two numbers are given in the wrong order is near to the right one.
    """
    straight = _apart(one, other)
    if len(one) < 3:
        return straight
    return min(straight, _apart((one[1], one[0], *one[2:]), other) + _SWAPPED)


def nearest_sizes(size: Size, listed: Iterable[Size], count: int) -> list[Size]:
    """Give the ``count`` listed sizes nearest to ``size``, nearest first, the smaller where equal."""
    return sorted(listed, key=lambda other: (round(distance(size, other), 9), other))[:count]


def nearest_names(name: str, names: Iterable[str], count: int = 4, *, least: float = 0.5) -> list[str]:
    """Give the names that look most like ``name``, best first, none less alike than ``least`` (0 to 1)."""
    ranked = [(SequenceMatcher(None, name, other).ratio(), other) for other in names]
    ranked.sort(key=lambda pair: -pair[0])
    return [other for alike, other in ranked[:count] if alike >= least]


def _apart(one: Size, other: Size) -> float:
    """Give the distance of two sizes number by number."""
    apart = sum(abs(log(max(a, _NOTHING) / max(b, _NOTHING))) for a, b in zip(one, other, strict=False))
    return apart + _MISSING * abs(len(one) - len(other))
