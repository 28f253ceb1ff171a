"""A shed under its register: pieces under the names, parts and assemblies under the marks they were issued with."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from shedbim.geometry.placements import apply
from shedbim.model.marks import Stock, group_parts
from shedbim.model.roles import Role, Sort
from shedbim.model.shed import Part, Shed
from shedbim.revisions.assembly_marks import assembly_types_under
from shedbim.revisions.marking import marked, number_of
from shedbim.revisions.naming import Known, names_of
from shedbim.revisions.register import Register

__all__ = ["under_register"]

Ints = NDArray[np.int64]

_ROLES = {role: number for number, role in enumerate(Role)}


def under_register(shed: Shed, register: Register) -> Shed:
    """Give the shed with the names and marks that its register asks for.

    Parts and types of assemblies carry the revision in which they last changed: that of the shed where they differ from
    what was issued.
    """
    equal = _equal_to(shed.parts, register.parts)
    names = _names(shed, register, equal)
    marked_shed = _with_part_marks(shed, register, names, equal)
    pieces = replace(marked_shed.pieces, issued=names)
    piece_name = dict(zip(shed.pieces.keys, names, strict=True))
    assemblies = replace(
        shed.assemblies, issued=tuple(_assembly_name(key, piece_name) for key in shed.assemblies.keys)
    )
    whole = replace(marked_shed, pieces=pieces, assemblies=assemblies)
    return replace(whole, assembly_types=assembly_types_under(whole, register))


def _names(shed: Shed, register: Register, equal: list[int]) -> tuple[str, ...]:
    """The names of all pieces."""
    last, grid = register.last, shed.grid
    reach = max(*np.diff(grid.x), *np.diff(grid.y), *np.diff(last.grid.x), *np.diff(last.grid.y))
    pieces, first_new = shed.pieces, len(last.parts)
    numbers = np.array([row if row >= 0 else first_new + i for i, row in enumerate(equal)], np.int64)
    issued = _known(last.keys, last.parts, last.part, last.part, last.placement)
    now = _known(pieces.keys, shed.parts, pieces.part, numbers[pieces.part], pieces.placement)
    return names_of(issued, register.names, now, float(reach))


def _known(
    keys: tuple[str, ...], parts: tuple[Part, ...], part: Ints, number: Ints, placement: NDArray[np.float64]
) -> Known:
    """What is known of the pieces of a state."""
    roles = np.array([_ROLES[each.role] for each in parts])[part]
    members = np.array([each.role.sort is Sort.MEMBER for each in parts], bool)[part]
    middle = np.array([np.mean(each.shape.box, axis=0) for each in parts])[part]
    return Known(keys, roles, number, apply(placement, middle[:, None])[:, 0], members)


def _assembly_name(key: str, piece_name: dict[str, str]) -> str:
    """The name of an assembly: a lot that is named after its main piece goes by the name of that."""
    main, slash, end = key.rpartition("/")
    return f"{piece_name[main]}/{end}" if slash and main in piece_name else key


def _with_part_marks(shed: Shed, register: Register, names: tuple[str, ...], equal: list[int]) -> Shed:
    """The shed with the marks of its parts, which are put in order by role and number."""
    last = register.last
    row = {name: i for i, name in enumerate(register.names)}
    met = np.array([row.get(name, -1) for name in names], np.int64)
    stands = np.flatnonzero(met >= 0)
    used = {mark.mark for mark in register.marks}
    found = marked(
        [part.mark for part in last.parts],
        equal,
        np.column_stack([last.part[met[stands]], shed.pieces.part[stands]]),
        [part.role.prefix for part in shed.parts],
        used,
    )
    revision = {part.mark: part.revision for part in last.parts}
    parts = [
        replace(
            part,
            mark=each.mark,
            revision=shed.project.revision if each.changed else revision[each.mark],
        )
        for part, each in zip(shed.parts, found, strict=True)
    ]
    order = sorted(
        range(len(parts)), key=lambda i: (_ROLES[parts[i].role], number_of(parts[i].mark), parts[i].mark)
    )
    place = np.empty(len(parts), np.int64)
    place[order] = np.arange(len(parts))
    pieces = replace(shed.pieces, part=place[shed.pieces.part])
    return replace(shed, parts=tuple(parts[i] for i in order), pieces=pieces)


def _equal_to(parts: tuple[Part, ...], issued: tuple[Part, ...]) -> list[int]:
    """For each part the row of the issued part that it equals, -1 for none."""
    stock = [Stock(part.role, part.shape, part.grade, part.finish) for part in (*issued, *parts)]
    sort = group_parts(stock).part_of.tolist()
    first: dict[int, int] = {}
    for row, each in enumerate(sort[: len(issued)]):
        first.setdefault(each, row)
    return [first.get(each, -1) for each in sort[len(issued) :]]
