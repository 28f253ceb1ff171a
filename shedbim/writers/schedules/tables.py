"""The schedules of a shed: members by mark, assemblies, totals by section, by role and of everything.

Each is a pure function of the shed. Lengths are saw lengths in mm, long point to long point; surfaces are
the outer ones without cut ends, m²; masses kg.
"""

from __future__ import annotations

from collections.abc import Callable, Hashable, Sequence
from typing import TypeVar

import numpy as np
from numpy.typing import NDArray

from shedbim.errors import ModelError
from shedbim.model.bars import Bar
from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.roles import Role, Sort
from shedbim.model.shapes import Shape
from shedbim.model.shed import Part, Shed
from shedbim.writers.schedules.table import Cell, Column, Table, Total

K = TypeVar("K", bound=Hashable)

__all__ = ["assemblies", "by_role", "by_section", "members", "revision_column", "stock_name", "totals"]

_AMOUNTS = (
    Column("parts", decimals=0, summed=True),
    Column("pieces", decimals=0, summed=True),
    Column("length total", "m", 3, summed=True),
    Column("mass total", "kg", 3, summed=True),
    Column("surface total", "m2", 3, summed=True),
)

#: How far, as a ratio, the masses of two assemblies with one mark may lie apart: the noise of adding up.
_SAME_MASS = 1e-9


def members(shed: Shed) -> Table:
    """Give the members by mark: one row a part, in the order of the parts; plates and bolts have their own lists."""
    columns = (
        Column("mark"),
        Column("role"),
        Column("quantity", decimals=0, summed=True),
        Column("section"),
        Column("grade"),
        Column("length", "mm", 1),
        Column("mass each", "kg", 3),
        Column("mass total", "kg", 3, summed=True, product=("quantity", "mass each")),
        Column("surface each", "m2", 4),
        Column("surface total", "m2", 3, summed=True, product=("quantity", "surface each")),
        Column("finish"),
        Column("assemblies"),
        *revision_column(shed),
    )
    rows: list[tuple[Cell, ...]] = []
    issued = bool(revision_column(shed))
    for part, count, marks in zip(
        shed.parts, shed.quantities.tolist(), shed.part_assembly_marks, strict=True
    ):
        if part.role.sort is not Sort.MEMBER:
            continue
        bar = part.bar
        surface = bar.surface / 1e6
        rows.append((
            part.mark, part.role.word, count, bar.section.designation, part.grade, bar.length,
            bar.mass, count * bar.mass, surface, count * surface, part.finish, ", ".join(marks),
            *([part.revision] if issued else []),
        ))  # fmt: skip
    return Table("Members", columns, tuple(rows), (Total("Total"),))


def assemblies(shed: Shed) -> Table:
    """Give the assemblies by mark: one row a type, an assembly holding the pieces of those inside it as well.

    Raises:
        ModelError: when two assemblies with one mark do not hold the same steel.
    """
    columns = (
        Column("mark"),
        Column("kind"),
        Column("made in"),
        Column("quantity", decimals=0, summed=True),
        Column("pieces in one", decimals=0),
        Column("mass each", "kg", 3),
        Column("mass total", "kg", 3, summed=True, product=("quantity", "mass each")),
        *revision_column(shed),
    )
    issued = bool(revision_column(shed))
    pieces, masses = _contents(shed)
    rows: list[tuple[Cell, ...]] = []
    for index, kind in enumerate(shed.assembly_types):
        of_kind = shed.assemblies.type == index
        held, mass = pieces[of_kind], masses[of_kind]
        if not len(held):
            continue
        if np.ptp(held) > 0 or np.ptp(mass) > _SAME_MASS * mass.max():
            raise ModelError(f"assemblies with the mark {kind.mark!r} do not hold the same steel")
        each, count = float(mass[0]), len(held)
        last = [kind.revision] if issued else []
        rows.append((kind.mark, kind.kind, kind.made, count, int(held[0]), each, count * each, *last))
    # Shop assemblies may stand inside site assemblies, so the two are never added to one another.
    places = (("shop", "Made in the shop"), ("site", "Put together on site"))
    made = {row[2] for row in rows}
    return Table(
        "Assemblies",
        columns,
        tuple(rows),
        tuple(Total(label, ("made in", place)) for place, label in places if place in made),
    )


def by_section(shed: Shed) -> Table:
    """Give totals by section and grade, plate thickness or bolt, in the order of their first part.

    What has no length weighs nothing per metre here.
    """
    columns = (Column("section"), Column("grade"), Column("mass per metre", "kg/m", 2), *_AMOUNTS)
    weights = {stock_name(part.shape): _mass_per_metre(part.shape) for part in shed.parts}
    groups = _grouped(shed, lambda part: (stock_name(part.shape), part.grade))
    rows = tuple(
        (name, grade, weights[name], *_amounts(shed, where)) for (name, grade), where in groups.items()
    )
    return Table("Sections", columns, rows, (Total("Total"),))


def by_role(shed: Shed) -> Table:
    """Give totals by role, in the order of the roles."""
    groups = _grouped(shed, lambda part: part.role)
    rows = tuple((role.word, *_amounts(shed, groups[role])) for role in Role if role in groups)
    return Table("Roles", (Column("role"), *_AMOUNTS), rows, (Total("Total"),))


def totals(shed: Shed) -> Table:
    """Give all totals in one table: by section, then by role, then of everything.

    The column ``total by`` says which a row is; never add up rows with different words there.
    """
    columns = (Column("total by"), Column("section"), Column("grade"), Column("role"), *_AMOUNTS)
    rows: list[tuple[Cell, ...]] = []
    rows += [("section", row[0], row[1], "", *row[3:]) for row in by_section(shed).rows]
    rows += [("role", "", "", *row) for row in by_role(shed).rows]
    rows.append(("everything", "", "", "", *_amounts(shed, range(len(shed.parts)))))
    return Table("Totals", columns, tuple(rows))


def revision_column(shed: Shed) -> tuple[Column, ...]:
    """Give the column of the revision in which each row last changed; none for a shed that was never issued."""
    return (Column("revision"),) if any(part.revision for part in shed.parts) else ()


def _grouped(shed: Shed, key: Callable[[Part], K]) -> dict[K, list[int]]:
    """Indices of the parts under each key, keys in the order of their first part."""
    groups: dict[K, list[int]] = {}
    for index, part in enumerate(shed.parts):
        groups.setdefault(key(part), []).append(index)
    return groups


def _amounts(shed: Shed, parts: Sequence[int]) -> tuple[int, int, float, float, float]:
    """Parts, pieces, length in m, mass in kg and surface in m² of all pieces of some parts, by index."""
    counts = shed.quantities.tolist()
    shapes = [(counts[index], shed.parts[index].shape) for index in parts]
    return (
        len(shapes),
        sum(count for count, _ in shapes),
        sum(count * shape.length for count, shape in shapes if isinstance(shape, Bar)) / 1e3,
        sum(count * shape.mass for count, shape in shapes),
        sum(count * shape.surface for count, shape in shapes) / 1e6,
    )


def stock_name(shape: Shape) -> str:
    """Give the name of what a shape is cut from, or of the fastener it is a group of."""
    if isinstance(shape, Bar):
        return shape.section.designation
    return shape.fastener.designation if isinstance(shape, BoltGroup) else f"PL {shape.thickness:g}"


def _mass_per_metre(shape: Shape) -> float:
    return shape.section.mass_per_metre if isinstance(shape, Bar) else 0.0


def _contents(shed: Shed) -> tuple[NDArray[np.int64], NDArray[np.float64]]:
    """Pieces (a,) and mass (a,) in kg of each assembly, those inside it included."""
    number = len(shed.assemblies)
    inside = shed.pieces.assembly >= 0
    owner = shed.pieces.assembly[inside]
    mass_of_part = np.array([part.shape.mass for part in shed.parts])
    pieces: NDArray[np.int64] = np.bincount(owner, minlength=number).astype(np.int64)
    weights = mass_of_part[shed.pieces.part[inside]]
    masses: NDArray[np.float64] = np.bincount(owner, weights=weights, minlength=number).astype(np.float64)
    # Parents come first, so from the last to the first every assembly is complete when it is handed up.
    for index in range(number - 1, -1, -1):
        parent = shed.assemblies.parent[index]
        if parent >= 0:
            pieces[parent] += pieces[index]
            masses[parent] += masses[index]
    return pieces, masses
