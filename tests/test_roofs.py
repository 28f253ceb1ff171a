"""Roof forms: their slopes over unequal spans, against triangles solved by hand."""

from __future__ import annotations

from itertools import pairwise
from math import atan, cos, hypot, radians, sin, tan

import pytest
from hypothesis import given
from hypothesis import strategies as st

from shedbim.fields import table
from shedbim.roofs import FORMS, Flat, Gable, MonoPitch, RoofForm, Slope

UNEQUAL = (18_000.0, 24_500.0, 21_000.0)


def gable(left: str, right: str | None = None) -> Gable:
    return Gable.model_validate({"form": "gable", "pitch": left, "pitch_right": right})


EVERY_FORM = [
    gable("6 deg"),
    gable("5 deg", "8 deg"),
    gable("60 deg", "1 deg"),
    MonoPitch.model_validate({"form": "mono-pitch", "pitch": "4 deg"}),
    MonoPitch.model_validate({"form": "mono-pitch", "pitch": "45 deg", "high": "left"}),
    Flat.model_validate({"form": "flat"}),
    Flat.model_validate({"form": "flat", "fall": "1:20", "high": "left"}),
]


@pytest.mark.parametrize("roof", EVERY_FORM, ids=str)
def test_slopes_cover_the_spans_without_gap_or_step(roof: RoofForm) -> None:
    slopes = roof.slopes(UNEQUAL)
    assert slopes[0].x0 == 0
    assert slopes[-1].x1 == pytest.approx(sum(UNEQUAL))
    for left, right in pairwise(slopes):
        assert right.x0 == pytest.approx(left.x1)
        assert right.z0 == pytest.approx(left.z1)
    assert min(min(s.z0, s.z1) for s in slopes) == pytest.approx(0, abs=1e-9)
    edges = (0.0, 18_000.0, 42_500.0, 63_500.0)
    for slope in slopes:
        assert slope.x1 > slope.x0
        assert edges[slope.span] - 1e-6 <= slope.x0
        assert slope.x1 <= edges[slope.span + 1] + 1e-6


def test_an_equal_gable_has_its_ridge_in_the_middle() -> None:
    slopes = gable("6 deg").slopes((30_000.0, 24_000.0))
    assert [s.span for s in slopes] == [0, 0, 1, 1]
    assert [s.rises for s in slopes] == [True, False, True, False]
    assert slopes[0].x1 == pytest.approx(15_000)
    assert slopes[0].z1 == pytest.approx(15_000 * tan(radians(6)))
    assert slopes[2].x1 == pytest.approx(42_000)
    assert [s.pitch for s in slopes] == pytest.approx([radians(p) for p in (6, -6, 6, -6)])


def test_the_ridge_of_an_unequal_gable_moves_towards_the_steeper_slope() -> None:
    """The triangle of base 18 m and base angles 5 and 8 deg, by the law of sines."""
    rising, falling = gable("5 deg", "8 deg").slopes((18_000.0,))
    apex_angle = radians(180 - 5 - 8)
    left_side = 18_000 * sin(radians(8)) / sin(apex_angle)
    right_side = 18_000 * sin(radians(5)) / sin(apex_angle)
    assert rising.length == pytest.approx(left_side)
    assert falling.length == pytest.approx(right_side)
    assert rising.x1 == pytest.approx(left_side * cos(radians(5)))
    assert rising.x1 > 9000
    assert (rising.pitch, falling.pitch) == pytest.approx((radians(5), radians(-8)))


@given(st.floats(1, 60), st.floats(1, 60), st.lists(st.floats(3000, 150_000), min_size=1, max_size=5))
def test_a_mirrored_gable_is_the_mirror_of_the_gable(left: float, right: float, spans: list[float]) -> None:
    there = gable(f"{left} deg", f"{right} deg").slopes(tuple(spans))
    back = gable(f"{right} deg", f"{left} deg").slopes(tuple(reversed(spans)))
    width = sum(spans)
    for one, other in zip(there, reversed(back), strict=True):
        mirrored = (width - other.x1, width - other.x0, other.z1, other.z0)
        assert (one.x0, one.x1, one.z0, one.z1) == pytest.approx(mirrored, rel=1e-9, abs=1e-5)


def test_a_mono_pitch_is_one_plane_over_all_spans() -> None:
    slopes = MonoPitch.model_validate({"form": "mono-pitch", "pitch": "4 deg"}).slopes(UNEQUAL)
    assert [s.span for s in slopes] == [0, 1, 2]
    assert all(s.rises for s in slopes)
    assert slopes[1].z0 == pytest.approx(18_000 * tan(radians(4)))
    assert slopes[-1].z1 == pytest.approx(63_500 * tan(radians(4)))


def test_a_mono_pitch_with_its_high_side_left_falls_to_the_right() -> None:
    form = MonoPitch.model_validate({"form": "mono-pitch", "pitch": "4 deg", "high": "left"})
    slopes = form.slopes(UNEQUAL)
    assert slopes[0].z0 == pytest.approx(63_500 * tan(radians(4)))
    assert slopes[-1].z1 == pytest.approx(0)
    assert all(s.pitch == pytest.approx(radians(-4)) for s in slopes)


def test_a_flat_roof_falls_one_in_sixty_where_nothing_is_said() -> None:
    form = Flat.model_validate({"form": "flat"})
    (slope,) = form.slopes((24_000.0,))
    assert form.fall == pytest.approx(atan(1 / 60))
    assert slope.z1 == pytest.approx(400)


def test_the_measures_of_a_slope() -> None:
    slope = Slope(0, 1000.0, 4000.0, 2000.0, 6000.0)
    assert slope.length == pytest.approx(hypot(3000, 4000))
    assert slope.pitch == pytest.approx(atan(4 / 3))
    assert slope.rises
    assert slope.height(1750.0) == pytest.approx(3000)


def test_every_form_is_listed_by_the_word_the_user_writes() -> None:
    assert list(FORMS) == ["gable", "mono-pitch", "flat"]
    assert all(issubclass(form, RoofForm) for form in FORMS.values())


def test_the_table_refuses_two_forms_of_one_name() -> None:
    with pytest.raises(ValueError, match="gable"):
        table("form", Gable, Flat, Gable)
