"""Parts of a building and types of its assemblies, each with its mark.

A mark is the prefix of the role, or of the kind of assembly, and a number from 1. Numbers follow from what
the things are and never from the order in which they came: parts as ``part_order`` says, assemblies by their
parts, then by where these lie.
"""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.errors import ModelError
from shedbim.geometry.placements import IDENTITY, Placements, apply, compose
from shedbim.model.bars import Bar
from shedbim.model.bolt_congruence import bolt_likeness
from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.clouds import Cloud, match, order
from shedbim.model.feature_congruence import bar_likeness
from shedbim.model.likeness import Likeness
from shedbim.model.part_clouds import PROBES, part_cloud
from shedbim.model.part_order import Distinct, sequence
from shedbim.model.plate_congruence import plate_likeness
from shedbim.model.plates import Plate
from shedbim.model.roles import Role
from shedbim.model.shapes import Shape
from shedbim.model.shed import AssemblyType, Part

__all__ = [
    "AssemblyGrouping",
    "AssemblyTemplate",
    "PartGrouping",
    "Stock",
    "group_assemblies",
    "group_parts",
]

#: The letters that marks of assemblies begin with; no role has them. Those named after the role of their main
#: piece have its letters after an A.
_PREFIXES = {**{role.word: f"A{role.prefix}" for role in Role}, "truss": "TR", "frame": "F"}

#: Kind, types of children, parts, place of making.
_Content = tuple[str, tuple[int, ...], tuple[int, ...], str]


@dataclass(frozen=True)
class Stock:
    """One thing as the expansion made it, before it is known which are equal."""

    role: Role
    shape: Shape
    grade: str
    finish: str


@dataclass(frozen=True, eq=False)
class PartGrouping:
    """Which part each thing of the stock is.

    Attributes:
        parts: sorted by role, then by number.
        part_of: (s,) int, index into ``parts``.
        motion: (s, 3, 4) float, placement of the part's frame in that of the thing, mm: a piece lies at the
            placement of its thing composed with this.
        flipped: (s,) bool, True where the part's start is the end of a bar of the stock.
    """

    parts: tuple[Part, ...]
    part_of: NDArray[np.int64]
    motion: Placements
    flipped: NDArray[np.bool_]


@dataclass(frozen=True, eq=False)
class AssemblyTemplate:
    """One assembly as the expansion made it, in a frame of its own.

    Attributes:
        kind: ``truss``, ``frame`` or the word of its main piece's role.
        made: ``shop`` or ``site``.
        members: index of a thing of the stock and the placement (3, 4) of its frame.
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
    """Sort stock into parts and give each part its mark.

    Things of one role, grade and finish, and bars of one section, are one part if a rigid motion, never a mirror,
    lays one on the other within ``SAME_LENGTH``, holes and all; see ``feature_congruence``, ``plate_congruence``
    and ``bolt_congruence``. The bar of a part is as long as the shortest of them.
    """
    # Most joints of a kind give the same things to the last bit: these are looked at once.
    row = {each: i for i, each in enumerate(dict.fromkeys(stock))}
    once = _grouped(list(row))
    rows = np.array([row[each] for each in stock], np.int64)
    return PartGrouping(once.parts, once.part_of[rows], once.motion[rows], once.flipped[rows])


def _grouped(stock: Sequence[Stock]) -> PartGrouping:
    """The parts of stock no two entries of which are equal."""
    lots: dict[object, list[int]] = defaultdict(list)
    for i, each in enumerate(stock):
        lots[each.shape.section if isinstance(each.shape, Bar) else type(each.shape)].append(i)
    uses = [(each.role.prefix, each.grade, each.finish) for each in stock]
    numbers = {use: i for i, use in enumerate(sorted(set(uses)))}
    found: list[Distinct] = []
    loose, motion = np.empty(len(stock), np.int64), np.tile(IDENTITY, (len(stock), 1, 1))
    flipped = np.zeros(len(stock), bool)
    for rows in lots.values():
        same = _likeness([stock[i].shape for i in rows], [numbers[uses[i]] for i in rows])
        loose[rows] = same.shape_of + len(found)
        motion[rows], flipped[rows] = same.motion, same.flipped
        first = dict(zip(same.shape_of[::-1].tolist(), rows[::-1], strict=True))
        for i, (shape, signature) in enumerate(zip(same.shapes, same.signatures, strict=True)):
            like = stock[first[i]]
            found.append(Distinct(like.role, shape, like.grade, like.finish, signature))
    numbered = sequence(found)
    counts: dict[Role, int] = defaultdict(int)
    parts = []
    for i in numbered:
        one = found[i]
        counts[one.role] += 1
        mark = f"{one.role.prefix}{counts[one.role]}"
        parts.append(Part(mark, one.role, one.shape, one.grade, one.finish))
    place = np.empty(len(found), np.int64)
    place[numbered] = np.arange(len(found))
    return PartGrouping(tuple(parts), place[loose], motion, flipped)


def _likeness(shapes: Sequence[Shape], classes: Sequence[int]) -> Likeness:
    """Sort shapes of one kind, and bars of one section, into distinct ones."""
    bars = [each for each in shapes if isinstance(each, Bar)]
    plates = [each for each in shapes if isinstance(each, Plate)]
    groups = [each for each in shapes if isinstance(each, BoltGroup)]
    if bars:
        return bar_likeness(bars, classes)
    return plate_likeness(plates, classes) if plates else bolt_likeness(groups, classes)


def group_assemblies(templates: Sequence[AssemblyTemplate], grouping: PartGrouping) -> AssemblyGrouping:
    """Sort assembly templates into types and give each type its mark.

    Two are one type if kind, place of making, parts and types of children are the same, and a rigid motion,
    never a mirror, carries each piece to within ``SAME_PLACE`` of its like, whatever symmetry of the
    part itself lies between them.

    Args:
        templates: t templates, children before what holds them.
        grouping: of the stock that the members name.

    Raises:
        ModelError: when a child comes after its parent, or a kind has no prefix.
    """
    used = {int(grouping.part_of[s]) for each in templates for s, _ in each.members}
    part_clouds = {i: part_cloud(grouping.parts[i].shape, PROBES * i) for i in sorted(used)}
    type_clouds: list[Cloud] = []  # of each type, with the labels it has as a child
    next_label = PROBES * len(grouping.parts)
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
                    (part_clouds[int(grouping.part_of[s])], compose(at, grouping.motion[s]))
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
