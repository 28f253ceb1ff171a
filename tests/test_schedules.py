"""The schedules: what they count, and what a spreadsheet makes of them."""

from __future__ import annotations

import csv
import io
import re
import zipfile
from dataclasses import replace
from datetime import UTC, datetime, timedelta, timezone

import numpy as np
import openpyxl
import pytest
from hypothesis import given
from hypothesis import strategies as st
from specimens_schedule import FLAT, IPE_300, NASTY, PARTS, PITCH, QUANTITIES, SHS_100, shed

from shedbim.errors import ModelError
from shedbim.model.roles import Role
from shedbim.model.shed import AssemblyType, ProjectInfo
from shedbim.writers.imprint import CAUTIONS, Imprint
from shedbim.writers.schedules import tables
from shedbim.writers.schedules.csv_text import csv_text, guarded, unguarded
from shedbim.writers.schedules.table import Column, Table, Total
from shedbim.writers.schedules.workbook import SHEETS, workbook_bytes

STAMP = Imprint(datetime(2024, 5, 17, 9, 30, tzinfo=UTC), "IFC4", "ab" * 32)


def rows_of(text: str) -> list[dict[str, str]]:
    return list(csv.DictReader(io.StringIO(text, newline="")))


def sheets(book: bytes, *, values: bool) -> openpyxl.Workbook:
    return openpyxl.load_workbook(io.BytesIO(book), data_only=values)


# --- tables ---------------------------------------------------------------------------------------


def test_members_say_mark_quantity_section_grade_length_mass_surface_finish_and_assembly():
    table = tables.members(shed())
    by_mark = {row[0]: dict(zip((c.name for c in table.columns), row, strict=True)) for row in table.rows}
    assert list(by_mark) == ["C1", "TC1", "D1", "T1"]
    assert tuple(table.column("quantity")) == QUANTITIES
    column = by_mark["C1"]
    # EN 10365: IPE 300 has 42.2 kg/m and (EN 10365 tables) 1.16 m²/m, both rounded as published.
    assert column["mass each"] == pytest.approx(42.2 * 6.18725, rel=2e-3)
    assert column["surface each"] == pytest.approx(1.16 * 6.18725, rel=2e-3)
    assert column["mass total"] == 4 * column["mass each"]
    assert (column["role"], column["section"], column["grade"], column["finish"], column["assemblies"]) == (
        "column", "IPE 300", "S355", "painted", "",
    )  # fmt: skip
    assert by_mark["TC1"]["assemblies"] == by_mark["D1"]["assemblies"] == "A1"
    assert by_mark["T1"]["assemblies"] == ""
    assert by_mark["T1"]["mass each"] == pytest.approx(60 * 8 * 905.4 * 7850e-9, rel=1e-9)
    assert by_mark["T1"]["surface total"] == pytest.approx(3 * 2 * (60 + 8) * 905.4e-6, rel=1e-9)


def test_lengths_are_saw_lengths_long_point_to_long_point():
    # The chord is 100 deep and cut at a slope: its axis is shorter than its long side by 50·tan(pitch), its
    # mass follows the axis, and the schedule gives the long side.
    table = tables.members(shed())
    length, mass = (table.column(name)[1] for name in ("length", "mass each"))
    assert length == 4020.0
    assert mass == pytest.approx(SHS_100.mass_per_metre * (4020.0 - 50 * np.tan(PITCH)) / 1000, rel=1e-6)


def test_a_part_in_two_assemblies_names_both():
    specimen = shed()
    kinds = (*specimen.assembly_types, AssemblyType("A2", "truss", "shop"))
    assembled = replace(specimen.assemblies, type=np.array([0, 0, 1, 2]))
    table = tables.members(shed(assembly_types=kinds, assemblies=assembled))
    assert table.column("assemblies") == ("", "A1, A2", "A1, A2", "")


def test_assemblies_hold_what_stands_inside_them():
    table = tables.assemblies(shed())
    column, chord, web, _ = (part.bar.mass for part in PARTS)
    truss = chord + 3 * web
    assert [row[:5] for row in table.rows] == [("F1", "frame", "site", 2, 6), ("A1", "truss", "shop", 2, 4)]
    assert table.column("mass each") == pytest.approx((2 * column + truss, truss), rel=1e-12)
    # A truss is in its frame already: the two are never added.
    assert {total.label: table.total(total, "mass total") for total in table.totals} == pytest.approx(
        {"Made in the shop": 2 * truss, "Put together on site": 2 * (2 * column + truss)}, rel=1e-12
    )


def test_assemblies_hold_what_stands_two_levels_inside_them():
    specimen = shed()
    assembled = replace(
        specimen.assemblies,
        keys=("hall", *specimen.assemblies.keys),
        type=np.array([2, 0, 0, 1, 1]),
        placement=specimen.assemblies.placement[[0, 0, 1, 2, 3]],
        parent=np.array([-1, 0, 0, 1, 2]),
    )
    owner = specimen.pieces.assembly
    pieces = replace(specimen.pieces, assembly=np.where(owner < 0, owner, owner + 1))
    kinds = (*specimen.assembly_types, AssemblyType("H1", "hall", "site"))
    rows = tables.assemblies(shed(assemblies=assembled, assembly_types=kinds, pieces=pieces)).rows
    held = specimen.mass - 3 * PARTS[3].bar.mass  # all but the loose ties
    assert [(row[0], row[3], row[4]) for row in rows] == [("F1", 2, 6), ("A1", 2, 4), ("H1", 1, 12)]
    assert rows[2][5] == pytest.approx(held, rel=1e-12)


def test_assemblies_with_one_mark_and_different_steel_are_a_fault_of_the_program():
    specimen = shed()
    part = specimen.pieces.part.copy()
    part[3] = 3  # one diagonal of the first truss becomes a tie: same count, other mass
    with pytest.raises(ModelError, match="'F1'"):
        tables.assemblies(shed(pieces=replace(specimen.pieces, part=part)))


def test_a_shed_without_assemblies_has_an_empty_table():
    specimen = shed()
    empty = replace(
        specimen.assemblies,
        keys=(),
        type=np.zeros(0, int),
        placement=np.zeros((0, 3, 4)),
        parent=np.zeros(0, int),
    )
    loose = replace(specimen.pieces, assembly=np.full(15, -1))
    table = tables.assemblies(shed(assembly_types=(), assemblies=empty, pieces=loose))
    assert table.rows == ()
    assert table.totals == ()


def test_totals_by_section_and_by_role_each_come_to_the_whole():
    specimen = shed()
    whole = specimen.mass
    sections, roles = tables.by_section(specimen), tables.by_role(specimen)
    assert [row[:2] for row in sections.rows] == [
        ("IPE 300", "S355"), ("SHS 100x100x5", "S355"), ("SHS 100x100x5", "S275"), ("FL 60x8", "S355"),
    ]  # fmt: skip
    assert sections.column("mass per metre") == pytest.approx(
        [each.mass_per_metre for each in (IPE_300, SHS_100, SHS_100, FLAT)]
    )
    assert [row[0] for row in roles.rows] == [Role.COLUMN.word, "top chord", "diagonal", "bottom chord tie"]
    for table in (sections, roles, tables.members(specimen)):
        assert table.total(Total(""), "mass total") == pytest.approx(whole, rel=1e-12)
    for table in (sections, roles):
        assert table.total(Total(""), "pieces") == len(specimen.pieces) == 15
        assert table.total(Total(""), "parts") == 4
    assert roles.column("length total") == pytest.approx((24.749, 8.04, 10.269, 2.7162))


def test_all_totals_in_one_table_say_what_they_are_of():
    specimen = shed()
    table = tables.totals(specimen)
    for word in ("section", "role", "everything"):
        assert table.total(Total("", ("total by", word)), "mass total") == pytest.approx(
            specimen.mass, rel=1e-12
        )
    assert table.rows[-1][:4] == ("everything", "", "", "")
    assert [row[4:] for row in table.rows if row[0] == "role"] == [
        row[1:] for row in tables.by_role(specimen).rows
    ]


@pytest.mark.parametrize("cell", [float("nan"), float("inf"), "text"])
def test_a_table_refuses_what_is_no_number(cell):
    with pytest.raises(ModelError, match="cannot stand"):
        Table("T", (Column("mass", "kg", 1),), ((cell,),))


def test_a_table_refuses_a_short_row():
    with pytest.raises(ModelError, match="1 cells under 2"):
        Table("T", (Column("mark"), Column("mass", "kg", 1)), (("C1",),))


@pytest.mark.parametrize(
    ("decimals", "value", "text"),
    [
        (3, 1e-7, "0.000"),
        (3, -1e-7, "0.000"),
        (1, 1e9 + 0.25, "1000000000.2"),
        (0, 12, "12"),
        (2, -1.5, "-1.50"),
    ],
)
def test_a_number_is_shown_with_a_point_and_without_exponent_or_minus_zero(decimals, value, text):
    assert Column("x", decimals=decimals).shown(value) == text


# --- CSV ------------------------------------------------------------------------------------------


def test_csv_is_rfc_4180_with_units_in_the_headings():
    text = csv_text(tables.members(shed()))
    assert text.count("\r\n") == 5
    assert "\n" not in text.replace("\r\n", "")
    assert text.splitlines()[0] == (
        "mark,role,quantity,section,grade,length (mm),mass each (kg),mass total (kg),"
        "surface each (m2),surface total (m2),finish,assemblies"
    )
    first = rows_of(text)[0]
    assert first["length (mm)"] == "6187.2"  # half to even, as 6187.25 is
    assert re.fullmatch(r"\d+\.\d{3}", first["mass total (kg)"])
    assert float(first["mass total (kg)"]) == pytest.approx(4 * PARTS[0].bar.mass, abs=5e-4)


def test_csv_holds_rows_only_so_that_a_column_adds_up():
    specimen = shed()
    rows = rows_of(csv_text(tables.members(specimen)))
    assert sum(float(row["mass total (kg)"]) for row in rows) == pytest.approx(specimen.mass, abs=3e-3)


@pytest.mark.parametrize("start", ["=", "+", "-", "@", "\t", "\r", "\n", "'", "＝", "＋", "－", "＠"])
def test_no_text_of_a_csv_begins_like_a_formula(start):
    bite = start + 'cmd|"/C"!A1,x'
    table = Table("T", (Column("name"), Column("mass", "kg", 1)), ((bite, -1.5),))
    cells = next(csv.reader(io.StringIO(csv_text(table).split("\r\n", 1)[1], newline="")))
    assert cells[0] == "'" + bite
    assert unguarded(cells[0]) == bite
    assert cells[1] == "-1.5"  # a number stays a number


@given(
    st.lists(st.text(st.characters(blacklist_categories=("Cs",), blacklist_characters="\x00")), min_size=1)
)
def test_every_text_comes_back_from_a_csv(texts):
    table = Table("T", tuple(Column(f"c{i}") for i, _ in enumerate(texts)), (tuple(texts),))
    back = list(csv.reader(io.StringIO(csv_text(table), newline="")))
    assert [unguarded(cell) for cell in back[1]] == texts or texts == [""]
    assert all(guarded(cell)[:1] not in "=+-@" or not cell for cell in texts)


# --- workbook -------------------------------------------------------------------------------------


def test_workbook_has_the_sheets_and_the_rows_of_the_tables():
    specimen = shed()
    book = sheets(workbook_bytes(specimen, STAMP), values=True)
    assert book.sheetnames == [
        "Members", "Plates and fittings", "Bolts", "Anchors", "Welds", "Holes", "Assemblies", "Part lists",
        "Finishes", "Sections", "Roles", "About",
    ]  # fmt: skip
    for name, make in zip(book.sheetnames[:-1], SHEETS, strict=True):
        table, sheet = make(specimen), book[name]
        headings = [cell.value for cell in sheet[1]]
        assert headings == [column.heading.replace("m2", "m²") for column in table.columns]
        for line, row in enumerate(table.rows, start=2):
            got = [cell.value for cell in sheet[line]]
            assert got == [pytest.approx(cell) if isinstance(cell, float) else cell for cell in row]


def test_products_and_totals_are_formulas_that_keep_their_values():
    specimen = shed()
    data = workbook_bytes(specimen, STAMP)
    formulas, values = sheets(data, values=False)["Members"], sheets(data, values=True)["Members"]
    assert formulas["H2"].value == "=C2*G2"
    assert values["H2"].value == pytest.approx(4 * PARTS[0].bar.mass)
    # Rows 2 to 5, one empty line, then the total: sorting and filtering leave it alone.
    assert [cell.value for cell in formulas[6]] == [None] * 12
    assert formulas["A7"].value == "Total"
    assert formulas["H7"].value == "=SUBTOTAL(109,H2:H5)"
    assert values["H7"].value == pytest.approx(specimen.mass)
    assert values["C7"].value == 15
    frames = sheets(data, values=False)["Assemblies"]
    assert frames["G5"].value == '=SUMIF(C2:C3,"shop",G2:G3)'
    assert sheets(data, values=True)["Assemblies"]["G5"].value == pytest.approx(
        2 * (PARTS[1].bar.mass + 3 * PARTS[2].bar.mass)
    )


def test_every_sheet_prints_well():
    book = sheets(workbook_bytes(shed(), STAMP), values=False)
    for sheet in book:
        assert sheet.page_setup.orientation == "landscape"
        assert sheet.page_setup.fitToWidth in (None, 1)  # 1 is what the file format takes for left out
        assert sheet.page_setup.fitToHeight == 0
        assert sheet.sheet_properties.pageSetUpPr.fitToPage
        assert sheet.oddFooter.center.text == "Page &P of &N"
        assert sheet.oddFooter.right.text == "Revision P01"
        if sheet.title != "About":
            assert sheet.freeze_panes == "B2"
            assert sheet.auto_filter.ref.startswith("A1:")
            assert sheet.print_title_rows == "$1:$1"
    assert book["Members"]["G2"].number_format == "#,##0.000"
    assert book["Members"]["C2"].number_format == "#,##0"


def test_no_text_of_a_user_becomes_a_formula_or_a_footer_code():
    data = workbook_bytes(shed(), STAMP)
    about = sheets(data, values=False)["About"]
    assert about["B1"].data_type == "s"
    assert about["B2"].value == "+2417"
    with zipfile.ZipFile(io.BytesIO(data)) as archive:
        sheet = archive.read("xl/worksheets/sheet1.xml").decode()
        last = archive.read(f"xl/worksheets/sheet{len(SHEETS) + 1}.xml").decode()
        strings = archive.read("xl/sharedStrings.xml").decode()
    assert "<f>" not in last
    assert "HYPERLINK" not in "".join(re.findall("<f>.*?</f>", sheet))
    assert NASTY.split('"')[0] in strings.replace("&quot;", '"')
    assert "&amp;&amp;P" in sheet  # the user's own &P, doubled


def test_a_long_name_fits_the_footer_and_the_file():
    long = replace(shed().project, name="&" * 40000)
    data = workbook_bytes(shed(project=long), STAMP)
    book = sheets(data, values=True)
    assert len(book["About"]["B1"].value) == 32767
    with zipfile.ZipFile(io.BytesIO(data)) as archive:
        footer = re.search("<oddFooter>(.*?)</oddFooter>", archive.read("xl/worksheets/sheet1.xml").decode())
    assert footer is not None
    assert len(footer[1].replace("&amp;", "&")) <= 255


def test_the_last_sheet_says_what_this_is_and_is_not():
    sheet = sheets(workbook_bytes(shed(), STAMP), values=True)["About"]
    lines = [(str(row[0].value), row[1].value) for row in sheet.iter_rows()]
    told = dict(lines)
    assert told["Revision"] == "P01"
    assert told["Description, SHA-256"] == "ab" * 32
    assert told["Time stamp"] == "2024-05-17T09:30:00Z"
    assert told["Note"] == "The ridge is assumed level."
    assert told["Default: frames.columns.grade"] == "S355"
    assert told["Default: purlins.gap"] == "6 mm"
    assert [text for name, text in lines if name == "Caution"] == list(CAUTIONS)
    cautions = " ".join(CAUTIONS)
    assert "user's own choice" in cautions
    assert "licensed engineer" in cautions
    assert "Plates, bolts and welds are laid out by rule" in cautions
    assert "no resistance is computed" in cautions
    assert told["Steel"].startswith(f"{shed().mass / 1000:.3f} t")


def test_equal_input_gives_equal_bytes_and_the_time_stamp_is_an_input():
    first = workbook_bytes(shed(), STAMP)
    assert workbook_bytes(shed(), STAMP) == first
    elsewhere = replace(STAMP, timestamp=STAMP.timestamp.astimezone(timezone(timedelta(hours=5, minutes=30))))
    assert workbook_bytes(shed(), elsewhere) == first
    assert workbook_bytes(shed(), replace(STAMP, timestamp=datetime(2024, 5, 18, tzinfo=UTC))) != first


def test_a_workbook_without_assemblies_opens():
    specimen = shed()
    empty = replace(
        specimen.assemblies,
        keys=(),
        type=np.zeros(0, int),
        placement=np.zeros((0, 3, 4)),
        parent=np.zeros(0, int),
    )
    loose = replace(specimen.pieces, assembly=np.full(15, -1))
    info = ProjectInfo("", "", "", "")
    book = workbook_bytes(shed(assembly_types=(), assemblies=empty, pieces=loose, project=info), Imprint())
    assert sheets(book, values=True)["Assemblies"].max_row == 1
