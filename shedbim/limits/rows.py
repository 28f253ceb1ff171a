"""Rows of the tables in ``data/``; every limit names its source in a column of its own."""

from __future__ import annotations

import csv
from functools import cache
from importlib.resources import files

__all__ = ["rows_of"]


@cache
def rows_of(table: str) -> tuple[dict[str, str], ...]:
    """Give the rows of ``data/<table>.csv``; not to be written to."""
    text = files("shedbim.limits").joinpath("data", f"{table}.csv").read_text(encoding="utf-8")
    return tuple(csv.DictReader(text.splitlines()))
