"""Tables on standard output: folded to fit a terminal, whole lines when written to a file."""

from __future__ import annotations

import sys
from collections.abc import Iterable, Sequence

from rich.box import SIMPLE_HEAD
from rich.console import Console
from rich.table import Table

from shedbim.cli.speech import printable

__all__ = ["show_table"]

_WHOLE_LINES = 2000  # characters: more than any row needs


def show_table(
    headings: Sequence[str], rows: Iterable[Sequence[str]], *, numbers: Sequence[int] = ()
) -> None:
    """Print texts in columns; the columns at the places in ``numbers`` stand to the right."""
    table = Table(box=SIMPLE_HEAD, pad_edge=False)
    for place, heading in enumerate(headings):
        right = place in numbers
        table.add_column(heading, justify="right" if right else "left", no_wrap=right, overflow="fold")
    for row in rows:
        table.add_row(*(printable(cell) for cell in row))
    width = None if sys.stdout.isatty() else _WHOLE_LINES
    Console(file=sys.stdout, width=width, markup=False, highlight=False, emoji=False).print(table)
