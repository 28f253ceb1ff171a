"""What passes through trusses: inscribed shapes against published figures and a general library, and whole trusses."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
import shapely
from cast import shed_of
from other_boxes import tube_along
from shapely.geometry import Polygon, box

from shedbim.checks.others.passages import FLAT, passages
from shedbim.checks.others.trades import trades
from shedbim.checks.subject import Subject
from shedbim.geometry.inscribed import FINENESS, largest_circle, largest_rectangle
from shedbim.limits import criteria
from shedbim.model.roles import Role
from shedbim.model.solids import solid
from shedbim.writers.schedules.csv_text import csv_text
from shedbim.writers.schedules.passages import passages as schedule

RIGHT_TRIANGLE = np.array([(0.0, 0.0), (3000.0, 0.0), (0.0, 1800.0)])
L_SHAPE = np.array([(0.0, 0.0), (900.0, 0.0), (900.0, 250.0), (310.0, 250.0), (310.0, 1200.0), (0.0, 1200.0)])
SKEW = np.array(
    [(-500.0, 30.0), (220.0, -410.0), (1340.0, 60.0), (900.0, 770.0), (480.0, 300.0), (-90.0, 820.0)]
)
POLYGONS = {"triangle": RIGHT_TRIANGLE, "L": L_SHAPE, "skew": SKEW}


def test_the_circle_in_a_panel_of_3_by_1_8_m_has_the_radius_of_its_formula() -> None:
    # r = A / s of a triangle with the sides 3.0, 1.8 and 3.499 m: 0.650 m (elementary geometry: area by half the rim).
    centre, radius = largest_circle([RIGHT_TRIANGLE])
    exact = (3000.0 + 1800.0 - np.hypot(3000.0, 1800.0)) / 2
    assert round(exact) == 651 - 0 or round(exact, -1) == 650
    assert exact - FINENESS <= radius <= exact + 1e-9
    np.testing.assert_allclose(centre, [exact, exact], atol=2.0)


@pytest.mark.parametrize("name", POLYGONS)
def test_circles_are_those_of_a_general_library(name: str) -> None:
    polygon = Polygon(POLYGONS[name])
    _, radius = largest_circle([POLYGONS[name]])
    assert radius == pytest.approx(
        shapely.maximum_inscribed_circle(polygon, tolerance=0.01).length, abs=FINENESS
    )


@pytest.mark.parametrize("name", POLYGONS)
@pytest.mark.parametrize(
    ("proportion", "margin"), [(1.0, 0.0), (2.0, 0.0), (2.0, 35.0), (1.0, 80.0), (0.5, 20.0)]
)
def test_rectangles_fit_and_no_larger_one_does_anywhere(name: str, proportion: float, margin: float) -> None:
    polygon = Polygon(POLYGONS[name])
    (x, y), height = largest_rectangle([POLYGONS[name]], proportion, margin)

    def around(x: float, y: float, height: float) -> Polygon:
        dx, dy = height * proportion / 2 + margin, height / 2 + margin
        return box(x - dx, y - dy, x + dx, y + dy)

    assert polygon.buffer(1e-6).contains(around(x, y, height))
    # Looked for on a mesh of 10 mm: within half a step of any better place, one so much smaller would fit.
    step = 10.0
    low, high = POLYGONS[name].min(axis=0), POLYGONS[name].max(axis=0)
    slack = step * max(1.0, 1.0 / proportion) + 2 * FINENESS
    grid = np.stack(np.meshgrid(np.arange(low[0], high[0], step), np.arange(low[1], high[1], step)), -1)
    larger = [around(*at, height + slack) for at in grid.reshape(-1, 2)]
    assert not shapely.contains(polygon, larger).any()


def test_what_stands_within_a_polygon_is_kept_clear_of() -> None:
    rim = np.array([(0.0, 0.0), (1000.0, 0.0), (1000.0, 400.0), (0.0, 400.0)])
    island = np.array([(480.0, 180.0), (480.0, 220.0), (520.0, 220.0), (520.0, 180.0)])
    centre, radius = largest_circle([rim, island])
    assert radius == pytest.approx(200.0, abs=FINENESS)
    assert abs(centre[0] - 500.0) >= 20.0 + 200.0 - 1.0
    assert largest_rectangle([rim, island], 2.0)[1] == pytest.approx(240.0, abs=2 * FINENESS)


def test_openings_are_those_of_the_steel_as_a_general_library_sees_it() -> None:
    shed = shed_of("lopsided")
    wanted = ("2/truss/", "2/column/")
    flat = []
    for k, key in enumerate(shed.pieces.keys):
        if key.startswith(wanted):
            mesh = solid(shed.parts[shed.pieces.part[k]].shape, 0.2).to_mesh64()
            place = shed.pieces.placement[k]
            points = np.asarray(mesh.vert_properties)[:, :3] @ place[:, :3].T + place[:, 3]
            flat += list(points[np.asarray(mesh.tri_verts, int)][:, :, [0, 2]])
    seen = (
        shapely.union_all(shapely.polygons(np.array(flat)).tolist(), grid_size=0.001).buffer(2.0).buffer(-2.0)
    )
    rings = [ring for part in shapely.get_parts(seen) for ring in part.interiors]
    circles = [shapely.maximum_inscribed_circle(Polygon(ring), tolerance=0.05) for ring in rings]
    exact = sorted(2 * each.length for each in circles if 2 * each.length >= 100.0)
    found = sorted(each.opening for each in passages(shed, criteria()) if "2" in each.lines)
    np.testing.assert_allclose(found, exact, atol=2 * FINENESS)


def test_trusses_that_are_alike_stand_in_one_row_and_panels_are_counted_from_the_left() -> None:
    shed = shed_of("valley")
    rows = passages(shed, criteria())
    assert {row.lines for row in rows} == {("10", "20", "30")}
    for span in ("K-L", "L-M"):
        here = [row for row in rows if row.span == span]
        # Howe trusses of 11 panels: a diagonal cuts each panel in two.
        assert [row.panel for row in here] == list(range(1, 23))
        assert (np.diff([row.x for row in here]) > 0).all()


def test_solid_rafters_have_no_panels() -> None:
    assert passages(shed_of("barn"), criteria()) == ()


def test_clearance_and_insulation_are_taken_off_all_round() -> None:
    shed = shed_of("lopsided")
    bare = passages(shed, criteria({"clear_of_ducts": 0.0, "duct_insulation": 0.0}))
    wrapped = passages(shed, criteria({"clear_of_ducts": 40.0, "duct_insulation": 25.0}))
    for one, other in zip(bare, wrapped, strict=True):
        assert one.round - other.round == pytest.approx(130, abs=1)
        assert one.opening == other.opening
        assert other.flat[0] == FLAT * other.flat[1]
        # About a rectangle the same margin is kept: of one twice as wide as high the height loses less.
        assert 0 < one.flat[1] - other.flat[1] < 130
        assert 130 <= one.square - other.square <= 132


def test_a_duct_of_the_size_that_is_told_passes_and_one_a_little_larger_does_not() -> None:
    shed = shed_of("lopsided")
    held = criteria({"duct_insulation": 0.0})
    row = next(each for each in passages(shed, held) if each.panel == 5)
    y = (shed.grid.y[1] - 200.0, shed.grid.y[2] + 200.0)

    def hits(diameter: float) -> list[str]:
        duct = tube_along(y, row.x, row.z, diameter, kind="IfcDuctSegment")
        return [each.code for each in trades(Subject(shed, held, (duct,))) if each.pieces]

    assert hits(row.round - 1.0) == []
    assert set(hits(row.round + 4.0)) == {"other-too-near"}
    assert "other-overlap" in hits(row.opening + 10.0)
    shed = replace(
        shed, parts=tuple(replace(p, role=Role.TOP_CHORD) if p.role is Role.POST else p for p in shed.parts)
    )
    assert hits(row.round - 1.0) == []


def test_the_schedule_has_a_row_for_each_panel_and_obeys_the_limits_of_the_description() -> None:
    shed = shed_of("lopsided")
    table = schedule(shed)
    assert table.column("panel") == tuple(each.panel for each in passages(shed, criteria()))
    # Line 2 stands beside a braced bay, whose gussets its end plates keep clear of: another truss than that on 3.
    assert set(table.column("lines")) == {"2", "3"}
    assert set(table.column("clearance")) == {50.0}
    wide = schedule(shed, criteria({"clear_of_ducts": 70.0}))
    assert set(wide.column("clearance")) == {70.0}
    for one, other in zip(table.column("round duct"), wide.column("round duct"), strict=True):
        assert one - other == pytest.approx(40, abs=1)
    lines = csv_text(table).splitlines()
    assert lines[0].startswith("lines,span,panel,x of middle (mm)")
    assert len(lines) == 1 + len(table.rows)
