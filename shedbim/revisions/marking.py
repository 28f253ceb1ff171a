"""Which mark each part has after an issue: a mark that was issued never names another thing.

A part that is what a mark was issued for keeps the mark. Where all pieces of a mark that still stand became one other
part, the mark stays and its revision rises. Where only some did, those get a mark of their own, with a number that was
never used. A mark that nothing has any more is retired.
"""

from __future__ import annotations

import re
from collections import defaultdict
from collections.abc import Collection, Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

__all__ = ["Marked", "marked", "number_of"]

Ints = NDArray[np.int64]

_NUMBER = re.compile(r"[0-9]+$")


@dataclass(frozen=True)
class Marked:
    """The mark of one thing, and whether it differs from what the mark was issued for last; new marks count so."""

    mark: str
    changed: bool


def marked(
    issued: Sequence[str],
    same_as: Sequence[int],
    pairs: Ints,
    prefixes: Sequence[str],
    used: Collection[str],
) -> list[Marked]:
    """Give the marks of q things.

    Args:
        issued: marks in use as last issued.
        same_as: for each thing the row of the issued mark whose thing it equals, -1 for none.
        pairs: (n, 2) for each piece that was issued and still stands, the row of its issued mark and its thing now.
        prefixes: of each thing, what its mark begins with.
        used: every mark ever issued.
    """
    found: dict[int, Marked] = {}
    kept = set()
    for thing, row in enumerate(same_as):
        if row >= 0 and row not in kept:
            found[thing] = Marked(issued[row], changed=False)
            kept.add(row)
    for thing, row in _gone_over(pairs, kept, found).items():
        found[thing] = Marked(issued[row], changed=True)
    last: dict[str, int] = defaultdict(int)
    for mark in used:
        last[_NUMBER.sub("", mark)] = max(last[_NUMBER.sub("", mark)], number_of(mark))
    for thing, prefix in enumerate(prefixes):
        if thing not in found:
            last[prefix] += 1
            found[thing] = Marked(f"{prefix}{last[prefix]}", changed=True)
    return [found[thing] for thing in range(len(prefixes))]


def _gone_over(pairs: Ints, kept: Collection[int], found: Mapping[int, Marked]) -> dict[int, int]:
    """For each thing that all standing pieces of a mark became, the row of that mark; of several the one with most."""
    became: dict[int, dict[int, int]] = defaultdict(dict)
    rows, counts = np.unique(pairs.reshape(-1, 2), axis=0, return_counts=True)
    for (row, thing), count in zip(rows.tolist(), counts.tolist(), strict=True):
        became[row][thing] = count
    best: dict[int, tuple[int, int]] = {}
    for row, things in sorted(became.items()):
        ((thing, count),) = things.items() if len(things) == 1 else ((-1, 0),)
        if thing >= 0 and row not in kept and thing not in found and count > best.get(thing, (0, 0))[0]:
            best[thing] = (count, row)
    return {thing: row for thing, (_, row) in best.items()}


def number_of(mark: str) -> int:
    """Give the number at the end of a mark; 0 where there is none."""
    digits = _NUMBER.search(mark)
    return int(digits[0]) if digits else 0
