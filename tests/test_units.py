"""Quantities with their units: what is read, what is refused, and what is written back."""

from __future__ import annotations

import re
from math import atan, degrees, isfinite, pi, radians

import pytest
from hypothesis import given
from hypothesis import strategies as st

from shedbim import units
from shedbim.units import (
    ANGLE,
    FORCE,
    LENGTH,
    LINE_LOAD,
    MASS,
    PRESSURE,
    Measure,
    QuantityError,
    format_angle,
    format_length,
    format_slope,
    parse,
)

MEASURES = (LENGTH, ANGLE, FORCE, MASS, PRESSURE, LINE_LOAD)

#: Text, measure and value inside. US customary factors: 1 in = 25.4 mm and 1 lb = 0.45359237 kg exactly
#: (international yard and pound agreement, 1959); 1 lbf = 4.4482216152605 N and 1 psi = 6894.757 Pa
#: (NIST SP 811, appendix B.8).
READ = [
    ("6 m", LENGTH, 6000.0),
    ("6m", LENGTH, 6000.0),
    ("1700 mm", LENGTH, 1700.0),
    ("1.5 cm", LENGTH, 15.0),
    ("0.25 km", LENGTH, 250_000.0),
    ("-250 mm", LENGTH, -250.0),
    ("+ 3 m", LENGTH, 3000.0),
    ("20 ft", LENGTH, 6096.0),
    ("98 ft 5 in", LENGTH, 98 * 304.8 + 5 * 25.4),
    ("98ft5in", LENGTH, 98 * 304.8 + 5 * 25.4),
    ("98' 5\"", LENGTH, 98 * 304.8 + 5 * 25.4),
    ("98 ft - 5 1/2 in", LENGTH, 98 * 304.8 + 5.5 * 25.4),
    ("-2 ft 6 in", LENGTH, -762.0),
    ("3 1/2 in", LENGTH, 88.9),
    ("3/8 in", LENGTH, 9.525),
    ("1.5e3 mm", LENGTH, 1500.0),
    (".5 m", LENGTH, 500.0),
    ("6 deg", ANGLE, radians(6)),
    ("6°", ANGLE, radians(6)),
    ("0.1 rad", ANGLE, 0.1),
    ("1:60", ANGLE, atan(1 / 60)),
    ("4:12", ANGLE, atan(1 / 3)),
    ("5 %", ANGLE, atan(0.05)),
    ("-14.5 deg", ANGLE, radians(-14.5)),
    ("25 kN", FORCE, 25_000.0),
    ("1 lbf", FORCE, 4.4482216152605),
    ("2 kip", FORCE, 8896.443230521),
    ("120 kg", MASS, 120.0),
    ("1.25 t", MASS, 1250.0),
    ("10 lb", MASS, 4.5359237),
    ("0.9 kN/m2", PRESSURE, 0.0009),
    ("0.9 kN/m²", PRESSURE, 0.0009),
    ("1 psi", PRESSURE, 0.006894757293168),
    ("20 psf", PRESSURE, 20 * 47.88026e-6),
    ("1.5 kN/m", LINE_LOAD, 1.5),
    ("100 lbf/ft", LINE_LOAD, 100 * 14.59390e-3),
]


@pytest.mark.parametrize(("text", "measure", "value"), READ)
def test_a_quantity_is_read_in_the_units_used_inside(text: str, measure: Measure, value: float) -> None:
    assert parse(text, measure) == pytest.approx(value, rel=1e-6, abs=1e-15)


@pytest.mark.parametrize(("text", "measure", "value"), READ)
def test_the_pattern_for_editors_takes_what_is_read(text: str, measure: Measure, value: float) -> None:
    assert re.search(units.pattern(measure), text)


@pytest.mark.parametrize("text", ["6", "-6", "6.5", "1/2", "1e3", ".5"])
@pytest.mark.parametrize("measure", MEASURES, ids=lambda m: m.name)
def test_a_bare_number_is_refused_and_told_so(text: str, measure: Measure) -> None:
    with pytest.raises(QuantityError) as caught:
        parse(text, measure)
    assert "bare number" in caught.value.message
    assert measure.example in caught.value.allowed
    assert not re.search(units.pattern(measure), text)


@pytest.mark.parametrize(
    ("text", "word"),
    [
        ("nan m", "not a finite"),
        (".nan", "not a finite"),
        ("inf m", "not a finite"),
        ("-Infinity mm", "not a finite"),
        ("1e999 m", "not a finite"),
        ("9" * 63 + "m" * 40, "too long"),
        ("6,5 m", "comma"),
        ("6 furlongs", "no unit of length"),
        ("6 M", "no unit of length"),
        ("6 deg", "no unit of length"),
        ("1:60", "no"),
        ("5 %", "no unit of length"),
        ("1/0 in", "nought"),
        ("3 0/0 in", "nought"),
        ("6 m 5 mm", "no"),
        ("five m", "not a length"),
        ("", "not a length"),
        ("m", "not a length"),
        ("--6 m", "not a length"),
        ("٦ m", "not a length"),
        ("6 m\n7 m", "no"),
    ],
)
def test_what_is_no_length_is_refused_with_the_reason(text: str, word: str) -> None:
    with pytest.raises(QuantityError) as caught:
        parse(text, LENGTH)
    assert word in caught.value.message
    assert "6 m" in caught.value.allowed


@pytest.mark.parametrize("text", ["1:0", "1:1e999", "1e999:1", "1e999 %", "1:-60", "1:"])
def test_a_slope_without_a_finite_run_is_refused(text: str) -> None:
    with pytest.raises(QuantityError):
        parse(text, ANGLE)


def test_1e99_m_is_a_finite_number_that_fields_bound() -> None:
    assert parse("1e99 m", LENGTH) == pytest.approx(1e102)


@given(st.text(max_size=80), st.sampled_from(MEASURES))
def test_any_text_is_a_finite_number_or_a_quantity_error(text: str, measure: Measure) -> None:
    try:
        value = parse(text, measure)
    except QuantityError:
        return
    assert isfinite(value)
    assert re.search(units.pattern(measure), text)


@given(st.text(alphabet="0123456789./ eE:%-+'\"mftinkdegra", max_size=16), st.sampled_from(MEASURES))
def test_what_the_pattern_takes_is_read_or_not_finite(text: str, measure: Measure) -> None:
    try:
        parse(text, measure)
    except QuantityError as error:
        refused = "finite" in error.message or "nought" in error.message
        assert refused or not re.search(units.pattern(measure), text)
    else:
        assert re.search(units.pattern(measure), text)


def test_lengths_are_written_as_people_write_them() -> None:
    assert format_length(6000.0) == "6.0 m"
    assert format_length(1700.0) == "1.7 m"
    assert format_length(29997.2) == "29.9972 m"
    assert format_length(150.0) == "150 mm"
    assert format_length(12.5) == "12.5 mm"
    assert format_length(-250.0) == "-250 mm"
    assert format_length(-0.0) == "0 mm"


def test_angles_and_slopes_are_written_as_people_write_them() -> None:
    assert format_angle(radians(6)) == "6.0 deg"
    assert format_angle(-pi / 7) == "-25.714286 deg"
    assert format_slope(atan(1 / 60)) == "1:60"
    assert format_slope(-atan(1 / 3)) == "-1:3"
    assert format_slope(atan(1 / 2.5)) == "1:2.5"


@given(st.floats(-1e9, 1e9))
def test_a_written_length_is_read_back(length: float) -> None:
    assert parse(format_length(length), LENGTH) == pytest.approx(length, abs=1e-3)


@given(st.floats(-6.3, 6.3))
def test_a_written_angle_is_read_back(angle: float) -> None:
    assert degrees(parse(format_angle(angle), ANGLE)) == pytest.approx(degrees(angle), abs=1e-6)
