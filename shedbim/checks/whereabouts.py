"""Where a point lies in words of the grid: between which lines, on which one, how high above the floor."""

from __future__ import annotations

from bisect import bisect_right

from shedbim.model.shed import Grid

__all__ = ["whereabouts"]

#: A point this near to a line is on it, mm: half a deep column and what is fastened to its face.
_ON = 350.0
#: A point this near to the floor is at it, mm: a base plate with its grout and the thread above it.
_AT_FLOOR = 75.0


def whereabouts(grid: Grid, point: tuple[float, float, float]) -> str:
    """Give where a point (x, y, z), mm in building axes, lies: ``between 2 and 3, on A, 7.9 m above floor``.

    Numbered lines come first, then lettered ones. What lies outside the grid is told by its distance from the
    outermost line: ``1.2 m before 1``, ``0.8 m beyond D``.
    """
    x, y, z = point
    return ", ".join((_along(y, grid.numbers, grid.y), _along(x, grid.letters, grid.x), _level(z)))


def _along(at: float, labels: tuple[str, ...], lines: tuple[float, ...]) -> str:
    """Where a coordinate lies among lines that go up."""
    nearest = min(range(len(lines)), key=lambda line: abs(at - lines[line]))
    if abs(at - lines[nearest]) <= _ON:
        return f"on {labels[nearest]}"
    after = bisect_right(lines, at)
    if after == 0:
        return f"{_metres(lines[0] - at)} before {labels[0]}"
    if after == len(lines):
        return f"{_metres(at - lines[-1])} beyond {labels[-1]}"
    return f"between {labels[after - 1]} and {labels[after]}"


def _level(z: float) -> str:
    """How high a level is."""
    if abs(z) <= _AT_FLOOR:
        return "at floor level"
    return f"{_metres(abs(z))} {'above' if z > 0 else 'below'} floor"


def _metres(length: float) -> str:
    return f"{length / 1000:.1f} m"
