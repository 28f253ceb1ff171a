"""How deep trusses are over their span."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

from shedbim.checks.subject import Subject
from shedbim.model.roles import Role

__all__ = ["truss_depths"]

Floats = NDArray[np.float64]


def truss_depths(subject: Subject) -> Iterator[tuple[int, float, float]]:
    """Give for each truss a bar of its top chord, its span from line to line and its greatest depth, mm.

    The depth is measured upright between the axes of the chords, at all ends of their bars.
    """
    grid = subject.shed.grid
    tops, bottoms = subject.having(Role.TOP_CHORD), subject.having(Role.BOTTOM_CHORD)
    owners = [_owner(subject.axes[pieces].mean(axis=1), grid.x, grid.y) for pieces in (tops, bottoms)]
    for number in np.unique(owners[0]).tolist():
        upper, lower = (
            _corners(subject.axes[pieces[owner == number]])
            for pieces, owner in zip((tops, bottoms), owners, strict=True)
        )
        if not len(upper) or not len(lower):
            continue
        x = np.union1d(upper[:, 0], lower[:, 0])
        x = x[(x >= max(upper[0, 0], lower[0, 0])) & (x <= min(upper[-1, 0], lower[-1, 0]))]
        depth = np.interp(x, upper[:, 0], upper[:, 1]) - np.interp(x, lower[:, 0], lower[:, 1])
        if len(depth) and depth.max() > 0:
            span = number % len(grid.x)
            piece = int(tops[owners[0] == number][0])
            yield piece, grid.x[span + 1] - grid.x[span], float(depth.max())


def _owner(middle: Floats, x: tuple[float, ...], y: tuple[float, ...]) -> NDArray[np.int64]:
    """A number for each frame and span."""
    span = np.clip(np.searchsorted(x, middle[:, 0]) - 1, 0, len(x) - 2)
    frame = np.abs(middle[:, 1:2] - np.array(y)).argmin(axis=1)
    return np.asarray(frame * len(x) + span)


def _corners(axes: Floats) -> Floats:
    """The ends of axes as (x, z), from left to right."""
    points = axes.reshape(-1, 3)[:, [0, 2]]
    return np.asarray(points[np.argsort(points[:, 0], kind="stable")])
