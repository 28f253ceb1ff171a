"""Where the lines of the building run: grid, roof surfaces, and the planes that the steel keeps to.

Glossary:
    underside   the line of the lowest face of the roof steel; at the column lines it is at eaves level
    top line    the line of the uppermost face of the roof steel, which purlins sit above
    surface     one or more slopes in one plane, over which purlins are set out
"""

from __future__ import annotations

import itertools
from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property
from math import cos, sin, tan

import numpy as np
from numpy.typing import NDArray

from shedbim.description.models import Description
from shedbim.model.shed import Grid
from shedbim.roofs.slope import Slope

__all__ = ["Layout", "Pitched", "Surface", "lay_out"]

_SAME_PLACE = 1e-6  # mm: two computed positions of one thing


@dataclass(frozen=True)
class Pitched:
    """A slope with its top line: z of the top at x, its directions in the frame plane, and its names.

    Attributes:
        slope: plan extent and pitch.
        name: for example ``A-B/1``, the first slope of the span from A to B.
        lift: height of the top line above the slope's own line, mm.
        left_column, right_column: number of the column line at that end, or -1 at a ridge.
    """

    slope: Slope
    name: str
    lift: float
    left_column: int
    right_column: int

    def top(self, x: float) -> float:
        """Level of the top line at x, mm."""
        return self.slope.z0 + (x - self.slope.x0) * tan(self.slope.pitch) + self.lift

    def point(self, x: float, below: float = 0.0) -> NDArray[np.float64]:
        """The point (3,) at x on the line ``below`` mm under the top line, square to the slope; y is 0."""
        return np.array([x, 0.0, self.top(x) - below / cos(self.slope.pitch)])

    @property
    def direction(self) -> NDArray[np.float64]:
        """Unit vector (3,) along the slope, left to right."""
        return np.array([cos(self.slope.pitch), 0.0, sin(self.slope.pitch)])

    @property
    def normal(self) -> NDArray[np.float64]:
        """Unit vector (3,) square to the slope, upwards."""
        return np.array([-sin(self.slope.pitch), 0.0, cos(self.slope.pitch)])


@dataclass(frozen=True)
class Surface:
    """Slopes that continue one another in one plane; ``name`` is for example ``A-B/1`` or ``A-C/1``."""

    name: str
    slopes: tuple[Pitched, ...]

    def at(self, x: float) -> Pitched:
        """The slope over x."""
        return next((s for s in self.slopes if x <= s.slope.x1 + _SAME_PLACE), self.slopes[-1])

    @property
    def uphill(self) -> NDArray[np.float64]:
        """Unit vector (3,) up the slope."""
        first = self.slopes[0]
        return first.direction if first.slope.rises else -first.direction


@dataclass(frozen=True)
class Layout:
    """The lines of one building.

    Attributes:
        base: level of the column bases, mm.
        eaves: level of the underside of the roof steel at the lowest column line, mm.
        slopes: left to right.
    """

    grid: Grid
    base: float
    eaves: float
    slopes: tuple[Pitched, ...]

    @cached_property
    def bay_labels(self) -> tuple[str, ...]:
        """``1-2``, ``2-3`` and so on."""
        numbers = self.grid.numbers
        return tuple(f"{a}-{b}" for a, b in itertools.pairwise(numbers))

    @cached_property
    def bay_lengths(self) -> tuple[float, ...]:
        """Distance between neighbouring frames, mm."""
        return tuple(float(d) for d in np.diff(self.grid.y))

    @cached_property
    def span_names(self) -> tuple[str, ...]:
        """``A-B``, ``B-C`` and so on."""
        letters = self.grid.letters
        return tuple(f"{a}-{b}" for a, b in itertools.pairwise(letters))

    def span_slopes(self, span: int) -> tuple[int, ...]:
        """Numbers of the slopes over a span, left to right."""
        return tuple(i for i, s in enumerate(self.slopes) if s.slope.span == span)

    @cached_property
    def surfaces(self) -> tuple[Surface, ...]:
        """The planes that purlins are set out over."""
        groups: list[list[Pitched]] = []
        for pitched in self.slopes:
            if groups and abs(groups[-1][-1].slope.pitch - pitched.slope.pitch) < _SAME_PLACE:
                groups[-1].append(pitched)
            else:
                groups.append([pitched])
        named = []
        for group in groups:
            first, last = group[0], group[-1]
            if len(group) == 1:
                name = first.name
            else:
                letters = self.grid.letters
                name = f"{letters[first.slope.span]}-{letters[last.slope.span + 1]}/1"
            named.append(Surface(name, tuple(group)))
        return tuple(named)

    def slopes_at_column(self, column: int) -> tuple[Pitched, ...]:
        """The slopes that end at a column line, left one first."""
        return tuple(s for s in self.slopes if column in (s.left_column, s.right_column))

    def is_valley(self, column: int) -> bool:
        """Whether two slopes fall towards a column line."""
        met = self.slopes_at_column(column)
        return len(met) == 2 and not met[0].slope.rises and met[1].slope.rises

    def column_top(self, column: int) -> float:
        """Level of the top line over a column line, the lower one where two differ, mm."""
        x = self.grid.x[column]
        return min(s.top(x) for s in self.slopes_at_column(column))


def lay_out(description: Description, lifts: Sequence[float], slopes: Sequence[Slope]) -> Layout:
    """Give the lines of the building; ``lifts`` is the top line's height above each slope's own line, mm."""
    building = description.building
    x = tuple(float(v) for v in np.cumsum([0.0, *building.spans]))
    y = tuple(float(v) for v in np.cumsum([0.0, *building.bays]))
    letters = building.letters or column_letters(len(x))
    numbers = building.numbers or tuple(str(i + 1) for i in range(len(y)))
    pitched: list[Pitched] = []
    for slope, lift in zip(slopes, lifts, strict=True):
        place = sum(p.slope.span == slope.span for p in pitched) + 1
        starts = abs(slope.x0 - x[slope.span]) < _SAME_PLACE
        ends = abs(slope.x1 - x[slope.span + 1]) < _SAME_PLACE
        pitched.append(
            Pitched(
                slope,
                f"{letters[slope.span]}-{letters[slope.span + 1]}/{place}",
                building.eaves + lift,
                slope.span if starts else -1,
                slope.span + 1 if ends else -1,
            )
        )
    return Layout(Grid(letters, x, numbers, y), 0.0, building.eaves, tuple(pitched))


def column_letters(count: int) -> tuple[str, ...]:
    """Give A, B, C ... for column lines, I and O skipped, AA after Z (common practice)."""
    alphabet = "ABCDEFGHJKLMNPQRSTUVWXYZ"
    labels = []
    for number in range(count):
        label, rest = "", number + 1
        while rest:
            rest, digit = divmod(rest - 1, len(alphabet))
            label = alphabet[digit] + label
        labels.append(label)
    return tuple(labels)
