"""Hollow sections, square, rectangular and circular: cold formed (EN 10219-2), hot finished (EN 10210-2)."""

from __future__ import annotations

from collections.abc import Callable

from shedbim.sections.family import Entry, Family, Size, read_rows, sized
from shedbim.sections.profiles import Hollow, Pipe

__all__ = ["FAMILIES"]


def cold_formed(dimensions: Size) -> Hollow:
    """Give the shape from depth, width and wall, with the corner radii that EN 10219-2 computes with."""
    h, b, t = dimensions
    if t <= 6:
        outer, inner = 2.0, 1.0
    elif t <= 10:
        outer, inner = 2.5, 1.5
    else:
        outer, inner = 3.0, 2.0
    return Hollow(h, b, t, outer * t, inner * t)


def hot_finished(dimensions: Size) -> Hollow:
    """Give the shape from depth, width and wall, with the corner radii that EN 10210-2 computes with."""
    h, b, t = dimensions
    return Hollow(h, b, t, 1.5 * t, 1.0 * t)


def circular(dimensions: Size) -> Pipe:
    """Give the ring from outside diameter and wall."""
    d, t = dimensions
    return Pipe(d, t)


def _walls_of(name: str) -> Callable[[], list[Entry]]:
    """Give a reader of a table that lists all walls of one outside size in one row."""

    def entries() -> list[Entry]:
        return [
            Entry(size, size, row["source"])
            for row in read_rows(name)
            for wall in row["walls"].split()
            for size in [(*sized(row["outside"]), float(wall))]
        ]

    return entries


FAMILIES = (
    Family(
        "SHS", "EN 10219-2", "square hollow section, cold formed", "SHS side x side x wall", "SHS 100x100x5",
        cold_formed, _walls_of("shs"), aliases=("CF SHS",), square=True,
    ),
    Family(
        "RHS", "EN 10219-2", "rectangular hollow section, cold formed", "RHS depth x width x wall",
        "RHS 200x100x8", cold_formed, _walls_of("rhs"), aliases=("CF RHS",),
    ),
    Family(
        "HF SHS", "EN 10210-2", "square hollow section, hot finished", "HF SHS side x side x wall",
        "HF SHS 100x100x5", hot_finished, _walls_of("hf_shs"), square=True,
    ),
    Family(
        "HF RHS", "EN 10210-2", "rectangular hollow section, hot finished", "HF RHS depth x width x wall",
        "HF RHS 200x100x8", hot_finished, _walls_of("hf_rhs"),
    ),
    Family(
        "CHS", "EN 10219-2 and EN 10210-2", "circular hollow section", "CHS diameter x wall", "CHS 114.3x5",
        circular, _walls_of("chs"), aliases=("CF CHS", "HF CHS"),
    ),
)  # fmt: skip
