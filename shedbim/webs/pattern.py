"""What the table of web patterns holds in a row, and the table itself from its rows."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Mapping
from dataclasses import dataclass
from types import MappingProxyType

from shedbim.errors import ModelError
from shedbim.webs.topology import Topology, TrussLine

__all__ = ["Pattern", "pattern_table"]


@dataclass(frozen=True)
class Pattern:
    """One web pattern.

    Attributes:
        name: what the user writes in a description.
        description: one sentence that tells it from the others, for people.
        topology: gives the nodes and webs for a truss line.
        needs_even_panels: a straight truss (no ridge) of this pattern must have an even number of
            panels; with a ridge any number will do.
    """

    name: str
    description: str
    topology: Callable[[TrussLine], Topology]
    needs_even_panels: bool = False


def pattern_table(rows: Iterable[Pattern]) -> Mapping[str, Pattern]:
    """Give the read-only table name -> pattern, in the order of the rows.

    Raises:
        ModelError: a name comes twice.
    """
    table: dict[str, Pattern] = {}
    for row in rows:
        if row.name in table:
            raise ModelError(f"the web pattern {row.name!r} is listed twice")
        table[row.name] = row
    return MappingProxyType(table)
