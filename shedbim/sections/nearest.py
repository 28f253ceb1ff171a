"""The names and sizes nearest to one that is not there."""

from __future__ import annotations

from collections.abc import Iterable
from difflib import SequenceMatcher, get_close_matches
from math import log

from shedbim.sections.family import Size

__all__ = ["distance", "likeness", "nearest_names", "nearest_sizes"]

#: What a number too many or too few counts, as much as a number twice as great.
_MISSING = log(2)


def distance(one: Size, other: Size) -> float:
    """Give how far two sizes are apart: the sum over their numbers of the logarithm of the ratio, 0 or more."""
    apart = sum(
        abs(log(max(abs(a), 1e-3) / max(abs(b), 1e-3))) + (2 * _MISSING if a < 0 else 0.0)
        for a, b in zip(one, other, strict=False)
    )
    return apart + _MISSING * abs(len(one) - len(other))


def nearest_sizes(size: Size, listed: Iterable[Size], count: int = 3) -> list[Size]:
    """Give the ``count`` listed sizes nearest to ``size``, nearest first and the smaller first where equal."""
    return sorted(listed, key=lambda other: (round(distance(size, other), 9), other))[:count]


def nearest_names(name: str, names: Iterable[str], count: int = 4) -> list[str]:
    """Give the names that look most like ``name``, best first; none where nothing looks like it."""
    return get_close_matches(name, sorted(names), n=count, cutoff=0.5)


def likeness(one: str, other: str) -> float:
    """Give how much two names look alike, 0 to 1."""
    return SequenceMatcher(None, one, other).ratio()
