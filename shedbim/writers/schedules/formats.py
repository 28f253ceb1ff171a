"""The looks of the workbook's cells: one format for each kind of column and place."""

from __future__ import annotations

from typing import Any

from xlsxwriter.format import Format
from xlsxwriter.workbook import Workbook

from shedbim.writers.schedules.table import Column

__all__ = ["Formats"]


class Formats:
    """The formats of one workbook, each made once."""

    def __init__(self, workbook: Workbook) -> None:
        self._workbook = workbook
        self._made: dict[tuple[tuple[str, Any], ...], Format] = {}
        self.label = self._give(bold=True, valign="top", text_wrap=True)
        self.wrapped = self._give(valign="top", text_wrap=True)

    def heading(self, column: Column) -> Format:
        """Give the look of a column's heading."""
        align = "left" if column.is_text else "right"
        return self._give(bold=True, text_wrap=True, valign="top", align=align, bg_color="#E3E7EA", bottom=1)

    def cell(self, column: Column) -> Format:
        """Give the look of a row's cell: texts wrap, numbers show the column's decimals."""
        if column.is_text:
            return self.wrapped
        return self._give(valign="top", num_format=_number(column))

    def total(self, column: Column) -> Format:
        """Give the look of a total's cell."""
        if column.is_text:
            return self._give(bold=True, top=1)
        return self._give(bold=True, top=1, num_format=_number(column))

    def _give(self, **properties: Any) -> Format:
        key = tuple(sorted(properties.items()))
        if key not in self._made:
            self._made[key] = self._workbook.add_format(properties)
        return self._made[key]


def _number(column: Column) -> str:
    """Give the number format: grouped thousands and the column's decimals."""
    return "#,##0" + ("." + "0" * column.decimals if column.decimals else "")
