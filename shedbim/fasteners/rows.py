"""Rows of the published tables in ``data/``, read once; every row names its source in a column of its own."""

from __future__ import annotations

import csv
from functools import cache
from importlib.resources import files

__all__ = ["Row", "by_diameter", "listed", "rows_of"]

Row = dict[str, str]


@cache
def rows_of(table: str) -> tuple[Row, ...]:
    """Give the rows of ``data/<table>.csv``; not to be written to."""
    text = files("shedbim.fasteners").joinpath("data", f"{table}.csv").read_text(encoding="utf-8")
    return tuple(csv.DictReader(text.splitlines()))


@cache
def by_diameter(table: str) -> dict[float, dict[str, float]]:
    """Give the numbers of a table by nominal diameter, mm; columns that hold words are left out."""
    return {
        float(row["d"]): {name: float(text) for name, text in row.items() if name != "source"}
        for row in rows_of(table)
    }


def listed(table: str, diameter: float) -> dict[str, float]:
    """Give the row of a diameter; raises ValueError with the diameters there are."""
    rows = by_diameter(table)
    if diameter not in rows:
        sizes = ", ".join(f"M{size:g}" for size in rows)
        raise ValueError(f"no M{diameter:g} among {sizes}")
    return rows[diameter]
