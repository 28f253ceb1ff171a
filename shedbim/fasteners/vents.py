"""Holes through which zinc and air pass at both ends of a hollow section that is galvanized.

A table of galvanizers' design guidance for lengths up to 2.8 m; the total opening of longer ones is at least 30 %
of the internal area (seen in the same guidance). Other baths have other rules: the galvanizer has the last word.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import ceil, pi, sqrt

from shedbim.fasteners.rows import Row, rows_of
from shedbim.sections.profiles import Hollow, Pipe
from shedbim.sections.section import Section

__all__ = ["Vents", "internal_area", "vents"]

#: Lengths that the table holds for, mm, and the share of the internal area that is open beyond.
_TABLE_LENGTH, _SHARE = 2800.0, 0.30
#: Columns of the table by number of holes at each end.
_COUNTS = ((1, "one"), (2, "two"), (4, "four"))
#: Faces (y, z) that the holes of one end are in: opposite ones first.
_FACES = ((0.0, 1.0), (0.0, -1.0), (1.0, 0.0), (-1.0, 0.0))
#: Least of a hole, mm: the least of the table.
_LEAST = 8.0
#: Drills come in steps of the first up to the second, mm, and in steps of the third above (common practice).
_STEP, _COARSE, _COARSE_STEP = 1.0, 30.0, 5.0
#: Widest hole over the width of its face or the diameter of a round tube (common practice).
_SHARE_OF_FACE = 0.5


@dataclass(frozen=True)
class Vents:
    """The holes at each end.

    Attributes:
        count: 1, 2 or 4.
        diameter: of each, mm.
        faces: outward direction (y, z) in section axes of the face that each hole is in, one hole a face.
    """

    count: int
    diameter: float
    faces: tuple[tuple[float, float], ...]

    @property
    def area(self) -> float:
        """Total opening at one end, mm2."""
        return self.count * pi / 4 * self.diameter**2


def vents(section: Section, length: float) -> Vents:
    """Give the fewest holes for each end of a hollow section that fit its flat faces.

    Args:
        section: square, rectangular or circular hollow section.
        length: of the bar, mm.

    Raises:
        ValueError: for a section that is not hollow, or where no holes fit: leave its ends open then.
    """
    profile = _hollow(section)
    row = _row(profile)
    for count, column in _COUNTS:
        by_table = float(row[column]) if row is not None and row[column] else 0.0
        if length <= _TABLE_LENGTH and row is not None:
            wanted = by_table
        else:
            share = sqrt(_SHARE * internal_area(section) / count / (pi / 4))
            wanted = max(by_table, _drill(share))
        faces = _faces(profile, count)
        if 0 < wanted <= min(_room(profile, face) for face in faces):
            return Vents(count, wanted, faces)
    raise ValueError(f"no vent holes fit the faces of {section.designation}: leave its ends open")


def internal_area(section: Section) -> float:
    """Give the area inside a hollow section, mm2; ValueError for one that is not hollow."""
    profile = _hollow(section)
    if isinstance(profile, Pipe):
        return pi / 4 * (profile.d - 2 * profile.t) ** 2
    return (profile.h - 2 * profile.t) * (profile.b - 2 * profile.t) - (4 - pi) * profile.ri**2


def _hollow(section: Section) -> Hollow | Pipe:
    """The dimensions of a hollow section."""
    if not isinstance(section.profile, Hollow | Pipe):
        raise ValueError(f"{section.designation} is not hollow")
    return section.profile


def _row(profile: Hollow | Pipe) -> Row | None:
    """The row of the table, None beyond its last.

    The rectangles of the table have the mean side of the square in their row; those larger than its last
    rectangle go by their mean side.
    """
    depth, width = (profile.d, profile.d) if isinstance(profile, Pipe) else (profile.h, profile.b)
    if depth != width:
        long, short = max(depth, width), min(depth, width)
        for row in rows_of("vents"):
            if row["depth_below"] and long < float(row["depth_below"]) and short < float(row["width_below"]):
                return row
    mean = (depth + width) / 2
    return next((row for row in rows_of("vents") if mean < float(row["side_below"])), None)


def _faces(profile: Hollow | Pipe, count: int) -> tuple[tuple[float, float], ...]:
    """The faces that so many holes lie in, the wider pair first."""
    upright = isinstance(profile, Hollow) and profile.h > profile.b
    return ((_FACES[2:] + _FACES[:2]) if upright else _FACES)[:count]


def _room(profile: Hollow | Pipe, face: tuple[float, float]) -> float:
    """The largest hole in a face: within its flat, and no more than half of its width."""
    if isinstance(profile, Pipe):
        return _SHARE_OF_FACE * profile.d
    across = profile.b if face[1] else profile.h
    return min(across - 2 * profile.ro, _SHARE_OF_FACE * across)


def _drill(diameter: float) -> float:
    """The next drill."""
    step = _STEP if diameter <= _COARSE else _COARSE_STEP
    return max(_LEAST, step * ceil(diameter / step - 1e-9))
