"""The schedules of plates and other fittings, of holes, and of what each shop assembly is made of."""

from __future__ import annotations

from collections import Counter

import numpy as np

from shedbim.model.bars import Bar
from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.plates import Plate
from shedbim.model.roles import Sort
from shedbim.model.shed import Shed
from shedbim.writers.schedules.table import Cell, Column, Table, Total
from shedbim.writers.schedules.tables import revision_column, stock_name

__all__ = ["finishes", "fittings", "holes", "part_lists"]


def fittings(shed: Shed) -> Table:
    """Give plates, cleats and other fittings by mark: one row a part; sizes are of the piece it is cut from."""
    columns = (
        Column("mark"),
        Column("role"),
        Column("quantity", decimals=0, summed=True),
        Column("stock"),
        Column("thickness", "mm", 1),
        Column("width", "mm", 1),
        Column("length", "mm", 1),
        Column("grade"),
        Column("holes", decimals=0),
        Column("mass each", "kg", 3),
        Column("mass total", "kg", 3, summed=True, product=("quantity", "mass each")),
        Column("surface total", "m2", 3, summed=True),
        Column("finish"),
        Column("assemblies"),
        *revision_column(shed),
    )
    issued = bool(revision_column(shed))
    rows: list[tuple[Cell, ...]] = []
    for part, count, marks in zip(
        shed.parts, shed.quantities.tolist(), shed.part_assembly_marks, strict=True
    ):
        if part.role.sort is not Sort.FITTING or isinstance(part.shape, BoltGroup):
            continue
        length, width = _size(part.shape)
        rows.append((
            part.mark, part.role.word, count, stock_name(part.shape), _thickness(part.shape), width, length,
            part.grade, len(part.shape.holes), part.shape.mass, count * part.shape.mass,
            count * part.shape.surface / 1e6, part.finish, ", ".join(marks),
            *([part.revision] if issued else []),
        ))  # fmt: skip
    return Table("Plates and fittings", columns, tuple(rows), (Total("Total"),))


def _size(shape: Bar | Plate) -> tuple[float, float]:
    """Length and width of what a fitting is cut from, mm; of a bar, the wider side of its section."""
    if isinstance(shape, Plate):
        return shape.size
    return shape.length, max(shape.section.width, shape.section.height)


def _thickness(shape: Bar | Plate) -> float:
    """Of a plate, or of the wall that a bar is bolted through, mm."""
    return shape.thickness if isinstance(shape, Plate) else shape.section.profile.thickness


def holes(shed: Shed) -> Table:
    """Give the holes by mark and size: one row for the equal holes of a part."""
    columns = (
        Column("mark"),
        Column("role"),
        Column("diameter", "mm", 1),
        Column("slot length", "mm", 1),
        Column("through", "mm", 1),
        Column("holes in one", decimals=0),
        Column("quantity", decimals=0),
        Column("holes in all", decimals=0, summed=True, product=("holes in one", "quantity")),
    )
    rows: list[tuple[Cell, ...]] = []
    for part, count in zip(shed.parts, shed.quantities.tolist(), strict=True):
        if isinstance(part.shape, BoltGroup):
            continue
        alike = Counter(
            (hole.diameter, hole.slot and hole.diameter + hole.slot, hole.thickness)
            for hole in part.shape.holes
        )
        rows += [
            (part.mark, part.role.word, diameter, float(slot), through, each, count, each * count)
            for (diameter, slot, through), each in sorted(alike.items())
        ]
    return Table("Holes", columns, tuple(rows), (Total("Total"),))


def part_lists(shed: Shed) -> Table:
    """Give what one of each shop assembly is made of: its parts by mark, with how many of each."""
    columns = (
        Column("assembly"),
        Column("kind"),
        Column("mark"),
        Column("role"),
        Column("stock"),
        Column("in one", decimals=0),
        Column("mass each", "kg", 3),
        Column("mass in one", "kg", 3, product=("in one", "mass each")),
    )
    assemblies = shed.assemblies
    _, first = np.unique(assemblies.type, return_index=True)
    leader = np.full(len(assemblies) + 1, -1)  # the last row is where -1, no assembly, leads
    leader[first] = first
    inside = np.flatnonzero(leader[shed.pieces.assembly] >= 0)
    held = np.column_stack([assemblies.type[shed.pieces.assembly[inside]], shed.pieces.part[inside]])
    pairs, counts = np.unique(held, axis=0, return_counts=True)
    rows: list[tuple[Cell, ...]] = []
    for (type_, index), count in zip(pairs.tolist(), counts.tolist(), strict=True):
        kind, part = shed.assembly_types[type_], shed.parts[index]
        if kind.made == "shop":
            mass = part.shape.mass
            rows.append((
                kind.mark, kind.kind, part.mark, part.role.word, stock_name(part.shape), count, mass,
                count * mass,
            ))  # fmt: skip
    return Table("Part lists", columns, tuple(rows))


def finishes(shed: Shed) -> Table:
    """Give what is to be coated: pieces, mass and surface of members and fittings by finish.

    Faces that bolts press together count in full, as do the insides of hollow sections not at all.
    """
    columns = (
        Column("finish"),
        Column("specification"),
        Column("pieces", decimals=0, summed=True),
        Column("mass total", "kg", 3, summed=True),
        Column("surface total", "m2", 3, summed=True),
    )
    meanings = dict(shed.finishes)
    amounts: dict[str, list[float]] = {}
    for part, count in zip(shed.parts, shed.quantities.tolist(), strict=True):
        if part.role.sort is not Sort.FASTENER:
            found = amounts.setdefault(part.finish, [0, 0.0, 0.0])
            found[0] += count
            found[1] += count * part.shape.mass
            found[2] += count * part.shape.surface / 1e6
    rows: list[tuple[Cell, ...]] = [
        (name, meanings.get(name, ""), int(pieces), mass, surface)
        for name, (pieces, mass, surface) in sorted(amounts.items())
    ]
    return Table("Finishes", columns, tuple(rows), (Total("Total"),))
