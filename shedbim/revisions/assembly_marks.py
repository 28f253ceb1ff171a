"""The marks of types of assemblies after an issue, by the rule that parts follow too."""

from __future__ import annotations

from dataclasses import replace
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from shedbim.geometry.placements import apply
from shedbim.model.shed import AssemblyType, Part, Shed
from shedbim.revisions.marking import marked, number_of
from shedbim.revisions.register import Register
from shedbim.tolerance import SAME_PLACE

__all__ = ["assembly_types_under"]

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]


def assembly_types_under(shed: Shed, register: Register) -> tuple[AssemblyType, ...]:
    """Give the types of assemblies of a shed with their marks and revisions.

    Args:
        shed: with the names of its pieces and assemblies, and the marks and revisions of its parts.
        register: of its last issue.
    """
    kinds = shed.assembly_types
    if not kinds:
        return kinds
    marks = sorted({each.mark for each in register.assemblies})
    number = {mark: row for row, mark in enumerate(marks)}
    row = {each.name: i for i, each in enumerate(register.assemblies)}
    met = np.array([row.get(name, -1) for name in shed.assemblies.names], np.int64)
    stands = np.flatnonzero(met >= 0)
    was = np.array([number[each.mark] for each in register.assemblies], np.int64)[met[stands]]
    pairs = np.column_stack([was, shed.assemblies.type[stands]])
    found = marked(
        marks,
        _equal_to(shed, register, met, pairs, stands),
        pairs,
        [_prefix(kind.mark) for kind in kinds],
        {mark.mark for mark in register.marks},
    )
    revision = {mark.mark: mark.revision for mark in register.marks}
    return tuple(
        replace(
            kind,
            mark=each.mark,
            revision=shed.project.revision if each.changed else revision[each.mark],
        )
        for kind, each in zip(kinds, found, strict=True)
    )


def _prefix(mark: str) -> str:
    return mark.removesuffix(str(number_of(mark)))


def _equal_to(shed: Shed, register: Register, met: Ints, pairs: Ints, stands: Ints) -> list[int]:
    """For each type the row of the issued mark that names the same thing, -1 for none.

    One assembly that was issued under the mark and still stands is looked at: it is the same when it holds the same
    pieces, each of a part that did not change, as far from one another as they were.
    """
    result = [-1] * len(shed.assembly_types)
    content = _Contents.now(shed)
    before = _Contents.issued(register)
    seen = set()
    for (mark, kind), assembly in zip(pairs.tolist(), stands.tolist(), strict=True):
        if (mark, kind) in seen or result[kind] >= 0:
            continue
        seen.add((mark, kind))
        if content.of(assembly).same_as(before.of(int(met[assembly]))):
            result[kind] = mark
    return result


class _Content:
    """What one assembly holds: names of the pieces, in order, their marks with revision, and their middles."""

    def __init__(self, names: list[str], marks: list[tuple[str, str]], middles: Floats) -> None:
        order = sorted(range(len(names)), key=names.__getitem__)
        self.names = [names[i] for i in order]
        self.marks = [marks[i] for i in order]
        self.middles = middles[order]

    def same_as(self, other: _Content) -> bool:
        """Whether it is made as the other is."""
        if self.names != other.names or self.marks != other.marks:
            return False
        spans = [
            np.linalg.norm(each.middles[:, None] - each.middles[None, :4], axis=2) for each in (self, other)
        ]
        return bool(np.abs(spans[0] - spans[1]).max(initial=0.0) <= SAME_PLACE)


class _Contents:
    """What each assembly of a state holds, those of its children too."""

    def __init__(
        self,
        owner: Ints,
        parent: Ints,
        names: tuple[str, ...],
        parts: tuple[Part, ...],
        part: Ints,
        placement: Floats,
    ) -> None:
        self._names, self._parts, self._part = names, parts, part
        middle = np.array([np.mean(each.shape.box, axis=0) for each in parts]).reshape(-1, 3)[part]
        self._middles = apply(placement, middle[:, None])[:, 0]
        self._children = [np.flatnonzero(parent == i) for i in range(len(parent))]
        order = np.argsort(owner, kind="stable")
        edges = np.searchsorted(owner[order], np.arange(len(parent) + 1))
        self._rows = [order[a:b] for a, b in pairwise(edges)]

    @staticmethod
    def now(shed: Shed) -> _Contents:
        """The contents of a shed."""
        pieces, groups = shed.pieces, shed.assemblies
        return _Contents(
            pieces.assembly, groups.parent, pieces.names, shed.parts, pieces.part, pieces.placement
        )

    @staticmethod
    def issued(register: Register) -> _Contents:
        """The contents of the last issue."""
        last = register.last
        parent = np.array([each.parent for each in register.assemblies], np.int64)
        return _Contents(register.assembly, parent, register.names, register.parts, last.part, last.placement)

    def of(self, assembly: int) -> _Content:
        """What one assembly holds."""
        rows = self._below(assembly)
        parts = [self._parts[int(each)] for each in self._part[rows]]
        return _Content(
            [self._names[row] for row in rows.tolist()],
            [(part.mark, part.revision) for part in parts],
            self._middles[rows],
        )

    def _below(self, assembly: int) -> Ints:
        inner = [self._below(int(child)) for child in self._children[assembly]]
        return np.concatenate([self._rows[assembly], *inner]).astype(np.int64)
