"""The lines and slopes of a building, recognised from its grid and its steel: what checks of bracing count by."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from shedbim.checks.subject import Subject
from shedbim.model.roles import Role

__all__ = [
    "ROOF_STEEL",
    "Slope",
    "bay_label",
    "bays_over",
    "columns_at",
    "columns_of",
    "head_struts",
    "lines_at",
    "nearest_slope",
    "slopes_of",
]

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]
Bools = NDArray[np.bool_]

#: What carries the roof from column to column.
ROOF_STEEL = (Role.TOP_CHORD, Role.RAFTER, Role.GABLE_RAFTER)

#: A member stands on a column line when its axis is no farther from it, mm.
_ON_LINE = 300.0
#: A slope reaches the column line at its end when no more than this share of the span is missing.
_REACHES = 0.1
#: A member runs through a bay when it covers this share of its length.
_THROUGH = 0.5
#: Struts of one line are level: lower ones are between tiers of wall bracing, mm.
_LEVEL = 300.0


@dataclass(frozen=True)
class Slope:
    """One slope of the roof over one span.

    Attributes:
        name: letters of its span and its number there, as ``A-B/1``.
        low, high: x where its steel begins and ends, mm.
        columns: numbers of the column lines that it reaches, 0 for the first.
    """

    name: str
    low: float
    high: float
    columns: tuple[int, ...]


def slopes_of(subject: Subject) -> tuple[Slope, ...]:
    """Give the slopes from left to right: what of the roof steel rises in a span, and what falls."""
    x = np.array(subject.shed.grid.x)
    ends = subject.axes[subject.having(*ROOF_STEEL)][:, :, [0, 2]]
    run = ends[:, 1] - ends[:, 0]
    lies = np.abs(run[:, 0]) > 1.0
    ends, run = ends[lies], run[lies]
    span = np.clip(np.searchsorted(x, ends[:, :, 0].mean(axis=1)) - 1, 0, len(x) - 2)
    falls = run[:, 1] / run[:, 0] < -1e-6
    found: list[Slope] = []
    for number in range(len(x) - 1):
        sides = [ends[(span == number) & (falls == side)][:, :, 0] for side in (False, True)]
        there = sorted((float(side.min()), float(side.max())) for side in sides if side.size)
        for k, (low, high) in enumerate(there, start=1):
            reach = _REACHES * (x[number + 1] - x[number])
            columns = tuple(
                c for c, end in ((number, low), (number + 1, high)) if abs(end - float(x[c])) < reach
            )
            letters = subject.shed.grid.letters[number : number + 2]
            found.append(Slope(f"{letters[0]}-{letters[1]}/{k}", low, high, columns))
    return tuple(found)


def nearest_slope(slopes: tuple[Slope, ...], x: ArrayLike) -> Ints:
    """Give for each x (n,), mm, the number of the slope that it lies on or nearest to."""
    ends = np.array([(slope.low, slope.high) for slope in slopes]).reshape(-1, 2)
    place = np.asarray(x, float)[:, None]
    away = np.maximum(np.maximum(ends[:, 0] - place, place - ends[:, 1]), 0.0)
    return np.asarray(away.argmin(axis=1) if len(slopes) else np.zeros(len(place), np.int64))


def columns_at(subject: Subject, x: ArrayLike) -> Ints:
    """Give for each x (n,), mm, the number of the column line that it is on, -1 for none."""
    away = np.abs(np.asarray(x, float)[:, None] - np.array(subject.shed.grid.x))
    nearest = away.argmin(axis=1)
    return np.asarray(np.where(away.min(axis=1, initial=np.inf) <= _ON_LINE, nearest, -1))


def lines_at(subject: Subject, y: ArrayLike) -> Ints:
    """Give for each y (n,), mm, the number of the nearest numbered line, 0 for the first."""
    return np.asarray(np.abs(np.asarray(y, float)[:, None] - np.array(subject.shed.grid.y)).argmin(axis=1))


def bays_over(subject: Subject, ends: Floats) -> Bools:
    """Give whether each of some stretches (n, 2) along the building, y in mm, runs through each bay (n, b)."""
    y = np.array(subject.shed.grid.y)
    ordered = np.sort(ends, axis=1)
    covered = np.minimum(ordered[:, 1:], y[1:]) - np.maximum(ordered[:, :1], y[:-1])
    return np.asarray(covered >= _THROUGH * np.diff(y))


def head_struts(subject: Subject, column: int) -> Ints:
    """Give the struts along a column line at the heads of its columns, in all bays."""
    pieces = subject.having(Role.EAVES_STRUT, Role.VALLEY_STRUT, Role.STRUT)
    here = pieces[columns_at(subject, subject.centres[pieces][:, 0]) == column]
    named = here[subject.role[here] != Role.STRUT]
    if named.size:
        return np.asarray(named)
    levels = subject.centres[here][:, 2]
    return np.asarray(here[levels >= levels.max(initial=-np.inf) - _LEVEL])


def columns_of(subject: Subject, column: int, lines: Iterable[int] | None = None) -> tuple[int, ...]:
    """Give the columns that stand on a column line, in order of the numbered lines; those of some lines only."""
    pieces = subject.having(Role.COLUMN)
    middle = subject.centres[pieces]
    here = pieces[columns_at(subject, middle[:, 0]) == column]
    here = here[np.argsort(subject.centres[here][:, 1], kind="stable")]
    if lines is None:
        return tuple(here.tolist())
    wanted = np.isin(lines_at(subject, subject.centres[here][:, 1]), list(lines))
    return tuple(here[wanted].tolist())


def bay_label(subject: Subject, bay: int) -> str:
    """Give the name of a bay, as ``3-4``."""
    first, second = subject.shed.grid.numbers[bay : bay + 2]
    return f"{first}-{second}"
