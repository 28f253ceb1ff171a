"""The table of checks, and what comes between a check and a finding: grouping, waivers, figures, criteria."""

from __future__ import annotations

import importlib
from collections.abc import Callable, Iterator
from dataclasses import replace
from math import pi
from pathlib import Path

import pytest
from cast import PRESETS, described, shed_of, text_of

from shedbim.checks.checking import check
from shedbim.checks.figures import figure
from shedbim.checks.finding import Finding, Hit
from shedbim.checks.grouping import findings_of
from shedbim.checks.subject import Subject
from shedbim.checks.table import CHECKS
from shedbim.description import read_text
from shedbim.errors import DescriptionError
from shedbim.limits import CODES, LIMITS, REGIONS, Severity, Waiver, criteria
from shedbim.model.shed import Shed

TESTS = Path(__file__).parent


def spoiled() -> Iterator[tuple[str, str, Callable[..., object]]]:
    """Module, code and maker of every spoiled shed of all tests of checks."""
    for path in sorted(TESTS.glob("test_check_*.py")):
        module = importlib.import_module(path.stem)
        for code, make in getattr(module, "SPOILED", {}).items():
            yield path.stem, code, make


def test_every_code_has_a_check_that_gives_it_and_a_shed_that_is_spoiled_for_it() -> None:
    given = [code for row in CHECKS for code in row.codes]
    assert sorted(given) == sorted(set(given)), "a code is given by two checks"
    assert set(given) == set(CODES)
    assert {code for _, code, _ in spoiled()} == set(CODES)


def test_every_limit_is_asked_for_by_a_check() -> None:
    code = "\n".join(p.read_text() for p in (TESTS.parent / "shedbim").rglob("*.py"))
    tables = "\n".join(
        p.read_text()
        for p in (TESTS.parent / "shedbim").rglob("*.csv")
        if p.name not in ("limits.csv", "regions.csv")
    )
    assert [name for name in LIMITS if f'"{name}"' not in code and name not in tables] == []


@pytest.mark.parametrize("limit", LIMITS.values(), ids=LIMITS)
def test_every_limit_has_a_source_and_lies_within_its_own_bounds(limit) -> None:
    low, high = limit.read(limit.low), limit.read(limit.high)
    for text, source in [(limit.default, limit.source), *limit.regions.values()]:
        assert low <= limit.read(text) <= high
        assert source
    # A region that has a row has one for every region, or the list of fields would be silent on some.
    assert not limit.regions or set(limit.regions) == set(REGIONS)


@pytest.mark.parametrize("name", sorted(PRESETS))
def test_presets_have_no_severe_finding(name: str) -> None:
    found = check(shed_of(name), described(name).checks.criteria)
    assert [(each.code.name, each.says) for each in found if each.severe] == []


def hit(shed: Shed, *keys: str, value: float = 1.0, code: str = "overlap", about: str = "") -> Hit:
    pieces = tuple(shed.pieces.keys.index(key) for key in keys)
    return Hit(
        code, pieces, (0.0, 0.0, 0.0), "they share {value} of {limit}", "x", value, 1e3, "cm³", "s", about
    )


def grouped(shed: Shed, hits: list[Hit], *waivers: Waiver) -> list[Finding]:
    return findings_of(Subject(shed, criteria(waivers=waivers)), hits)


def test_hits_that_repeat_in_frames_and_courses_are_one_finding_with_the_worst_first() -> None:
    shed = shed_of("barn")
    hits = [
        hit(shed, "2/column/A", "1-2/side rail/A/1", value=2e3),
        hit(shed, "3/column/A", "2-3/side rail/A/3", value=7.25e3),
        hit(shed, "3/column/B", "2-3/side rail/B/3", value=9e3),
    ]
    first, second = grouped(shed, hits)
    assert [place.value for place in first.places] == [7.25e3, 2e3]
    assert first.says == "they share 7.2 cm³ of 1.0 cm³"
    assert first.about == "column/A + side rail/A"
    assert second.about == "column/B + side rail/B"
    assert [each.about for each in grouped(shed, hits[::-1])] == [first.about, second.about]


def test_what_it_is_about_does_not_hang_on_frames_bays_or_courses() -> None:
    about = {
        name: grouped(shed_of(name), [hit(shed_of(name), key)])[0].about
        for name, key in (("barn", "2/column/A"), ("seed-store", "7/column/A"))
    }
    assert about["barn"] == about["seed-store"]


def test_a_waiver_covers_its_code_and_its_pieces_and_the_rest_stays_open() -> None:
    shed = shed_of("barn")
    hits = [hit(shed, "2/column/A"), hit(shed, "3/column/A", value=5.0)]
    waiver = Waiver("overlap", "3/*", "seen on site")
    found = grouped(shed, hits, waiver)
    assert [(each.waived, each.severe, len(each.places)) for each in found] == [
        ("", True, 1),
        ("seen on site", False, 1),
    ]
    assert all(each.severe for each in grouped(shed, hits, replace(waiver, pieces="9/*")))
    assert [each.waived for each in grouped(shed, hits, replace(waiver, pieces="*"))] == ["seen on site"]


def test_findings_come_by_severity() -> None:
    shed = shed_of("barn")
    codes = [next(code for code in CODES if CODES[code].severity is severity) for severity in Severity]
    found = grouped(shed, [hit(shed, "2/column/A", code=code) for code in reversed(codes)])
    assert [each.code.severity for each in found] == list(Severity)


@pytest.mark.parametrize(
    ("value", "unit", "text"),
    [
        (1234.4, "mm", "1,234 mm"),
        (12345.0, "m", "12.35 m"),
        (2500.0, "cm³", "2.5 cm³"),
        (pi / 6, "deg", "30.0 deg"),
        (0.256, "%", "26 %"),
        (180.0, "", "180"),
        (265.57, "", "266"),
        (2.5, "", "2.5"),
        (12500.0, "t", "12.50 t"),
        (None, "mm", "?"),
    ],
)
def test_figures_are_shown_in_the_units_of_the_trade(value: float | None, unit: str, text: str) -> None:
    assert figure(value, unit) == text


def with_checks(name: str, lines: str) -> str:
    return f"{text_of(name)}\nchecks:\n{lines}\n"


def test_limits_waivers_and_region_come_from_the_description() -> None:
    text = with_checks(
        "lopsided",
        "  region: north-america\n  limits: {stock_length: 15.5 m}\n"
        "  waive:\n    - {code: overlap, pieces: 2/*, reason: 'packed on site, see sketch 4'}",
    )
    held = read_text(text, "t.yaml").checks.criteria
    assert held.limit("stock_length") == (15500.0, "set in the description")
    assert held.waivers == (Waiver("overlap", "2/*", "packed on site, see sketch 4"),)
    plain = criteria(region="north-america")
    others = [name for name in LIMITS if name != "stock_length"]
    assert [held.limit(name) for name in others] == [plain.limit(name) for name in others]
    assert plain.limit("stock_length") != criteria(region="europe").limit("stock_length")


@pytest.mark.parametrize(
    ("lines", "field", "message"),
    [
        ("  limits: {stock_length: 900 m}", "checks.limits.stock_length", "out of bounds"),
        ("  limits: {stok_length: 9 m}", "checks.limits.stok_length", "there is no such field here"),
        ("  waive:\n    - {code: overlp, reason: x}", "checks.waive[0].code", "not one of the choices"),
        ("  waive:\n    - {code: overlap}", "checks.waive[0].reason", "the field is missing"),
        ("  waive: {code: overlap}", "checks.waive", "a list is wanted here"),
        ("  waive:\n    - overlap", "checks.waive[0]", "a group of fields is wanted here"),
        ("  region: moon", "checks.region", "not one of the choices"),
    ],
)
def test_faults_of_the_checks_block_are_told_in_place(lines: str, field: str, message: str) -> None:
    with pytest.raises(DescriptionError) as error:
        read_text(with_checks("lopsided", lines), "t.yaml")
    (fault,) = error.value.faults
    assert fault.field == field
    assert message in fault.message
    assert fault.line > 10
