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
#: Labels a part has in a cloud.
_PROBES = 3

#: Kind, types of children, parts, place of making.
_Content = tuple[str, tuple[int, ...], tuple[int, ...], str]


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
        motion: (s, 3, 4) float, placement of the part's frame in the stock bar's frame, mm: a piece lies at
            the placement of its stock bar composed with this.
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
        motion: (t, 3, 4) float, placement of the type's frame in the template's frame, mm. The type's frame
            is that of its first template in the list.
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
        parts.append(
            Part(f"{role.prefix}{counts[role]}", role, found[i].bar, found[i].grade, found[i].finish)
        )
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
    part_clouds = [_part_cloud(part.bar, _PROBES * i) for i, part in enumerate(grouping.parts)]
    type_clouds: list[Cloud] = []  # of each type, with the labels it has as a child
    next_label = _PROBES * len(part_clouds)
    types: list[AssemblyType] = []
    counts: dict[str, int] = defaultdict(int)
    type_of, motion = np.full(len(templates), -1), np.tile(IDENTITY, (len(templates), 1, 1))
    for level in _levels(templates):
        buckets: dict[_Content, list[int]] = defaultdict(list)
        for t in level:
            buckets[_content(templates[t], grouping.part_of, type_of)].append(t)
        for (kind, _, _, made), rows in sorted(buckets.items()):
            clouds = []
            for t in rows:
                members = [
                    (part_clouds[grouping.part_of[s]], compose(at, grouping.motion[s]))
                    for s, at in templates[t].members
                ]
                children = [
                    (type_clouds[type_of[c]], compose(at, motion[c])) for c, at in templates[t].children
                ]
                clouds.append(_gathered(members + children))
            for cloud, alike in _sorted_out(clouds):
                for i, onto in alike:
                    type_of[rows[i]], motion[rows[i]] = len(types), onto
                counts[kind] += 1
                types.append(AssemblyType(f"{_prefix(kind)}{counts[kind]}", kind, made))
                labels = next_label + np.unique(cloud.labels, return_inverse=True)[1]
                type_clouds.append(Cloud(cloud.points, labels))
                next_label += len(cloud.blocks)
    return AssemblyGrouping(tuple(types), type_of, motion)


def _sequence(found: Sequence[Stock]) -> list[int]:
    """The order of distinct things: by role, section, from long to short, then by cuts, grade and finish."""
    if not found:
        return []
    form = forms([each.bar for each in found])
    longest_first = -ranks(form.length)
    cuts = np.column_stack([form.kind, -ranks(form.slopes).reshape(len(found), -1)])
    roles = list(Role)

    def place(i: int) -> tuple[object, ...]:
        section = found[i].bar.section
        shape = (int(longest_first[i]), *cuts[i].tolist())
        return (
            roles.index(found[i].role),
            _natural(section.designation),
            section.family,
            shape,
            found[i].grade,
            found[i].finish,
        )

    return sorted(range(len(found)), key=place)


def _natural(text: str) -> tuple[str | float, ...]:
    """A key that puts 80 before 300: words and numbers by turns, a word first."""
    pieces = _NUMBER.split(text)
    return tuple(float(piece) if i % 2 else piece for i, piece in enumerate(pieces))


def _prefix(kind: str) -> str:
    if kind not in _PREFIXES:
        raise ModelError(f"no mark for assemblies of kind {kind!r}; kinds: {', '.join(sorted(_PREFIXES))}")
    return _PREFIXES[kind]


def _levels(templates: Sequence[AssemblyTemplate]) -> list[list[int]]:
    """Indices of templates by how deep they hold others: first those without children."""
    depth: list[int] = []
    for t, each in enumerate(templates):
        if any(not 0 <= child < t for child, _ in each.children):
            raise ModelError(f"assembly template {t} names a child that does not come before it")
        depth.append(1 + max((depth[child] for child, _ in each.children), default=-1))
    return [[t for t, d in enumerate(depth) if d == level] for level in range(max(depth, default=-1) + 1)]


def _content(each: AssemblyTemplate, part_of: NDArray[np.int64], type_of: NDArray[np.int64]) -> _Content:
    """What must be the same in two assemblies whatever their placements."""
    children = tuple(sorted(int(type_of[child]) for child, _ in each.children))
    return each.kind, children, tuple(sorted(int(part_of[s]) for s, _ in each.members)), each.made


def _part_cloud(bar: Bar, label: int) -> Cloud:
    """Points that show how a part lies as far as its symmetries let one tell, labelled from ``label``.

    Three points of its bounding box off every axis and plane of symmetry, or the ends of the axis where it
    is free to turn, each with its images under the symmetries.
    """
    low_y, low_z, high_y, high_z = bar.section.outline.bounds
    if is_free_to_turn(bar):
        probes = np.zeros((1, 3))
    else:
        middle = bar.length / 2
        probes = np.array(
            [[0.0, high_y, 0.4 * high_z], [0.0, 0.3 * low_y, high_z], [0.9 * middle, high_y, 0.6 * low_z]]
        )
    images = apply(symmetries(bar), probes)  # (g, p, 3)
    labels = label + np.repeat(np.arange(len(probes)), len(images))
    return Cloud(np.swapaxes(images, 0, 1).reshape(-1, 3), labels)


def _gathered(things: Sequence[tuple[Cloud, Placements]]) -> Cloud:
    """One cloud of many, each at its placement."""
    if not things:
        return Cloud(np.empty((0, 3)), np.empty(0, np.int64))
    labels = np.concatenate([cloud.labels for cloud, _ in things])
    points = np.concatenate([apply(at, cloud.points) for cloud, at in things])
    rows = np.argsort(labels, kind="stable")
    return Cloud(points[rows], labels[rows])


def _sorted_out(clouds: Sequence[Cloud]) -> list[tuple[Cloud, list[tuple[int, Placements]]]]:
    """The distinct ``clouds``, in order, and with each the index and motion of every one it lies on."""
    distinct: list[tuple[Cloud, list[tuple[int, Placements]]]] = []
    for i, cloud in enumerate(clouds):
        for first, alike in distinct:
            motion = match(first, cloud)
            if motion is not None:
                alike.append((i, motion))
                break
        else:
            distinct.append((cloud, [(i, IDENTITY)]))
    return [distinct[i] for i in order([cloud for cloud, _ in distinct])]
