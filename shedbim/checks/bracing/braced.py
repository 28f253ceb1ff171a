"""Which bays are braced: on each column line, and in each slope of the roof."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.checks.bracing.lines import Slope, bays_over, columns_at, head_struts, nearest_slope, slopes_of
from shedbim.checks.subject import Subject
from shedbim.model.roles import Role

__all__ = ["Braced", "Panels", "braced"]

Ints = NDArray[np.int64]


@dataclass(frozen=True)
class Panels:
    """The braces in one bay of one column line or one slope.

    Attributes:
        pieces: the braces.
        gap: the greatest stretch, mm, that no brace covers: up the column line, or across the slope.
    """

    pieces: tuple[int, ...]
    gap: float


@dataclass(frozen=True)
class Braced:
    """All bracing.

    Attributes:
        slopes: of the roof.
        walls: by number of the column line and of the bay, 0 for the first.
        roofs: by number of the slope and of the bay.
    """

    slopes: tuple[Slope, ...]
    walls: dict[tuple[int, int], Panels]
    roofs: dict[tuple[int, int], Panels]

    def wall_bays(self, column: int) -> list[int]:
        """Give the bays in which a column line is braced, in order."""
        return sorted(bay for line, bay in self.walls if line == column)

    def roof_bays(self, slope: int) -> list[int]:
        """Give the bays in which a slope is braced, in order."""
        return sorted(bay for number, bay in self.roofs if number == slope)

    @property
    def bays(self) -> list[int]:
        """All bays with bracing of any kind, in order."""
        return sorted({bay for _, bay in (*self.walls, *self.roofs)})


def braced(subject: Subject) -> Braced:
    """Give all bracing of a shed, from the places of its braces."""
    slopes = slopes_of(subject)
    walls = subject.having(Role.WALL_BRACE)
    roofs = subject.having(Role.ROOF_BRACE)
    on_line = columns_at(subject, subject.centres[walls][:, 0])
    on_slope = nearest_slope(slopes, subject.centres[roofs][:, 0])
    heights = {column: _heights(subject, column) for column in range(len(subject.shed.grid.x))}
    widths = {number: (slope.low, slope.high) for number, slope in enumerate(slopes)}
    return Braced(
        slopes,
        _panels(subject, walls[on_line >= 0], on_line[on_line >= 0], 2, heights),
        _panels(subject, roofs if slopes else roofs[:0], on_slope if slopes else on_slope[:0], 0, widths),
    )


def _heights(subject: Subject, column: int) -> tuple[float, float]:
    """From where to where a column line is to be braced, z in mm: foot of the columns to the strut on them."""
    pieces = subject.having(Role.COLUMN)
    feet = subject.axes[pieces[columns_at(subject, subject.centres[pieces][:, 0]) == column]][:, :, 2]
    there = head_struts(subject, column)
    low = float(feet.min(initial=np.inf))
    if there.size:
        return low, float(subject.centres[there][:, 2].max())
    return low, float(feet.max(initial=-np.inf))


def _panels(
    subject: Subject, pieces: Ints, owner: Ints, axis: int, bounds: dict[int, tuple[float, float]]
) -> dict[tuple[int, int], Panels]:
    """The braces by owner and bay, with the greatest stretch along ``axis`` that they leave open."""
    found: dict[tuple[int, int], Panels] = {}
    over = bays_over(subject, subject.axes[pieces][:, :, 1])
    # A half of a crossed tube covers half a bay: what covers none is in the bay of its middle.
    y = np.array(subject.shed.grid.y)
    middle = np.clip(np.searchsorted(y, subject.centres[pieces][:, 1]) - 1, 0, len(y) - 2)
    bay = np.where(over.any(axis=1), over.argmax(axis=1), middle)
    for line, number in sorted(set(zip(owner.tolist(), bay.tolist(), strict=True))):
        here = pieces[(owner == line) & (bay == number)]
        found[line, number] = Panels(
            tuple(here.tolist()), _gap(np.sort(subject.axes[here][:, :, axis], axis=1), bounds[line])
        )
    return found


def _gap(stretches: NDArray[np.float64], bounds: tuple[float, float]) -> float:
    """The greatest stretch between two bounds that none of some (n, 2) stretches covers, mm."""
    low, high = bounds
    ordered = stretches[np.argsort(stretches[:, 0], kind="stable")]
    reached = np.maximum.accumulate(np.concatenate([[low], ordered[:, 1]]))
    begins = np.concatenate([ordered[:, 0], [high]])
    return float(np.max(begins - reached, initial=0.0))
