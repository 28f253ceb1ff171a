"""Ends of sag bars: nuts on both sides of the web, or a plate where the web slants."""

from __future__ import annotations

from math import cos, radians, sin

import numpy as np
import pytest
from joint_bench import bench, cylinder, faults, met, mirrored

from shedbim.description import read_text
from shedbim.description.connections import Connections
from shedbim.errors import DescriptionError
from shedbim.expand.cold_formed import Course, Stretch, course_bar, sag_bar
from shedbim.expand.frames import inner_frame, roof_lifts
from shedbim.expand.joints.contract import Joint
from shedbim.expand.joints.sag_bar import sag_bar_end
from shedbim.expand.layout import lay_out
from shedbim.expand.purlins import purlins
from shedbim.model.joints import At, JointKind
from shedbim.model.roles import Role
from shedbim.sections import catalogue

OPTIONS = Connections()
SHED = """
project: {{name: Barred}}
building:
  spans: [15.3 m]
  bays: [5.6 m, 7.2 m, 6.1 m]
  eaves: 5 m
  roof: {{form: gable, pitch: 7 deg, pitch_right: 11 deg}}
frames:
  columns: {{section: IPE 400}}
  roof: {{system: rafter, section: IPE 360}}
  gables: {{system: same, posts: IPE 240}}
purlins: {{section: Z 200x75x20x2.0, spacing: {spacing}}}
rails: {{section: C 200x75x20x2.0}}
bracing:
  roof: {{pattern: crossed, section: L 80x80x8}}
  walls: {{pattern: crossed, section: L 90x90x8}}
"""
ACROSS, LENGTHWISE, UP = np.eye(3)


def course(x: float, z: float, pitch: float, *, falls: bool = False) -> Course:
    """A purlin line on a slope that rises to +x, or falls, by ``pitch`` degrees."""
    a = radians(-pitch if falls else pitch)
    direction, normal = np.array([cos(a), 0, sin(a)]), np.array([-sin(a), 0, cos(a)])
    return Course("purlin", np.array([x, 0.0, z]), -direction if falls else direction, normal, LENGTHWISE)


def ends(lower: Course, upper: Course, name: str, bar: str = "RD 12", number: int = 1) -> list[Joint]:
    """The two joints of a sag bar between two courses."""
    section = catalogue.section(name)
    made, meetings = sag_bar(
        lower, upper, 3000.0, number, section, catalogue.section(bar), "sag bar", "S350GD", "galvanized"
    )
    joints = []
    for line, meeting in zip((lower, upper), meetings, strict=True):
        purlin = course_bar(line, Stretch(3.0, 5997.0), section, Role.PURLIN, "S350GD", "galvanized")
        point = meeting.point
        here = [
            (each.bar, each.placement - np.column_stack([np.zeros((3, 3)), point])) for each in (purlin, made)
        ]
        joints.append(
            Joint(
                JointKind.SAG_BAR_END,
                (met(Role.PURLIN, here[0], At.ALONG), met(Role.SAG_BAR, here[1], meeting.pieces[1].at)),
            )
        )
    return joints


SLOPE = radians(8.0)
SQUARE = [
    (name, bar, k)
    for name, bar in (
        ("Z 200x75x20x2.5", "RD 12"),
        ("C 200x75x20x2.0", "RD 16"),
        ("Z 120x50x18x1.6", "RD 12"),
    )
    for k in (0, 1)
]


@pytest.mark.parametrize(("name", "bar", "k"), SQUARE)
def test_a_square_bar_passes_the_web(name, bar, k):
    lower, upper = course(0, 0, 8.0), course(1700 * cos(SLOPE), 1700 * sin(SLOPE), 8.0)
    joint = ends(lower, upper, name, bar)[k]
    made = sag_bar_end(joint, OPTIONS)
    assert list(faults(joint, made)) == []
    assert made.fittings == ()
    (nuts,) = made.boltings
    assert nuts.role is Role.NUTS
    # Nut and washer on each side (ISO 4032, ISO 7089): M12 2.5 + 10.8, M16 3 + 14.8; and 10 mm of thread.
    web, height = joint.members[0].section.profile.thickness, {"RD 12": 13.3, "RD 16": 17.8}[bar]
    assert nuts.fastener.grip == web
    (work,) = made.works
    assert work.of == 1
    assert web + height + 10.0 <= -work.set_back < web + height + 15.0
    # The bar goes through the hole and fills most of it: 12 in 14, 16 in 18 (common practice).
    solids = bench(joint, made).drilled
    drilled = solids[0].min_gap(solids[1], 10.0)
    assert drilled == pytest.approx(1.0, abs=0.05)


@pytest.mark.parametrize("pitch", [6.0, 15.0, 30.0, 45.0])
@pytest.mark.parametrize("name", ["Z 200x75x20x2.5", "C 200x75x20x2.0"])
def test_a_bar_over_a_ridge_ends_on_plates(name, pitch):
    a = radians(pitch)
    lower, upper = course(-150 * cos(a), 0, pitch), course(150 * cos(a), 0, pitch, falls=True)
    for joint in ends(lower, upper, name):
        made = sag_bar_end(joint, OPTIONS)
        assert list(faults(joint, made)) == []
        (plate,) = made.fittings
        # Flat on the web: its normal is the purlin's y axis.
        assert abs(plate.frame[:, 2] @ joint.members[0].y) == pytest.approx(1.0)
        solids = bench(joint, made).drilled
        assert solids[0].min_gap(solids["end plate"], 5.0) == pytest.approx(0.0, abs=1e-3)
        assert len(made.boltings[0].points) == 2


@pytest.mark.parametrize("pitch", [6.0, 18.4, 30.0, 45.0])
@pytest.mark.parametrize("bar", ["RD 12", "RD 16"])
def test_a_wrench_on_the_bolts_passes_the_bar_that_leans_over_them(pitch, bar):
    """M12: 16 mm beside the axis, from a data handbook (fasteners/data/distances.csv); heads of 7.5 mm (ISO 4017)."""
    a = radians(pitch)
    lower, upper = course(-150 * cos(a), 0, pitch), course(150 * cos(a), 0, pitch, falls=True)
    for joint in ends(lower, upper, "Z 200x75x20x2.5", bar):
        made = sag_bar_end(joint, OPTIONS)
        solids, (bolting,) = bench(joint, made).drilled, made.boltings
        for point in bolting.points:
            room = cylinder(point, -bolting.axis, 2 * 16.0, 7.5 + 10.0)
            assert (room ^ solids[1]).volume() < 1.0


def test_a_low_ridge_is_passed_straight():
    a = radians(4.0)
    lower, upper = course(-150 * cos(a), 0, 4.0), course(150 * cos(a), 0, 4.0, falls=True)
    for joint in ends(lower, upper, "Z 200x75x20x2.0"):
        made = sag_bar_end(joint, OPTIONS)
        assert made.fittings == ()
        assert list(faults(joint, made)) == []
        (plate,) = sag_bar_end(joint, Connections(sag_bars={"slant": "3 deg"})).fittings
        assert plate.role is Role.END_PLATE


def test_both_ends_of_a_bar_over_an_even_ridge_mirror_each_other():
    a = radians(15.0)
    lower, upper = course(-150 * cos(a), 0, 15.0), course(150 * cos(a), 0, 15.0, falls=True)
    left, right = (sag_bar_end(joint, OPTIONS) for joint in ends(lower, upper, "C 200x75x20x2.0"))
    assert mirrored(left.boltings[0].points) == pytest.approx(right.boltings[0].points, abs=1e-6)
    assert left.works[0].set_back == pytest.approx(right.works[0].set_back)


def test_two_bars_at_one_web_keep_apart():
    """The bar from below and the next one up pass the same web 50 mm apart, nuts and all: M16 washers are 30 mm."""
    slope = radians(8.0)
    lines = [course(1500 * k * cos(slope), 1500 * k * sin(slope), 8.0) for k in range(3)]
    below = ends(lines[0], lines[1], "Z 200x75x20x2.5", "RD 16", number=1)[1]
    above = ends(lines[1], lines[2], "Z 200x75x20x2.5", "RD 16", number=2)[0]
    one, two = (bench(joint, sag_bar_end(joint, OPTIONS)) for joint in (below, above))
    # Each is seen from its own work point; both see the same purlin, laid out from its course's point.
    apart = work_point(lines[1:], 0, 2) - work_point(lines, 1, 1)
    gaps = [
        first.min_gap(second.translate(apart.tolist()), 100.0)
        for first in (one.drilled[1], one.bolts["nuts"])
        for second in (two.drilled[1], two.bolts["nuts"])
    ]
    assert min(gaps) == pytest.approx(50.0 - 30.0, abs=0.1)


def work_point(lines: list[Course], k: int, number: int) -> np.ndarray:
    """Where the bar between the first two lines meets the k-th of them (3,)."""
    section = catalogue.section("Z 200x75x20x2.5")
    bar = catalogue.section("RD 16")
    _, meetings = sag_bar(lines[0], lines[1], 3000.0, number, section, bar, "sag bar", "S350GD", "galvanized")
    return meetings[k].point


@pytest.mark.parametrize("spacing", ["1.2 m", "1.45 m", "1.7 m"])
def test_bars_take_turns_at_every_purlin_and_over_the_ridge(spacing):
    """Whatever the number of purlins on a slope: at each web the two bars of a row are 50 mm apart."""
    description = read_text(SHED.format(spacing=spacing))
    slopes = description.building.roof.slopes(description.building.spans)
    layout = lay_out(description, roof_lifts(description, slopes), slopes)
    inner = inner_frame(description, layout)
    for run in purlins(description, layout, inner, (inner, inner), 300.0):
        places: dict[str, list[float]] = {}
        for meeting in run.kit.meetings:
            if meeting.kind is JointKind.SAG_BAR_END:
                places.setdefault(meeting.pieces[0].name, []).append(float(meeting.point[1]))
        assert places
        for found in places.values():
            assert np.diff(sorted(found)).min(initial=50.0) == pytest.approx(50.0)
        assert any("ridge" in m.name for m in run.kit.members)


def test_what_cannot_be_made_is_refused():
    lower, upper = course(0, 0, 8.0), course(1700 * cos(SLOPE), 1700 * sin(SLOPE), 8.0)
    for bar in ("RD 13", "RD 30"):
        with pytest.raises(DescriptionError) as error:
            sag_bar_end(ends(lower, upper, "Z 200x75x20x2.5", bar)[0], OPTIONS)
        assert error.value.faults[0].field == "purlins.sag_bar"
    a = radians(30.0)
    lower, upper = course(-150 * cos(a), 0, 30.0), course(150 * cos(a), 0, 30.0, falls=True)
    with pytest.raises(DescriptionError) as error:
        sag_bar_end(ends(lower, upper, "Z 90x40x12x1.5")[0], OPTIONS)
    assert error.value.faults[0].field == "purlins.section"
