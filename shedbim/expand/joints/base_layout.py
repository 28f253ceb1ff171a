"""Where the anchors and packs of a base stand and how large its plate is, in plan.

Plan axes: a along the section's y axis (the width of an I), b along its z axis (the depth), from its centre. mm.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from itertools import combinations
from math import ceil, cos, floor, pi, sin

from shedbim.fasteners.plate_stock import rounded_up
from shedbim.sections.profiles import IShape, Pipe
from shedbim.sections.section import Section

__all__ = ["PACK_GAP", "AnchorRoom", "BasePlan", "base_plan", "pack_places"]

Place = tuple[float, float]

#: Plate beyond the outline of the section: room for the fillet weld (common practice: 10 to 25 mm).
_OVERHANG = 20.0
#: Anchors stand on places in whole steps of this, so that bases repeat.
_STEP = 5.0
#: Packs to anchors, shear key and each other, and to the edge of the plate (values from memory).
PACK_GAP, _PACK_EDGE = 10.0, 5.0
#: Sides of square packs, the first that finds room is taken (common practice: 50 to 100 mm).
_PACKS = (80.0, 60.0, 50.0, 40.0)


@dataclass(frozen=True)
class AnchorRoom:
    """What an anchor needs around it.

    Attributes:
        clear: its centre to the steel of the section or a stiffener.
        edge: its centre to the edge of the plate.
        pitch: to the next anchor.
    """

    clear: float
    edge: float
    pitch: float


@dataclass(frozen=True)
class BasePlan:
    """Anchors at (a, b), and the plate's sizes along a and b."""

    anchors: tuple[Place, ...]
    size: tuple[float, float]


def base_plan(
    section: Section, count: int, room: AnchorRoom, *, fixed: bool, stiffener: float = 0.0
) -> BasePlan:
    """Give the plan of a base.

    Pinned bases of I sections have their anchors between the flanges where there is room, else beside the
    flange tips, as tubes have: close to the axis about which the frame turns. Fixed bases have them beyond the
    flanges or walls. Round tubes have them on a circle. All are common practice.

    Args:
        count: number of anchors, even.
        stiffener: thickness of the gussets between the anchors of a fixed base, 0 where there are none.
    """
    if isinstance(section.profile, Pipe):
        anchors = _round(section.profile.d, count, room)
    elif fixed:
        anchors = _beyond(section, count // 2, room, stiffener)
    else:
        anchors = _inside(section, count // 2, room) or _beside(section, count // 2, room)
    outline = (section.width / 2, section.height / 2)
    size = tuple(
        rounded_up(2 * max(half + _OVERHANG, max(abs(place[i]) for place in anchors) + room.edge))
        for i, half in enumerate(outline)
    )
    if isinstance(section.profile, Pipe):
        size = (max(size), max(size))
    return BasePlan(anchors, (size[0], size[1]))


def _up(value: float) -> float:
    return ceil(value / _STEP - 1e-9) * _STEP


def _down(value: float) -> float:
    return floor(value / _STEP + 1e-9) * _STEP


def _row(count: int, reach: float) -> list[float]:
    """So many places from -reach to reach, evenly; one of them in the middle where there is one alone."""
    if count == 1:
        return [0.0]
    return [-reach + 2 * reach * i / (count - 1) for i in range(count)]


def _inside(section: Section, rows: int, room: AnchorRoom) -> tuple[Place, ...]:
    """Between the flanges of an I, half of them on either side of the web; none where they find no room."""
    profile = section.profile
    if not isinstance(profile, IShape):
        return ()
    most = _down(profile.h / 2 - profile.tf - room.clear)
    least = room.pitch * (rows - 1) / 2
    if most < least:
        return ()
    b = min(most, max(_up(least), _up(profile.h / 4)))
    a = max(_up(profile.tw / 2 + room.clear), _up(room.pitch / 2), _down(profile.b / 4))
    return tuple((side * a, place) for side in (-1, 1) for place in _row(rows, b))


def _beside(section: Section, rows: int, room: AnchorRoom) -> tuple[Place, ...]:
    """Beyond the width of the section, near the middle of its depth."""
    a = _up(section.width / 2 + room.clear)
    b = max(_up(room.pitch * (rows - 1) / 2), _down(section.height / 4))
    return tuple((side * a, place) for side in (-1, 1) for place in _row(rows, b))


def _beyond(section: Section, columns: int, room: AnchorRoom, stiffener: float) -> tuple[Place, ...]:
    """Beyond the depth of the section, spread over its width."""
    pitch = max(room.pitch, 2 * room.clear + stiffener) if stiffener else room.pitch
    b = _up(section.height / 2 + room.clear)
    a = max(_up(pitch * (columns - 1) / 2), _down(section.width / 3))
    return tuple((place, side * b) for side in (-1, 1) for place in _row(columns, a))


def _round(diameter: float, count: int, room: AnchorRoom) -> tuple[Place, ...]:
    """On a circle round a tube, none of them on the axes a and b."""
    radius = _up(max(diameter / 2 + room.clear, room.pitch / 2 / sin(pi / count)))
    turns = [2 * pi * (i + 0.5) / count for i in range(count)]
    return tuple((radius * cos(turn), radius * sin(turn)) for turn in turns)


def pack_places(
    plan: BasePlan, anchor: float, key: tuple[float, float] | None
) -> tuple[float, tuple[Place, ...]] | None:
    """Give the side of four square packs and their middles; None where four of them find no room.

    Args:
        anchor: diameter of the anchors.
        key: sizes of the shear key along a and b.
    """
    for side in _PACKS:
        a, b = (size / 2 - _PACK_EDGE - side / 2 for size in plan.size)
        for places in _fours(a, b, (side + PACK_GAP) / 2):
            if _free(places, side, plan.anchors, anchor, key):
                return side, places
    return None


def _fours(a: float, b: float, least: float) -> Iterator[tuple[Place, ...]]:
    """Four places within a and b either way: in the middle of each side, else in the quarters, far out first."""
    if min(a, b) < least:
        return
    yield (-a, 0.0), (a, 0.0), (0.0, -b), (0.0, b)
    steps = [
        (a - i * _STEP, b - j * _STEP) for i in range(int(a // _STEP) + 1) for j in range(int(b // _STEP) + 1)
    ]
    for x, y in sorted((step for step in steps if min(step) >= least), key=lambda step: -min(step)):
        yield (-x, -y), (x, -y), (x, y), (-x, y)


def _free(
    places: Sequence[Place],
    side: float,
    anchors: Sequence[Place],
    anchor: float,
    key: tuple[float, float] | None,
) -> bool:
    """Whether square packs keep clear of anchors, the shear key and each other."""
    half = side / 2 + PACK_GAP
    others = [(place, (anchor / 2, anchor / 2)) for place in anchors]
    if key is not None:
        others.append(((0.0, 0.0), (key[0] / 2, key[1] / 2)))
    for here in places:
        if any(_near(here, there, half + size[0], half + size[1]) for there, size in others):
            return False
    reach = side + PACK_GAP
    return not any(_near(here, there, reach, reach) for here, there in combinations(places, 2))


def _near(here: Place, there: Place, reach_a: float, reach_b: float) -> bool:
    """Whether two places are nearer than the reach in both directions."""
    return abs(here[0] - there[0]) < reach_a - 1e-9 and abs(here[1] - there[1]) < reach_b - 1e-9
