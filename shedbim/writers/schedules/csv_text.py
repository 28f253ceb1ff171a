"""A schedule as CSV text: RFC 4180 with its CRLF line ends and quoting, for UTF-8.

A number is digits with a decimal point, never an exponent and never grouped. Headings carry the unit.

A spreadsheet takes a text for a formula when it begins with one of ``= + - @``, a tab or a line end. So a
text that begins with one of these, or with an apostrophe, gets one apostrophe in front. To read a text
back, take away one apostrophe from its front if there is one.
"""

from __future__ import annotations

import csv
import io

from shedbim.writers.schedules.table import Table

__all__ = ["csv_text", "guarded", "unguarded"]

#: The full-width signs are there because some spreadsheets read them as the plain ones.
_RISKY = tuple("=+-@\t\r\n'＝＋－＠")


def guarded(text: str) -> str:
    """Give a text that no spreadsheet takes for a formula; see the module for the rule."""
    return f"'{text}" if text.startswith(_RISKY) else text


def unguarded(text: str) -> str:
    """Give back what ``guarded`` was given."""
    return text.removeprefix("'")


def csv_text(table: Table) -> str:
    """Give the headings and the rows, without totals: a program that sums a column must not count twice."""
    out = io.StringIO()
    writer = csv.writer(out, lineterminator="\r\n")
    writer.writerow(column.heading for column in table.columns)
    for row in table.rows:
        writer.writerow(
            guarded(cell) if isinstance(cell, str) else column.shown(cell)
            for column, cell in zip(table.columns, row, strict=True)
        )
    return out.getvalue()
