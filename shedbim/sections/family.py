"""What a family of sections is, and the reading of its table of sizes.

Glossary:
    family    sections of one kind from one standard, told apart by the numbers after the family's name
    size      those numbers, for example ``(457, 191, 67)`` of ``UB 457x191x67``
    entry     one listed size with the dimensions that its shape is built from
"""

from __future__ import annotations

import csv
from collections.abc import Callable, Sequence
from dataclasses import dataclass, field
from importlib.resources import files

from shedbim.sections.section import Profile

__all__ = ["Entry", "Family", "Size", "read_rows", "sized", "spelled", "table_of"]

Size = tuple[float, ...]


@dataclass(frozen=True)
class Entry:
    """One listed size.

    Attributes:
        size: the numbers of the designation.
        dimensions: what ``Family.shape`` takes, mm.
        source: where the dimensions come from.
        other: other sizes under which the same section is known.
    """

    size: Size
    dimensions: Size
    source: str
    other: tuple[Size, ...] = ()


@dataclass(frozen=True)
class Family:
    """One family of the catalogue.

    Attributes:
        name: what its designations begin with.
        standard: the standard that gives its dimensions.
        description: what it is, in a few words.
        pattern: how a designation is written.
        example: one designation.
        shape: gives the profile from the dimensions (mm); raises ValueError with the reason where they are
            impossible.
        entries: gives all listed sizes; None for a family made from dimensions.
        aliases: other names accepted for ``name``.
        square: True where ``100x5`` may stand for ``100x100x5``.
        stroke: (n, k): sizes of n numbers have an oblique stroke before number k, counted from 0: ``200x75/68x20x2``.
    """

    name: str
    standard: str
    description: str
    pattern: str
    example: str
    shape: Callable[[Size], Profile] = field(repr=False, compare=False)
    entries: Callable[[], Sequence[Entry]] | None = field(default=None, repr=False, compare=False)
    aliases: tuple[str, ...] = ()
    square: bool = False
    stroke: tuple[int, int] | None = None

    @property
    def listed(self) -> bool:
        """Whether only the sizes of a table exist, rather than any sensible dimensions."""
        return self.entries is not None

    def designation(self, size: Size) -> str:
        """Give the designation of a size: ``IPE 300``, ``CHS 114.3x5``."""
        return f"{self.name} {spelled(size, self.strokes(size))}"

    def strokes(self, size: Size) -> Size:
        """Give the places of the numbers that have an oblique stroke before them."""
        return self.stroke[1:] if self.stroke is not None and len(size) == self.stroke[0] else ()


def sized(text: str) -> Size:
    """Give the numbers of ``457x191x67``."""
    return tuple(float(number) for number in text.split("x"))


def spelled(size: Size, strokes: Size = ()) -> str:
    """Give ``457x191x67`` of its numbers, without trailing zeros; ``/`` for ``x`` before those at ``strokes``."""
    parts = [f"{number:.10g}" for number in size]
    return parts[0] + "".join(("/" if k in strokes else "x") + parts[k] for k in range(1, len(parts)))


def read_rows(name: str) -> list[dict[str, str]]:
    """Give the rows of ``data/<name>.csv`` by column name."""
    text = (files("shedbim.sections") / "data" / f"{name}.csv").read_text(encoding="utf-8")
    return list(csv.DictReader(text.splitlines()))


def table_of(name: str, columns: Sequence[str], *, unit: float = 1.0) -> Callable[[], list[Entry]]:
    """Give a reader of ``data/<name>.csv``.

    Its columns are ``size``, ``other`` (further sizes for the same section), ``source`` and those named,
    which hold the dimensions in ``unit`` mm.
    """

    def entries() -> list[Entry]:
        return [
            Entry(
                sized(row["size"]),
                tuple(float(row[column]) * unit for column in columns),
                row["source"],
                tuple(sized(other) for other in row["other"].split()),
            )
            for row in read_rows(name)
        ]

    return entries
