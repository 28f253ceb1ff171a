"""Room for bolts in an end plate: how near to steel, edges and each other they may be, and where their rows go.

Least distances: EN 1993-1-8 Table 3.3. Usual ones and those a wrench needs: see ``fasteners.distances``.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from functools import cache
from math import ceil, floor, sqrt

from shedbim.fasteners.bolts import bolt
from shedbim.fasteners.distances import edge, least_edge, pitch, wrench_pitch, wrench_wall
from shedbim.fasteners.holes import hole_diameter

__all__ = ["PlateLayout", "Room", "Zone", "beside", "rows", "sizes", "spread"]

_SERIES = (36.0, 30.0, 27.0, 24.0, 20.0, 16.0, 12.0)
#: Greatest distance of rows (EN 1993-1-8 Table 3.3: the lesser of 14 t and 200 mm, for plates of 15 mm up).
_FARTHEST = 200.0
#: Rows and columns of bolts are set out in whole steps of this (common practice).
STEP = 5.0
#: Air beside a washer or a head, mm.
_AIR = 1.0


@dataclass(frozen=True)
class Room:
    """The distances that bolts of one diameter keep, mm."""

    diameter: float

    @property
    def edge(self) -> float:
        """Usual distance of a bolt from an edge."""
        return edge(self.diameter)

    @property
    def least_edge(self) -> float:
        """Least distance of a bolt from an edge."""
        return least_edge(hole_diameter(self.diameter))

    @property
    def pitch(self) -> float:
        """Least distance of two bolts here: the usual one, and what a wrench needs."""
        return max(pitch(self.diameter), wrench_pitch(self.diameter))

    @property
    def stack(self) -> float:
        """How far nut, washer and tip stand out of what they clamp: two diameters cover all sizes."""
        return 2.0 * self.diameter

    def from_wall(self, leg: float = 0.0) -> float:
        """Least distance of a bolt from a wall beside it that a weld with this leg runs along."""
        return max(wrench_wall(self.diameter), leg + _washer(self.diameter) / 2 + _AIR)

    @property
    def round_corner(self) -> float:
        """Least distance along a corner of bolts in its two legs: a wrench on one passes the nut of the other."""
        return wrench_wall(self.diameter) + _washer(self.diameter) / 2 + _AIR

    def from_root(self, half: float, radius: float) -> float:
        """Least distance of a bolt from the middle of a web of half this thickness with such root fillets."""
        return half + max(wrench_wall(self.diameter), radius + _across(self.diameter) / 2 + _AIR)


@cache
def _washer(diameter: float) -> float:
    """Diameter of the widest disc of a bolt with its nut and washer."""
    return max(disc.size for disc in bolt(diameter, "8.8", 2 * diameter).stack)


@cache
def _across(diameter: float) -> float:
    """Diameter over the corners of a head, or over what is wider."""
    stack = bolt(diameter, "8.8", 2 * diameter).stack
    return max(disc.size * (2 / sqrt(3) if disc.form == "hexagon" else 1.0) for disc in stack)


def sizes(asked: str | None, wanted: float) -> Iterator[float]:
    """Give the diameters to try, mm: the one asked for, or the one wanted and then the smaller ones."""
    if asked is not None:
        yield float(asked.removeprefix("M"))
    else:
        yield from (d for d in _SERIES if d <= wanted)


def spread(room: Room, least: float, steel: float, wanted: float, most: float) -> float | None:
    """Give how far aside of the middle the bolts are, mm; None where there is no place for them.

    Args:
        least: nearest to the middle that webs allow.
        steel: half the width of the narrowest thing they pass through.
        wanted: where they would be by custom.
        most: farthest from the middle that they may be for any other reason.
    """
    least = ceil(least / STEP - 1e-9) * STEP
    for margin in (room.edge, room.least_edge):
        far = floor(min(steel - margin, most) / STEP + 1e-9) * STEP
        if far >= least:
            return min(max(least, floor(wanted / STEP) * STEP), far)
    return None


@dataclass(frozen=True, eq=False)
class PlateLayout:
    """An end plate and its bolts: half its width, its lowest and highest level, bolts aside and rows, mm."""

    room: Room
    half: float
    low: float
    high: float
    aside: float
    rows: list[float]


@dataclass(frozen=True)
class Zone:
    """A stretch of the plate, from low to high, where bolts may be."""

    low: float
    high: float


def beside(zone: Zone, taken: Sequence[Zone], room: Room) -> list[Zone]:
    """Give what of a zone is a wrench's distance off everything that is in the way.

    What is left under it and is too short for two rows keeps its lower end alone: rows stay as far apart as they may.
    """
    left = [zone]
    for each in sorted(taken, key=lambda each: -each.high):
        above = left[-1]
        wall = room.from_wall()
        if each.high + wall <= above.low or each.low - wall >= above.high:
            continue
        upper, under = Zone(each.high + wall, above.high), Zone(above.low, each.low - wall)
        if under.low < under.high < under.low + room.pitch:
            level = (
                max(under.low, min(upper.high - _FARTHEST, under.high))
                if upper.high >= upper.low
                else under.low
            )
            under = Zone(level, level)
        left[-1:] = [upper, under]
    return left


def rows(zones: Sequence[Zone], room: Room) -> list[float]:
    """Give the levels of the rows, from the top down: one at either end of each zone, more where these are far apart.

    A zone too short for two rows has one, at its upper end; one that is turned over has none.
    """
    found: list[float] = []
    for zone in sorted(zones, key=lambda each: -each.high):
        high = zone.high if not found else min(zone.high, found[-1] - room.pitch)
        length = zone.high - zone.low if not found else high - zone.low
        if length < 0:
            continue
        parts = ceil(length / _FARTHEST - 1e-9)
        if length < room.pitch:
            parts = 0
        gap = floor(length / max(parts, 1) / STEP + 1e-9) * STEP
        if parts and gap < room.pitch:
            gap = length / parts
        found.extend(high - gap * k for k in range(parts + 1))
    return found
