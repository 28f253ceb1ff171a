"""Parts of a building's bars and types of its assemblies, each with its mark.

A mark is the prefix of the role, or of the kind of assembly, and a number from 1. Numbers follow from what
the things are and never from the order in which they came: parts by section, then from long to short, then
by their cuts; assemblies by their parts, then by where these lie.
"""

from __future__ import annotations

import re
from collections import defaultdict
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.errors import ModelError
from shedbim.geometry.placements import IDENTITY, Placements, apply, compose
from shedbim.model.bars import Bar
from shedbim.model.clouds import Cloud, match, order
from shedbim.model.congruence import congruence, forms, is_free_to_turn, ranks, symmetries
from shedbim.model.roles import Role
from shedbim.model.shed import AssemblyType, Part
from shedbim.sections.section import Section

__all__ = [
    "AssemblyGrouping",
    "AssemblyTemplate",
    "PartGrouping",
    "Stock",
    "group_assemblies",
    "group_parts",
]

#: The letters that marks of assemblies begin with; no role has them.
_PREFIXES = {"truss": "TR", "frame": "F"}
_NUMBER = re.compile(r"(\d+(?:\.\d+)?)")


@dataclass(frozen=True)
class Stock:
    """One bar as the expansion made it, before it is known which bars are equal."""

    role: Role
    bar: Bar
    grade: str
    finish: str


@dataclass(frozen=True, eq=False)
class PartGrouping:
    """Which part each stock bar is.

    Attributes:
        parts: sorted by role, then by number.
        part_of: (s,) int, index into ``parts``.
        motion: (s, 3, 4) float, placement of the part's frame in the stock bar's frame, mm: a piece lies at the
            placement of its stock bar composed with this.
        flipped: (s,) bool, True where the part's start is the stock bar's end.
    """

    parts: tuple[Part, ...]
    part_of: NDArray[np.int64]
    motion: Placements
    flipped: NDArray[np.bool_]


@dataclass(frozen=True, eq=False)
class AssemblyTemplate:
    """One assembly as the expansion made it, in a frame of its own.

    Attributes:
        kind: ``truss`` or ``frame``.
        made: ``shop`` or ``site``.
        members: index of a stock bar and the placement (3, 4) of that bar's frame.
        children: index of a template that comes earlier in the list, and the placement (3, 4) of its frame.
    """

    kind: str
    made: str
    members: tuple[tuple[int, Placements], ...]
    children: tuple[tuple[int, Placements], ...] = ()


@dataclass(frozen=True, eq=False)
class AssemblyGrouping:
    """Which type each assembly template is.

    Attributes:
        types: sorted by depth of nesting, then kind, then number.
        type_of: (t,) int, index into ``types``.
        motion: (t, 3, 4) float, placement of the type's frame in the template's frame, mm. The type's frame is
            that of its first template in the list.
    """

    types: tuple[AssemblyType, ...]
    type_of: NDArray[np.int64]
    motion: Placements


def group_parts(stock: Sequence[Stock]) -> PartGrouping:
    """Sort stock bars into parts and give each part its mark.

    Bars of one role, section, grade and finish are one part if a rigid motion lays one on the other within
    ``SAME_LENGTH``; see ``congruence``. The part's bar is as long as the shortest of them.
    """
    sections: dict[Section, list[int]] = defaultdict(list)
    for i, each in enumerate(stock):
        sections[each.bar.section].append(i)
    found: list[Stock] = []
    loose = np.zeros(len(stock), np.int64)
    motion, flipped = np.empty((len(stock), 3, 4)), np.zeros(len(stock), bool)
    for rows in sections.values():
        uses = [(stock[i].role, stock[i].grade, stock[i].finish) for i in rows]
        numbers = {use: i for i, use in enumerate(dict.fromkeys(uses))}
        same = congruence([stock[i].bar for i in rows], [numbers[use] for use in uses])
        loose[rows] = same.shape_of + len(found)
        motion[rows], flipped[rows] = same.motion, same.flipped
        use_of = dict(zip(same.shape_of.tolist(), uses, strict=True))
        found += [Stock(use_of[i][0], bar, *use_of[i][1:]) for i, bar in enumerate(same.shapes)]
    sequence = _sequence(found)
    counts: dict[Role, int] = defaultdict(int)
    parts = []
    for i in sequence:
        role = found[i].role
        counts[role] += 1
        parts.append(Part(f"{role.prefix}{counts[role]}", role, found[i].bar, found[i].grade, found[i].finish))
    place = np.empty(len(found), np.int64)
    place[sequence] = np.arange(len(found))
    return PartGrouping(tuple(parts), place[loose], motion, flipped)


def group_assemblies(templates: Sequence[AssemblyTemplate], grouping: PartGrouping) -> AssemblyGrouping:
    """Sort assembly templates into types and give each type its mark.

    Two are one type if kind, place of making, parts and types of children are the same, and a rigid motion,
    never a mirror, carries each piece to within ``SAME_PLACE`` of its like, whatever symmetry of the
    part itself lies between them.

    Args:
        templates: t templates, children before what holds them.
        grouping: of the stock bars that the members name.

    Raises:
        ModelError: when a child comes after its parent, or a kind has no prefix.
    """
    part_clouds = [_part_cloud(part.bar, 3 * i) for i, part in enumerate(grouping.parts)]
    type_clouds: list[Cloud] = []  # of each type, as it stands in a parent
    types: list[AssemblyType] = []
    type_of, motion = np.full(len(templates), -1), np.tile(IDENTITY, (len(templates), 1, 1))
    counts: dict[str, int] = defaultdict(int)
    next_label = 3 * len(part_clouds)
    for level in _levels(templates):
        buckets: dict[tuple[str, tuple[int, ...], tuple[int, ...], str], list[int]] = defaultdict(list)
        for t in level:
            each = templates[t]
            children = tuple(sorted(int(type_of[c]) for c, _ in each.children))
            parts = tuple(sorted(int(grouping.part_of[s]) for s, _ in each.members))
            buckets[each.kind, children, parts, each.made].append(t)
        for (kind, _, _, made), rows in sorted(buckets.items()):
            clouds: dict[int, Cloud] = {}  # of the first template of each type
            for t in rows:
                inside = [(part_clouds[grouping.part_of[s]], compose(at, grouping.motion[s])) for s, at in templates[t].members]
                inside += [(type_clouds[type_of[c]], compose(at, motion[c])) for c, at in templates[t].children]
                cloud = _gathered(inside)
                for first, other in clouds.items():
                    onto = match(other, cloud)
                    if onto is not None:
                        firsts[t], motion[t] = first, onto
                        break
                else:
                    clouds[t] = cloud
    return AssemblyGrouping(tuple(types), type_of, motion)


def _mark(prefix: str, number: int) -> str:
    return f"{prefix}{number}"
