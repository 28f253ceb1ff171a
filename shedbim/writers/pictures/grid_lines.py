"""The grid lines that a view shows, and their balloons outside the building at the near end of each.

Common practice: a chain line on the grid, a round balloon with its label at one end, outside the building. In
elevations the lines stand upright with balloons below the floor; elsewhere they lie on the floor. Where balloons
would touch, some are left out, never the first or the last of a row, and their lines end short.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.model.shed import Grid
from shedbim.writers.pictures.annotations import QUIET, Annotation, Balloon, Rectangle, Stroke
from shedbim.writers.pictures.projection import Projection
from shedbim.writers.pictures.shot import FINER, Shot

__all__ = ["GridLine", "balloons", "grid_lines", "written_grid"]

Floats = NDArray[np.float64]

#: A line belongs to what is drawn when it lies within this of it, mm: rails and eaves stand off the grid.
_BESIDE = 600.0
#: From the building to the balloon, and the stub of a line without one, in heights of a capital.
_STEM, _STUB = 3.0, 1.2
#: Stretches of a line that are seen for less than this, in heights of a capital, are left out.
_LEAST = 0.8
#: Free space between balloons, in heights of a capital.
_AIR = 0.5
#: A view is an elevation or a plan when it looks along an axis this nearly.
_ALONG_AXIS = 0.9999


@dataclass(frozen=True, eq=False)
class GridLine:
    """A grid line in building axes, mm: its label, the end that has the balloon, the other end."""

    label: str
    near: Floats
    far: Floats


def grid_lines(grid: Grid, low: Floats, high: Floats, projection: Projection) -> list[list[GridLine]]:
    """Give the rows of grid lines to draw, letters and numbers, round what lies between two corners (3,)."""
    away = np.abs(projection.turn[2])
    floor = min(low[2], 0.0)
    rows: list[list[GridLine]] = []
    for axis, labels, values in ((0, grid.letters, grid.x), (1, grid.numbers, grid.y)):
        other = 1 - axis
        if away[axis] > _ALONG_AXIS:  # lines of this row lie one behind the other
            continue
        row = []
        for label, value in zip(labels, values, strict=True):
            if not low[axis] - _BESIDE <= value <= high[axis] + _BESIDE:
                continue
            ends = np.zeros((2, 3))
            ends[:, axis] = value
            if away[other] > _ALONG_AXIS:
                behind = high if projection.turn[2, other] > 0 else low
                ends[:, other], ends[:, 2] = behind[other], (floor, high[2])
            else:
                ends[:, other], ends[:, 2] = (low[other], high[other]), floor
                seen = projection.points(ends)
                # The end lower in the picture is the nearer one; where both are level, the left one.
                if (round(seen[1, 1] - seen[0, 1], 3), seen[0, 0]) > (0.0, seen[1, 0]):
                    ends = ends[::-1]
            row.append(GridLine(label, ends[0], ends[1]))
        rows.append(row)
    return rows


def balloons(
    rows: Sequence[Sequence[GridLine]], projection: Projection, capital: float
) -> list[tuple[Balloon | None, Stroke]]:
    """Give for each line, row by row, its balloon, if there is room for one, and its stem, in pixels."""
    found: list[tuple[Balloon | None, Stroke]] = []
    taken: list[Rectangle] = []
    for row in rows:
        placed = [_balloon(line, projection, capital) for line in row]
        kept: set[int] = set()
        # The ends of a row first, then from its beginning.
        for index in dict.fromkeys([0, len(row) - 1, *range(len(row))]) if row else ():
            rectangle = placed[index][0].rectangle
            if not any(_touch(rectangle, other, _AIR * capital) for other in taken):
                kept.add(index)
                taken.append(rectangle)
        for index, (balloon, foot, out) in enumerate(placed):
            reach = (_STEM if index in kept else _STUB) * capital
            end = foot + out * reach
            stem = Stroke(
                float(foot[0]), float(foot[1]), float(end[0]), float(end[1]), _weight(capital), QUIET
            )
            found.append((balloon if index in kept else None, stem))
    return found


def written_grid(
    rows: Sequence[Sequence[GridLine]], projection: Projection, capital: float, shot: Shot
) -> list[Annotation]:
    """Give the grid as it is drawn: what is not hidden of the lines, stems, balloons."""
    lines = [line for row in rows for line in row]
    if not lines:
        return []
    ends = shot.projection.points(np.array([[line.near, line.far] for line in lines]))
    index, shares = shot.canvas.uncovered(ends, shot.bias)
    start, step = ends[index, 0, :2] / FINER, (ends[index, 1, :2] - ends[index, 0, :2]) / FINER
    stretches = np.concatenate([start + step * shares[:, :1], start + step * shares[:, 1:]], axis=1)
    long = np.hypot(stretches[:, 2] - stretches[:, 0], stretches[:, 3] - stretches[:, 1]) > _LEAST * capital
    written: list[Annotation] = [
        Stroke(x1, y1, x2, y2, _weight(capital), QUIET, chain=True)
        for x1, y1, x2, y2 in stretches[long].tolist()
    ]
    placed = balloons(rows, projection, capital)
    written += [stem for _, stem in placed]
    written += [balloon for balloon, _ in placed if balloon is not None]
    return written


def _balloon(line: GridLine, projection: Projection, capital: float) -> tuple[Balloon, Floats, Floats]:
    """The balloon of a line, the foot of its stem (2,) and the way the stem points (2,)."""
    near, far = projection.points(np.stack([line.near, line.far]))[:, :2]
    out = (near - far) / max(float(np.linalg.norm(near - far)), 1e-9)
    blank = Balloon(0.0, 0.0, line.label, capital)
    # The stem ends on the frame of the balloon, whichever way it comes.
    reach = blank.radius + abs(float(out[0])) * (blank.half - blank.radius)
    centre = near + out * (_STEM * capital + reach)
    return Balloon(float(centre[0]), float(centre[1]), line.label, capital), near, out


def _weight(capital: float) -> float:
    """Width of grid lines, pixels."""
    return max(0.07 * capital, 0.6)


def _touch(a: Rectangle, b: Rectangle, air: float) -> bool:
    """Whether two rectangles come nearer than ``air``."""
    return a[0] < b[2] + air and b[0] < a[2] + air and a[1] < b[3] + air and b[1] < a[3] + air
