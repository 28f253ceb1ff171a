"""The schedule workbook: one sheet for each schedule, and one that says what it is and what it is not.

Totals and products are formulas with the values they give stored beside them; texts are never formulas.
"""

from __future__ import annotations

import io
from collections.abc import Callable, Iterable
from datetime import UTC

import xlsxwriter
from xlsxwriter.utility import xl_col_to_name
from xlsxwriter.workbook import Workbook
from xlsxwriter.worksheet import Worksheet

from shedbim.checks.finding import Finding
from shedbim.model.shed import ProjectInfo, Shed
from shedbim.revisions.change_groups import ChangeGroup
from shedbim.writers.imprint import Imprint
from shedbim.writers.schedules.about import about_lines
from shedbim.writers.schedules.changes import grouped_changes
from shedbim.writers.schedules.fasteners import anchors, bolts, welds
from shedbim.writers.schedules.findings import findings_table
from shedbim.writers.schedules.fittings import finishes, fittings, holes, part_lists
from shedbim.writers.schedules.formats import Formats
from shedbim.writers.schedules.table import Table, Total
from shedbim.writers.schedules.tables import assemblies, by_role, by_section, members

__all__ = ["SHEETS", "changes_bytes", "workbook_bytes"]

#: The sheets in order; a further schedule is one function and one row here.
SHEETS: tuple[Callable[[Shed], Table], ...] = (
    members,
    fittings,
    bolts,
    anchors,
    welds,
    holes,
    assemblies,
    part_lists,
    finishes,
    by_section,
    by_role,
)

_A4 = 9  # the paper number of ISO/IEC 29500-1, 18.3.1.63 (value from memory)
_WIDEST = 40  # characters; longer texts wrap
_LONGEST_NAME = 80  # characters of the project's name in a footer, which holds 255 in all (from memory)


def workbook_bytes(
    shed: Shed,
    imprint: Imprint,
    findings: Iterable[Finding] | None = None,
    groups: Iterable[ChangeGroup] | None = None,
) -> bytes:
    """Give the workbook as bytes; equal input gives equal bytes.

    Args:
        shed: the building.
        imprint: where the workbook comes from.
        findings: of the checks, on a sheet of their own; None where the shed was not checked.
        groups: of what changed since the last issue, on a sheet of their own; None where nothing was issued.
    """
    tables = [schedule(shed) for schedule in SHEETS]
    if findings is not None:
        tables.append(findings_table(shed, findings))
    if groups is not None:
        tables.append(grouped_changes(groups))
    return _bytes("Schedules", shed.project, tables, about_lines(shed, imprint), imprint)


def changes_bytes(
    project: ProjectInfo, tables: Iterable[Table], about: Iterable[tuple[str, str]], imprint: Imprint
) -> bytes:
    """Give the workbook of changes as bytes: a sheet for each table, and one that says what it is."""
    return _bytes("Changes", project, tables, about, imprint)


def _bytes(
    what: str,
    project: ProjectInfo,
    tables: Iterable[Table],
    about: Iterable[tuple[str, str]],
    imprint: Imprint,
) -> bytes:
    """A workbook of tables with a last sheet of names and texts."""
    sink = io.BytesIO()
    workbook = xlsxwriter.Workbook(
        sink, {"in_memory": True, "strings_to_formulas": False, "strings_to_urls": False}
    )
    workbook.set_properties({
        "title": f"{what} of {project.name}"[:255],
        "comments": f"Revision {project.revision}. Made by shedbim {imprint.version}."[:255],
        "created": imprint.timestamp.astimezone(UTC).replace(tzinfo=None),
    })  # fmt: skip
    formats = Formats(workbook)
    for table in tables:
        _write_table(workbook, table, formats, _footer(project))
    _write_about(workbook, about, formats, _footer(project))
    workbook.close()
    return sink.getvalue()


def _write_table(workbook: Workbook, table: Table, formats: Formats, footer: str) -> None:
    """Headings, rows, and totals below one empty line, so that sorting and filtering leave them alone."""
    sheet = workbook.add_worksheet(table.title)
    for place, column in enumerate(table.columns):
        sheet.write_string(0, place, _pretty(column.heading), formats.heading(column))
        sheet.set_column(place, place, _width(table, place))
    for line, row in enumerate(table.rows, start=1):
        for place, (column, cell) in enumerate(zip(table.columns, row, strict=True)):
            style = formats.cell(column)
            if isinstance(cell, str):
                sheet.write_string(line, place, cell, style)
            elif column.product is None:
                sheet.write_number(line, place, cell, style)
            else:
                sheet.write_formula(line, place, _product(table, column.product, line), style, cell)
    last = max(len(table.rows), 1)
    for line, total in enumerate(table.totals, start=last + 2):
        _write_total(sheet, line, total, table, formats)
    sheet.autofilter(0, 0, last, len(table.columns) - 1)
    sheet.freeze_panes(1, 1)
    _set_up_page(sheet, table.title, footer)
    sheet.repeat_rows(0)


def _product(table: Table, names: tuple[str, str], line: int) -> str:
    """The formula that multiplies the cells of two columns in one line (from 0)."""
    return "=" + "*".join(f"{xl_col_to_name(table.index(name))}{line + 1}" for name in names)


def _write_total(sheet: Worksheet, line: int, total: Total, table: Table, formats: Formats) -> None:
    """Write one total: of the rows the filter shows, or of those with the wanted text in one column."""
    last = max(len(table.rows), 1) + 1
    for place, column in enumerate(table.columns):
        style = formats.total(column)
        if place == 0:
            sheet.write_string(line, 0, total.label, style)
        elif column.summed:
            letters = xl_col_to_name(place)
            cells = f"{letters}2:{letters}{last}"
            formula = f"=SUBTOTAL(109,{cells})"
            if total.where is not None:
                picked = xl_col_to_name(table.index(total.where[0]))
                formula = f'=SUMIF({picked}2:{picked}{last},"{total.where[1]}",{cells})'
            sheet.write_formula(line, place, formula, style, table.total(total, column.name))
        else:
            sheet.write_blank(line, place, None, style)


def _write_about(workbook: Workbook, about: Iterable[tuple[str, str]], formats: Formats, footer: str) -> None:
    sheet = workbook.add_worksheet("About")
    sheet.set_column(0, 0, 30)
    sheet.set_column(1, 1, 90)
    for line, (name, text) in enumerate(about):
        sheet.write_string(line, 0, name, formats.label)
        sheet.write_string(line, 1, text, formats.wrapped)
    _set_up_page(sheet, "About", footer)


def _set_up_page(sheet: Worksheet, title: str, footer: str) -> None:
    sheet.set_landscape()
    sheet.set_paper(_A4)
    sheet.fit_to_pages(1, 0)
    sheet.set_margins(left=0.5, right=0.5, top=0.8, bottom=0.8)
    sheet.set_header(f"&L&B{title}")
    sheet.set_footer(footer)


def _footer(project: ProjectInfo) -> str:
    """Project left, page in the middle, revision right; a user's own ``&`` is doubled: it starts a code."""
    name = f"{project.number} {project.name}".strip()[:_LONGEST_NAME].replace("&", "&&")
    revision = project.revision[:10].replace("&", "&&")
    return f"&L{name}&CPage &P of &N&RRevision {revision}"


def _width(table: Table, place: int) -> float:
    """Width of a column in characters, so that its cells and the longest word of its heading fit."""
    column = table.columns[place]
    cells = [column.shown(row[place]) for row in table.rows]
    grouping = 0 if column.is_text else 3
    longest = max((len(text) + grouping for text in cells), default=0)
    return min(max(longest, *(len(word) for word in column.heading.split())) + 4, _WIDEST)


def _pretty(heading: str) -> str:
    return heading.replace("m2", "m²")
