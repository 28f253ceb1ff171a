"""Findings in the other outputs: as data, in the workbook, in the view, in the summary; and who writes what."""

from __future__ import annotations

import io
import json
from dataclasses import replace
from datetime import UTC, datetime
from math import pi

import cast
import openpyxl
import pytest
from found import CHANGE, CODE_OF, HOSTILE, found, hits_at, hostile, some

import shedbim
from shedbim.checks.figures import UNITS, figure, in_unit
from shedbim.checks.finding import Finding, Place
from shedbim.checks.whereabouts import whereabouts
from shedbim.errors import OutputError
from shedbim.limits import CODES, Severity, Waiver
from shedbim.model.identity import piece_ids
from shedbim.model.levels import at_level
from shedbim.model.other_trades import OtherElement
from shedbim.model.roles import Role
from shedbim.model.shed import Grid
from shedbim.outputs import OUTPUTS, chosen
from shedbim.writers.finding_words import COUNTED, counts, few, finding_ids
from shedbim.writers.findings import findings_data, findings_text
from shedbim.writers.handover import Handover
from shedbim.writers.imprint import CAUTIONS, Imprint
from shedbim.writers.schedules.findings import findings_table
from shedbim.writers.schedules.workbook import workbook_bytes
from shedbim.writers.summary import summary
from shedbim.writers.view.found import shown_findings

GRID = Grid(("A", "C"), (0.0, 12_500.0), ("1", "2", "X"), (0.0, 5200.0, 11_000.0))
STAMP = Imprint(datetime(2024, 5, 17, 9, 30, tzinfo=UTC), digest="cd" * 32)
WAIVERS = (Waiver(CODE_OF[Severity.NOTE], "*", "Known."),)
TELL_OF_FINDINGS = {"findings", "bcf-2.1", "bcf-3.0"}


@pytest.mark.parametrize(
    ("point", "words"),
    [
        ((0.0, 0.0, 0.0), "on 1, on A, at floor level"),
        ((12_400.0, 5000.0, 7940.0), "on 2, on C, 7.9 m above floor"),
        ((6000.0, 5200.0 + 350.0, 60.0), "on 2, between A and C, at floor level"),
        ((6000.0, 5200.0 + 351.0, 76.0), "between 2 and X, between A and C, 0.1 m above floor"),
        ((-840.0, -1250.0, -300.0), "1.2 m before 1, 0.8 m before A, 0.3 m below floor"),
        ((13_000.0, 20_000.0, 1000.0), "9.0 m beyond X, 0.5 m beyond C, 1.0 m above floor"),
    ],
)
def test_a_point_in_words_of_the_grid(point: tuple[float, float, float], words: str) -> None:
    assert whereabouts(GRID, point) == words


def test_the_nearer_of_two_lines_close_together_is_the_one_a_point_is_on() -> None:
    close = Grid(("A", "B"), (0.0, 500.0), ("1", "2"), (0.0, 400.0))
    assert whereabouts(close, (260.0, 190.0, 0.0)) == "on 1, on B, at floor level"


def test_values_in_units_are_those_that_are_shown() -> None:
    assert in_unit(pi / 6, "deg") == pytest.approx(30.0)
    assert in_unit(12_345.6, "m") == pytest.approx(12.3456)
    assert in_unit(2500.0, "cm³") == 2.5
    assert in_unit(0.25, "%") == 25.0
    for unit, (_, decimals) in UNITS.items():
        shown = figure(87.6543, unit).removesuffix(unit).replace(",", "")
        assert float(shown) == pytest.approx(in_unit(87.6543, unit), abs=0.51 * 10.0**-decimals)


def test_few_words_are_listed_and_the_rest_counted() -> None:
    assert few(["a", "b"], 2) == "a, b"
    assert few([str(each) for each in range(1300)], 1) == "0 and 1,299 more"


def test_findings_as_data_hold_all_that_is_known() -> None:
    shed = cast.shed_of("flat")
    findings = some(shed, WAIVERS)
    told = json.loads(findings_text(Handover(shed, STAMP, findings)))
    assert told["time_stamp"] == "2024-05-17T09:30:00Z"
    assert told["description_sha256"] == "cd" * 32
    assert told["project"]["name"] == "Flat Kiosk"
    assert told["cautions"] == list(CAUTIONS)
    assert told["counts"] == {"error": 1, "warning": 1, "note": 0, "waived": 1}
    assert [each["severity"] for each in told["findings"]] == ["error", "warning", "note"]
    assert [each["id"] for each in told["findings"]] == [
        str(each) for each in finding_ids(shed.project.id, findings)
    ]
    first = told["findings"][0]
    code = CODES[CODE_OF[Severity.ERROR]]
    assert (first["code"], first["area"], first["about"]) == (code.name, code.area, "column")
    assert (first["text"], first["change"]) == ("Two pieces share 2.0 cm³.", CHANGE)
    assert (first["value"], first["limit"], first["unit"]) == (2.003, 1.0, "cm³")
    assert (first["source"], first["waived"]) == ("EN 1090-2", None)
    assert told["findings"][2]["waived"] == "Known."
    worst = first["places"][0]
    assert worst["where"].startswith("on 2, on B, ")
    assert [place["value"] for place in first["places"]] == [2.003, 2.002, 2.001, 2.0]
    row = shed.pieces.keys.index("2/column/B")
    assert worst["pieces"] == [{
        "key": "2/column/B",
        "mark": shed.parts[int(shed.pieces.part[row])].mark,
        "global_id": piece_ids(shed.project.id, ["2/column/B"])[0],
    }]  # fmt: skip
    assert worst["others"] == []


def test_elements_of_others_are_told_as_their_models_name_them() -> None:
    shed = cast.shed_of("flat")
    theirs = OtherElement("2O2Fr$t4X7Zf8NOew3FLOH", "IfcPipeSegment", HOSTILE[:20], True, "pipes.ifc")
    place = Place((0.0, 0.0, 3000.0), (0,), 40.0, (theirs,))
    finding = Finding(CODES["other-too-near"], theirs.guid, "Near.", CHANGE, (place,), 40.0, 50.0, "mm")
    (told,) = findings_data(Handover(shed, findings=(finding,)))["findings"]
    assert told["places"][0]["others"] == [
        {
            "global_id": theirs.guid,
            "class": "IfcPipeSegment",
            "name": HOSTILE[:20],
            "file": "pipes.ifc",
        }
    ]
    whole = replace(finding, places=(Place((0.0, 0.0, 0.0), ()),))
    (told,) = findings_data(Handover(shed, findings=(whole,)))["findings"]
    assert (told["places"][0]["where"], told["places"][0]["pieces"]) == ("as a whole", [])


def test_counts_are_of_open_findings_and_of_waived_ones() -> None:
    shed = cast.shed_of("flat")
    assert counts(()) == dict.fromkeys(COUNTED, 0)
    assert counts(some(shed, WAIVERS)) == {"error": 1, "warning": 1, "note": 0, "waived": 1}
    assert summary(shed, STAMP, some(shed))["findings"] == {"error": 1, "warning": 1, "note": 1, "waived": 0}
    assert summary(shed, STAMP)["findings"] is None


def test_the_workbook_has_a_sheet_of_findings() -> None:
    shed = cast.shed_of("flat")
    findings = some(shed, WAIVERS)
    book = openpyxl.load_workbook(io.BytesIO(workbook_bytes(shed, STAMP, findings)))
    assert book.sheetnames[-2:] == ["Findings", "About"]
    heading, *rows = [[cell.value for cell in row] for row in book["Findings"].iter_rows()]
    assert heading == [
        "severity", "code", "finding", "places", "where it is worst", "marks", "value", "limit", "source",
        "what to change", "waived",
    ]  # fmt: skip
    assert rows[0][:4] == ["error", CODE_OF[Severity.ERROR], "Two pieces share 2.0 cm³.", 4]
    assert rows[0][4].startswith("on 2, on B, ")
    assert rows[0][6:] == ["2.0 cm³", "1.0 cm³", "EN 1090-2", CHANGE, ""]
    assert rows[2][-1] == "Known."
    assert len(rows) == 3
    assert "Findings" not in openpyxl.load_workbook(io.BytesIO(workbook_bytes(shed, STAMP))).sheetnames
    empty = openpyxl.load_workbook(io.BytesIO(workbook_bytes(shed, STAMP, ())))["Findings"]
    assert [cell.value for cell in next(empty.iter_rows())] == heading


def test_hostile_text_is_text_in_a_cell_and_in_data() -> None:
    shed = hostile(cast.shed_of("flat"))
    bites = HOSTILE.replace("\ud800", "")
    waiver = Waiver(CODE_OF[Severity.ERROR], "*", bites)
    hits = hits_at(shed, CODE_OF[Severity.ERROR], Role.COLUMN, says=bites, change=bites)
    findings = found(shed, hits, (waiver,))
    row = findings_table(shed, findings).rows[0]
    assert (row[2], row[9], row[10]) == (bites, bites, bites)
    plain = cast.shed_of("flat")
    book = openpyxl.load_workbook(io.BytesIO(workbook_bytes(plain, STAMP, findings)))
    cell = book["Findings"].cell(2, 3)
    assert cell.data_type == "s"
    assert str(cell.value).startswith("=1+1 <b>")
    told = findings_data(Handover(plain, findings=findings))["findings"][0]
    assert told["waived"] == bites


def test_the_view_lists_a_line_for_each_finding() -> None:
    shed = cast.shed_of("flat")
    findings = some(shed, WAIVERS)
    lines = shown_findings(shed, findings, shed)
    assert [line.severity for line in lines] == ["error", "warning", "note"]
    assert lines[0].text.startswith("Two pieces share 2.0 cm³. On 2, on B, ")
    assert lines[0].text.endswith(" above floor; 4 places.")
    assert lines[0].point == findings[0].places[0].point
    assert lines[0].pieces == findings[0].pieces
    assert lines[2].text.startswith("Waived (Known.): Two pieces share ")
    waived = some(shed, (Waiver(CODE_OF[Severity.ERROR], "*", "Known."),))
    assert shown_findings(shed, waived, shed)[0].severity == "note"


def test_the_view_selects_what_it_shows_of_a_finding() -> None:
    shed = cast.shed_of("flat")
    outline = at_level(shed, "outline")
    findings = some(shed)
    for line, finding in zip(shown_findings(shed, findings, outline), findings, strict=True):
        keys = [outline.pieces.keys[piece] for piece in line.pieces]
        there = [shed.pieces.keys[piece] for piece in finding.pieces]
        # Base plates are not shown at this level; columns and purlins have other numbers there.
        assert keys == ([] if finding.about == Role.BASE_PLATE.word else there)


def test_the_page_holds_the_findings() -> None:
    shed = cast.shed_of("flat")
    sinks = [io.BytesIO(), io.BytesIO()]
    (view,) = chosen(["view"])
    view.write(Handover(shed, findings=some(shed)), sinks[0])
    view.write(Handover(shed), sinks[1])
    assert len(sinks[0].getvalue()) > len(sinks[1].getvalue())


def test_without_a_check_all_else_is_written(tmp_path) -> None:
    shed = cast.shed_of("flat")
    plain = ["members", "summary"]
    assert [row.name for row in chosen((), checked=False)] == [
        row.name for row in OUTPUTS if row.name not in TELL_OF_FINDINGS
    ]
    assert {row.name for row in OUTPUTS if row.checked} == TELL_OF_FINDINGS
    assert list(shedbim.write_outputs(shed, tmp_path, plain)) == plain
    with pytest.raises(OutputError, match=r"cannot write bcf-2\.1, bcf-3\.0: the shed was not checked"):
        shedbim.write_outputs(shed, tmp_path, ["bcf"])
    assert sorted(path.name for path in tmp_path.iterdir()) == ["members.csv", "summary.json"]


def test_with_a_check_findings_are_written(tmp_path) -> None:
    shed = cast.shed_of("flat")
    names = ["findings", "bcf", "workbook", "summary"]
    files = shedbim.write_outputs(shed, tmp_path, names, findings=list(some(shed)))
    assert [path.name for path in files.values()] == [
        "schedule.xlsx", "findings.json", "findings.bcf", "findings-3.0.bcf", "summary.json",
    ]  # fmt: skip
    told = json.loads(files["summary"].read_text(encoding="utf-8"))
    assert told["findings"]["error"] == 1
    assert len(json.loads(files["findings"].read_text(encoding="utf-8"))["findings"]) == 3


def test_models_and_the_view_show_the_level_and_nothing_else_does() -> None:
    shed = cast.shed_of("flat")
    levels = [
        Handover(
            shed, Imprint(level=level), found(shed, hits_at(shed, CODE_OF[Severity.ERROR], Role.SAG_BAR)[:1])
        )
        for level in ("outline", "fabrication")
    ]
    differ = set()
    for row in OUTPUTS:
        sinks = [io.BytesIO(), io.BytesIO()]
        for sink, handover in zip(sinks, levels, strict=True):
            row.write(handover, sink)
        if sinks[0].getvalue() != sinks[1].getvalue():
            differ.add(row.name)
    assert differ == {"model", "mesh", "view"}
