"""A schedule as data: columns with name, unit and kind, rows, and the totals under them.

Glossary:
    cell      a text, a whole number, or a number with a fixed count of decimals
    heading   a column's name with its unit, as printed: ``mass total (kg)``
    product   a column whose cells are two other columns multiplied; a spreadsheet shows it as a formula
    total     a line under the rows that sums the columns marked ``summed`` over the rows it picks
"""

from __future__ import annotations

from dataclasses import dataclass
from math import isfinite

from shedbim.errors import ModelError

__all__ = ["Cell", "Column", "Table", "Total"]

Cell = str | int | float


@dataclass(frozen=True)
class Column:
    """One column of a schedule.

    Attributes:
        name: the trade's word, unique in its table.
        unit: empty for text and counts.
        decimals: None for text, 0 for counts, else the decimals a number is shown with.
        summed: whether totals add it up.
        product: names of the two columns it multiplies, or None.
    """

    name: str
    unit: str = ""
    decimals: int | None = None
    summed: bool = False
    product: tuple[str, str] | None = None

    @property
    def heading(self) -> str:
        """Name and unit as printed."""
        return f"{self.name} ({self.unit})" if self.unit else self.name

    @property
    def is_text(self) -> bool:
        """Whether its cells are texts."""
        return self.decimals is None

    def shown(self, cell: Cell) -> str:
        """Give the cell as plain text: a number with a decimal point and no exponent, never ``-0``."""
        if isinstance(cell, str):
            return cell
        text = f"{cell:.{self.decimals or 0}f}"
        return text.removeprefix("-") if not text.strip("-0.") else text


@dataclass(frozen=True)
class Total:
    """A line under the rows: its label, and the (column, text) of the rows it adds up; None for all rows."""

    label: str
    where: tuple[str, str] | None = None


@dataclass(frozen=True)
class Table:
    """A schedule: its title, columns, rows in order and totals.

    Raises:
        ModelError: when a row does not fit the columns, or holds a number that is not finite.
    """

    title: str
    columns: tuple[Column, ...]
    rows: tuple[tuple[Cell, ...], ...]
    totals: tuple[Total, ...] = ()

    def __post_init__(self) -> None:
        for row in self.rows:
            if len(row) != len(self.columns):
                raise ModelError(f"{self.title}: a row of {len(row)} cells under {len(self.columns)} columns")
            for column, cell in zip(self.columns, row, strict=True):
                if column.is_text != isinstance(cell, str) or not (isinstance(cell, str) or isfinite(cell)):
                    raise ModelError(f"{self.title}: {cell!r} cannot stand in column {column.name!r}")

    def index(self, name: str) -> int:
        """Give the place of a column by its name.

        Raises:
            KeyError: when there is none.
        """
        for place, column in enumerate(self.columns):
            if column.name == name:
                return place
        raise KeyError(name)

    def column(self, name: str) -> tuple[Cell, ...]:
        """Give all cells of a column by its name."""
        place = self.index(name)
        return tuple(row[place] for row in self.rows)

    def total(self, total: Total, name: str) -> float:
        """Give the sum of a column over the rows that a total picks."""
        place = self.index(name)
        picked = self.rows if total.where is None else self._picked(*total.where)
        return sum(float(row[place]) for row in picked)

    def _picked(self, name: str, value: str) -> tuple[tuple[Cell, ...], ...]:
        place = self.index(name)
        return tuple(row for row in self.rows if row[place] == value)
