"""The schedules of changes: in groups, quantities before and after, by frame, bay and mark, and piece by piece."""

from __future__ import annotations

from collections.abc import Iterable

from shedbim.revisions.amounts import amounts
from shedbim.revisions.change_groups import ChangeGroup
from shedbim.revisions.changes import Changes
from shedbim.revisions.rolling import rolled
from shedbim.revisions.states import State, Thing
from shedbim.writers.schedules.table import Cell, Column, Table, Total

__all__ = ["change_tables", "grouped_changes"]

_PIECES = (
    Column("key"),
    Column("change"),
    Column("mark before"),
    Column("mark after"),
    Column("role"),
    Column("stock before"),
    Column("stock after"),
    Column("length before", "mm", 1),
    Column("length after", "mm", 1),
    Column("mass before", "kg", 3, summed=True),
    Column("mass after", "kg", 3, summed=True),
    Column("moved x", "mm", 1),
    Column("moved y", "mm", 1),
    Column("moved z", "mm", 1),
    Column("GlobalId"),
)
_NOTHING = Thing("", "", "", "", "", 0.0, 0.0, 0.0, 0, "")


def change_tables(changes: Changes, groups: Iterable[ChangeGroup]) -> tuple[Table, ...]:
    """Give all schedules of changes, the shortest first."""
    return (
        grouped_changes(groups),
        _quantities(changes),
        _rolls(changes, "Frames and bays", ("frame", "bay")),
        _rolls(changes, "Marks", ("mark",)),
        _pieces(changes),
    )


def grouped_changes(groups: Iterable[ChangeGroup]) -> Table:
    """Give one row for pieces of a role that changed alike, in the order of the groups."""
    columns = (
        Column("change"),
        Column("role"),
        Column("pieces", decimals=0, summed=True),
        Column("mass", "kg", 1),
        Column("what"),
    )
    rows: list[tuple[Cell, ...]] = [
        (each.kind.word, each.role, len(each.rows), each.mass, each.says) for each in groups
    ]
    return Table("Changes", columns, tuple(rows), (Total("Total"),))


def _quantities(changes: Changes) -> Table:
    """Quantities before and after; those that one of the states does not tell are left out."""
    columns = (
        Column("quantity"),
        Column("unit"),
        Column("before", decimals=3),
        Column("after", decimals=3),
        Column("difference", decimals=3),
    )
    rows: list[tuple[Cell, ...]] = [
        (one.name, one.unit, one.value, other.value, other.value - one.value)
        for one, other in zip(amounts(changes.before), amounts(changes.after), strict=True)
        if one.value is not None and other.value is not None
    ]
    return Table("Quantities", columns, tuple(rows))


def _rolls(changes: Changes, title: str, ways: Iterable[str]) -> Table:
    columns = (
        Column("of"),
        Column("name"),
        Column("pieces changed", decimals=0),
        Column("pieces before", decimals=0),
        Column("pieces after", decimals=0),
        Column("mass before", "kg", 3),
        Column("mass after", "kg", 3),
        Column("changes"),
    )
    rows: list[tuple[Cell, ...]] = [
        (
            way,
            roll.name,
            roll.changed,
            *roll.pieces,
            *roll.mass,
            ", ".join(f"{count} {kind.word}" for kind, count in roll.counts.items()),
        )
        for way in ways
        for roll in rolled(changes, way)
    ]
    return Table(title, columns, tuple(rows))


def _pieces(changes: Changes) -> Table:
    rows: list[tuple[Cell, ...]] = []
    for row in changes.changed.tolist():
        was = _thing(changes.before, int(changes.old[row]))
        now = _thing(changes.after, int(changes.new[row]))
        x, y, z = (float(step) for step in changes.moved[row])
        rows.append((
            changes.key(row), ", ".join(changes.words(row)), was.mark, now.mark, now.role or was.role, was.stock,
            now.stock, was.length, now.length, was.mass, now.mass, x, y, z, changes.id(row),
        ))  # fmt: skip
    return Table("Pieces", _PIECES, tuple(rows), (Total("Total"),))


def _thing(state: State, piece: int) -> Thing:
    return state.things[int(state.thing[piece])] if piece >= 0 else _NOTHING
