"""Labels of grid lines after a change: a line that stands keeps its label, a line put in gets one of its own.

Between 3 and 4 a new line is 3.1, between A and B it is A.1 (common practice). No label that was issued ever
names another line.
"""

from __future__ import annotations

import re
from collections.abc import Collection, Sequence

import numpy as np
from numpy.typing import NDArray

__all__ = ["kept_labels", "matched_lines"]

Ints = NDArray[np.int64]

_STEM = re.compile(r"(.*?)(?:\.([0-9]+))?", re.DOTALL)


def kept_labels(
    issued: Sequence[tuple[str, float]], places: Sequence[float], reserved: Collection[str] = ()
) -> tuple[str, ...]:
    """Give the labels of the lines at ``places``, mm, in order.

    Args:
        issued: label and place of each line as last issued, in order; two at least.
        places: of the lines now; two at least.
        reserved: labels of lines that were taken away, which no line gets again.
    """
    matched = matched_lines([place for _, place in issued], places)
    labels = [issued[line][0] if line >= 0 else "" for line in matched.tolist()]
    used = {*reserved, *(label for label, _ in issued)}
    for line, label in enumerate(labels):
        if not label:
            after = next(each for each in labels[line:] if each)
            labels[line] = _between(labels[line - 1], after, used)
            used.add(labels[line])
    return tuple(labels)


def matched_lines(issued: Sequence[float], places: Sequence[float]) -> Ints:
    """Give for each line now (n,) the number of the issued line that it is, -1 for a new one.

    The first and the last are those they were, for the end walls stand there. Of the others as many as can be are
    matched, in order, and of all ways to do so the one that moves lines least in sum.
    """
    old, new = np.asarray(issued, float)[1:-1], np.asarray(places, float)[1:-1]
    inner = _least_moved(old, new) if len(old) <= len(new) else _inverted(_least_moved(new, old), len(new))
    return np.concatenate([[0], np.where(inner >= 0, inner + 1, -1), [len(issued) - 1]])


def _least_moved(fewer: NDArray[np.float64], more: NDArray[np.float64]) -> Ints:
    """Give for each of ``more`` (m,) which of ``fewer`` (f,) it is, -1 for none; each of the fewer is one, in order."""
    spare = len(more) - len(fewer)
    # least[i, s]: the least sum when the first i of the fewer are matched and s of the more were passed over.
    least = np.zeros((len(fewer) + 1, spare + 1))
    for i, place in enumerate(fewer):
        least[i + 1] = np.minimum.accumulate(least[i]) + np.abs(place - more[i : i + spare + 1])
    result = np.full(len(more), -1)
    passed = int(np.argmin(least[-1]))
    for i in range(len(fewer), 0, -1):
        result[i - 1 + passed] = i - 1
        passed = int(np.argmin(least[i - 1, : passed + 1]))
    return result


def _inverted(which: Ints, length: int) -> Ints:
    """Give the inverse of a matching: for each of ``length`` lines the row of ``which`` that names it."""
    result = np.full(length, -1)
    rows = np.flatnonzero(which >= 0)
    result[which[rows]] = rows
    return result


def _between(before: str, after: str, used: Collection[str]) -> str:
    """Give the next unused label between two neighbours."""
    stem, low = _parted(before)
    other, high = _parted(after)
    top = high if other == stem else 1.0
    digits = 1
    while True:
        step = 10.0**-digits
        numbers = range(int(np.floor(low / step + 1e-9)) + 1, int(np.ceil(top / step - 1e-9)))
        free = (label for number in numbers if (label := f"{stem}.{number:0{digits}d}") not in used)
        if label := next(free, ""):
            return label
        digits += 1


def _parted(label: str) -> tuple[str, float]:
    """The stem of a label and its decimals as a share of one."""
    found = _STEM.fullmatch(label)
    if found is None or found[2] is None or not found[1]:
        return label, 0.0
    return found[1], float(f"0.{found[2]}")
