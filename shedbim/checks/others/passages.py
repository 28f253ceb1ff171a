"""What passes through trusses: the largest round and rectangular duct in each panel, by the outlines of its steel.

The opening of a panel is what the steel of its line leaves free, seen along the building: chords, webs, gussets,
plates and bolts as they are made. A duct keeps straight along the building, and its clearance and insulation free.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from functools import cache
from math import floor

import numpy as np
from manifold3d import CrossSection, FillRule, JoinType, Manifold, OpType
from numpy.typing import NDArray

from shedbim.geometry.inscribed import largest_circle, largest_rectangle
from shedbim.limits import Criteria
from shedbim.model.roles import Role
from shedbim.model.shed import Shed
from shedbim.model.solids import solid

__all__ = ["FLAT", "Passage", "passages"]

Floats = NDArray[np.float64]

#: Width by height of a flat rectangular duct.
FLAT = 2.0
#: Openings that not even a circle of this diameter fits in are none of a panel, mm.
_LEAST = 100.0
#: Steel that is nearer than this is taken as touching: no opening goes through, mm.
_SLIT = 4.0
#: Arcs are cut into chords that leave them by so much, and placements that differ by less are one, mm.
_CHORD_ERROR, _PLACE = 0.2, 0.1

#: What the keys of a truss and of its columns say after their line.
_OF_A_TRUSS = ("truss", "column")

#: Building axes seen along the building: x to the right, z up.
_VIEW = np.array([[1.0, 0.0, 0.0], [0.0, 0.0, 1.0], [0.0, -1.0, 0.0]])


@dataclass(frozen=True)
class Passage:
    """One panel of trusses that are alike, and what passes through it.

    Attributes:
        lines: labels of the lines whose trusses have it.
        span: labels of its span, ``A-B``.
        panel: number of its opening in the span, from the left.
        x, z: the middle of the round duct, mm from the first lettered line and above the floor.
        opening: diameter of the largest circle in the opening itself, mm.
        round: diameter of the largest round duct, mm; 0 where none passes.
        square: side of the largest square duct, mm.
        flat: width and height of the largest duct ``FLAT`` times as wide as high, mm.
        clearance, insulation: kept free around each duct, mm.
    """

    lines: tuple[str, ...]
    span: str
    panel: int
    x: float
    z: float
    opening: float
    round: float
    square: float
    flat: tuple[float, float]
    clearance: float
    insulation: float


def passages(shed: Shed, criteria: Criteria) -> tuple[Passage, ...]:
    """Give the panels of all distinct trusses, by their first line and from left to right; none for solid rafters."""
    clearance, _ = criteria.limit("clear_of_ducts")
    insulation, _ = criteria.limit("duct_insulation")
    found: list[Passage] = []
    for lines, pieces in _frames(shed):
        number: dict[str, int] = {}
        free = clearance + insulation
        openings = [(*largest_circle(loops), loops) for loops in _openings(shed, pieces)]
        openings = [each for each in openings if 2 * each[1] >= _LEAST]
        for centre, radius, loops in sorted(openings, key=lambda each: float(each[0][0])):
            span = _span(shed, float(centre[0]))
            number[span] = number.get(span, 0) + 1
            square, flat = (max(floor(largest_rectangle(loops, p, free)[1]), 0) for p in (1.0, FLAT))
            found.append(
                Passage(
                    lines,
                    span,
                    number[span],
                    float(centre[0]),
                    float(centre[1]),
                    2 * radius,
                    max(floor(2 * (radius - free)), 0),
                    square,
                    (FLAT * flat, flat),
                    clearance,
                    insulation,
                )
            )
    return tuple(found)


def _span(shed: Shed, x: float) -> str:
    """The labels of the span over x."""
    grid = shed.grid
    left = int(np.clip(np.searchsorted(grid.x, x) - 1, 0, len(grid.x) - 2))
    return f"{grid.letters[left]}-{grid.letters[left + 1]}"


def _frames(shed: Shed) -> Iterator[tuple[tuple[str, ...], NDArray[np.int64]]]:
    """The lines with trusses that are alike, and the pieces of the first of them."""
    # The posts and rails of end walls stand in line with a truss and are none of it.
    words = [key.split("/", 2) for key in shed.pieces.keys]
    line = np.array([word[0] if len(word) > 1 and word[1] in _OF_A_TRUSS else "" for word in words])
    is_chord = np.array([part.role is Role.TOP_CHORD for part in shed.parts], bool)[shed.pieces.part]
    alike: dict[bytes, tuple[list[str], NDArray[np.int64]]] = {}
    for label, y in zip(shed.grid.numbers, shed.grid.y, strict=True):
        pieces = np.flatnonzero(line == label)
        if not is_chord[pieces].any():
            continue
        place = shed.pieces.placement[pieces].copy()
        place[:, 1, 3] -= y
        rows = np.column_stack([shed.pieces.part[pieces], place.reshape(len(pieces), 12) / _PLACE]).round()
        looks = np.unique(rows.astype(np.int64), axis=0).tobytes()
        alike.setdefault(looks, ([], pieces))[0].append(label)
    for labels, pieces in alike.values():
        yield tuple(labels), pieces


def _openings(shed: Shed, pieces: NDArray[np.int64]) -> list[list[Floats]]:
    """The openings in the steel of a line: each its rim and what stands within it."""
    body = cache(lambda part: solid(shed.parts[part].shape, _CHORD_ERROR))
    seen = [
        _seen(body(part), shed.pieces.placement[piece])
        for part, piece in zip(shed.pieces.part[pieces].tolist(), pieces.tolist(), strict=True)
    ]
    steel = CrossSection.batch_boolean(seen, OpType.Add)
    closed = steel.offset(_SLIT / 2, JoinType.Miter).offset(-_SLIT / 2, JoinType.Miter)
    rims: list[Floats] = []
    islands: list[Floats] = []
    for loop in (np.asarray(each, float) for each in closed.to_polygons()):
        (rims if _area(loop) < 0 else islands).append(loop)
    return [[rim, *(island for island in islands if _holds(rim, island))] for rim in rims]


def _seen(body: Manifold, place: Floats) -> CrossSection:
    """The outline of a placed body, seen along the building."""
    return body.transform(_VIEW @ place).project()


def _area(loop: Floats) -> float:
    following = np.roll(loop, -1, axis=0)
    return float((loop[:, 0] * following[:, 1] - loop[:, 1] * following[:, 0]).sum() / 2)


def _holds(rim: Floats, island: Floats) -> bool:
    """Whether an island lies in a rim."""
    inside = CrossSection([rim[::-1].tolist()], FillRule.Positive) ^ CrossSection([island.tolist()])
    return bool(inside.area() > 0.5 * _area(island))
