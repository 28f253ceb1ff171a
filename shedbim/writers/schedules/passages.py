"""The schedule of passages: what passes through the panels of trusses, for whoever lays out ducts."""

from __future__ import annotations

from shedbim.checks.others.passages import passages as passages_of
from shedbim.limits import Criteria, criteria
from shedbim.model.shed import Shed
from shedbim.writers.schedules.table import Column, Table

__all__ = ["passages"]

_COLUMNS = (
    Column("lines"),
    Column("span"),
    Column("panel", decimals=0),
    Column("x of middle", "mm", 0),
    Column("level of middle", "mm", 0),
    Column("circle in opening", "mm", 0),
    Column("round duct", "mm", 0),
    Column("square duct", "mm", 0),
    Column("flat duct width", "mm", 0),
    Column("flat duct height", "mm", 0),
    Column("clearance", "mm", 0),
    Column("insulation", "mm", 0),
)


def passages(shed: Shed, held_against: Criteria | None = None) -> Table:
    """Give one row for each panel of each distinct truss: the largest round, square and flat duct, each for itself.

    Sizes are those of the bare duct, clearance and insulation taken off all round; the flat one is twice as wide as
    high. The middle is that of the round one: x from the first lettered line, the level above the floor.

    Args:
        shed: the building.
        held_against: whose ``clear_of_ducts`` and ``duct_insulation`` hold; those of the tables where not given.
    """
    rows = tuple(
        (
            ", ".join(each.lines),
            each.span,
            each.panel,
            each.x,
            each.z,
            each.opening,
            each.round,
            each.square,
            each.flat[0],
            each.flat[1],
            each.clearance,
            each.insulation,
        )
        for each in passages_of(shed, held_against or criteria())
    )
    return Table("Passages", _COLUMNS, rows)
