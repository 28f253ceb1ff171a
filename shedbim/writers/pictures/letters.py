"""The strokes of words: letters of our own design, straight strokes with cut corners, read from a table.

The table ``letters.csv`` holds a row a letter: its code point, its name, its width and its strokes. A stroke is
a run of points; a capital is 6 units high, a small letter 4, and y goes up from the foot of the letters. An
accent's points lie about the middle of its letter, upwards from the top (or, below it, down from the foot).
"""

from __future__ import annotations

import csv
import unicodedata
from functools import cache
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

__all__ = ["strokes", "width"]

Points = NDArray[np.float64]

_CAPITAL, _SMALL = 6.0, 4.0
#: Free space between letters, units.
_GAP = 1.7
#: Small letters that are as high as capitals.
_TALL_SMALL = "bdfhijklt"
#: What stands for a letter that is not in the table: an empty box, so that nobody reads something else.
_MISSING = (4.0, (np.array([[0.0, 0], [4, 0], [4, 6], [0, 6], [0, 0]]),))


def width(text: str, capital: float) -> float:
    """Give how wide a text is when a capital is ``capital`` pixels high, without space beside it."""
    units = sum(_letter(base)[0] + _GAP for base, _ in _composed(text)) - _GAP
    return max(units, 0.0) * capital / _CAPITAL


def strokes(text: str, capital: float) -> list[Points]:
    """Give the strokes (n, 2) of a text in pixels: x from its left end, y down from the foot of its capitals."""
    unit, at, found = capital / _CAPITAL, 0.0, []
    for base, accents in _composed(text):
        wide, runs = _letter(base)
        found += [(run + np.array([at, 0.0])) * (unit, -unit) for run in runs]
        small = base.islower() and base not in _TALL_SMALL
        for accent in accents:
            foot = 0.0 if unicodedata.combining(accent) < 220 else (_SMALL if small else _CAPITAL)
            found += [(run + np.array([at + wide / 2, foot])) * (unit, -unit) for run in _letter(accent)[1]]
        at += wide + _GAP
    return found


def _composed(text: str) -> list[tuple[str, str]]:
    """Letters and the accents on each."""
    letters: list[tuple[str, str]] = []
    for sign in text:
        parts = [sign] if ord(sign) in _table() else list(unicodedata.normalize("NFD", sign))
        for part in parts:
            if unicodedata.combining(part) and letters:
                letters[-1] = letters[-1][0], letters[-1][1] + part
            else:
                letters.append((part, ""))
    return letters


def _letter(sign: str) -> tuple[float, tuple[Points, ...]]:
    """Width in units and strokes of one sign."""
    return _table().get(ord(sign), _MISSING)


@cache
def _table() -> dict[int, tuple[float, tuple[Points, ...]]]:
    """Width and strokes by code point."""
    with (Path(__file__).parent / "letters.csv").open(encoding="utf-8", newline="") as file:
        return {
            int(row["code"], 16): (
                float(row["width"]),
                tuple(_points(run) for run in row["strokes"].split(";") if run),
            )
            for row in csv.DictReader(file)
        }


def _points(run: str) -> Points:
    """The points (n, 2) of ``x,y x,y ...``."""
    return np.array([[float(number) for number in point.split(",")] for point in run.split()])
