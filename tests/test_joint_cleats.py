"""Cleats of purlins and rails: flush on the web, on the steel below, bolted and welded, few kinds of plates."""

from __future__ import annotations

from math import cos, hypot, radians, sin, tan

import numpy as np
import pytest
from joint_bench import bench, faults, mirrored
from secondary_cast import corner_joint, head_joint, purlin_joint, rail_joint

from shedbim.description.connections import Connections
from shedbim.errors import DescriptionError
from shedbim.expand.joints.cleat import cleat
from shedbim.geometry.placements import apply
from shedbim.model.roles import Role

OPTIONS = Connections()
JOINTS = {
    "Z on a rafter": purlin_joint("IPE 330", "Z 200x75x20x2.5", pitch=7.0),
    "Z on a falling rafter": purlin_joint("IPE 330", "Z 200x75x20x2.5", pitch=7.0, rises=False),
    "C on a rafter": purlin_joint("IPE 330", "C 200x75x20x2.0", pitch=7.0),
    "Z on a chord": purlin_joint("SHS 150x150x8", "Z 250x80x22x2.5", lift=14.0),
    "a shallow Z": purlin_joint("IPE 240", "Z 120x50x18x1.6"),
    "through": purlin_joint("IPE 300", "Z 200x75x20x2.5", "through"),
    "column head": head_joint("HEB 300", "Z 200x75x20x2.5", -60.0),
    "tube's head": head_joint("SHS 250x250x10", "Z 225x75x20x2.5", 70.0, pitch=1.0),
    "beside a column head": head_joint("HEB 300", "Z 200x75x20x2.5", -149.0),
    "beside a head that falls": head_joint("HEB 280", "Z 200x75x20x2.0", 143.0, pitch=4.0, rises=False),
    "C beside a column head": head_joint("HEB 300", "C 200x75x20x2.0", 152.0),
    "valley": head_joint("HEB 300", "Z 200x75x20x2.5", -90.0, pitch=12.0, valley=True),
    "rail on a flange": rail_joint("HEB 300", "C 200x75x20x2.0"),
    "rail on a tube": rail_joint("SHS 250x250x10", "C 225x75x20x2.0", outward=-1.0),
    "rail on a round": rail_joint("CHS 273x8", "C 200x75x20x2.0"),
    "rail on a thin round": rail_joint("CHS 88.9x4", "Z 175x65x18x1.6", lift=12.0),
    "lone rail": rail_joint("HEB 300", "C 200x75x20x2.0", "lone", overhang=150.0),
    "lone rail on a slender column": rail_joint("IPE 200", "C 175x65x18x1.6", "lone", overhang=50.0),
    "rail between flanges": corner_joint("HEB 300", "C 200x75x20x2.0"),
    "rail between near flanges": corner_joint("HEB 140", "C 200x75x20x2.0", stands_off=12.0),
}


@pytest.fixture(params=JOINTS, scope="module")
def case(request):
    joint = JOINTS[request.param]
    return joint, cleat(joint, OPTIONS)


def fitting(made, name="cleat"):
    return next(each for each in made.fittings if each.name == name)


def test_nothing_overlaps_and_everything_is_held(case):
    joint, made = case
    assert list(faults(joint, made)) == []


def test_the_cleat_lies_flat_on_the_web(case):
    """Its face and the web's share a plane, over the whole of the holes' lines."""
    joint, made = case
    plate = fitting(made)
    carried = joint.members[1]
    assert abs(plate.frame[:, 2] @ carried.y) == pytest.approx(1.0)
    low, high = carried.section.outline.bounds[0], carried.section.profile.thickness / 2
    face = low if carried.section.family == "C" else high
    assert (plate.frame[:, 3] - carried.origin) @ carried.y == pytest.approx(face, abs=1e-6)
    # It stands off the web, not in it.
    assert np.sign(plate.frame[:, 2] @ carried.y) == (-1 if carried.section.family == "C" else 1)
    solids = bench(joint, made).drilled
    assert solids["cleat"].min_gap(solids[1], 10.0) == pytest.approx(0.0, abs=1e-3)


def test_every_member_is_bolted_twice_and_spanners_find_room(case):
    """EN 1993-1-8 Table 3.3 for the bolts among themselves is in ``faults``; the flanges are 16 or 20 mm away.

    16 mm at M12 and 20 mm at M16: a manufacturer-independent table of wrench clearances, facts 5.2.
    """
    joint, made = case
    clear = {12.0: 16.0, 16.0: 20.0}
    for number, met in enumerate(joint.members[1:], start=1):
        own = [b for b in made.boltings if any(layer.of == number for layer in b.layers)]
        assert len(own) == 1
        assert len(own[0].points) in (2, 4)
        profile = met.section.profile
        for point in own[0].points:
            level = abs((point - met.origin) @ met.z)
            assert profile.h / 2 - profile.t - level >= clear[own[0].fastener.diameter]


def test_no_part_of_a_cleat_reaches_the_upper_face(case):
    """Sheets lie there."""
    joint, made = case
    plate = fitting(made)
    met = joint.members[1]
    top = max(
        (apply(plate.frame, [(*corner, 0.0)])[0] - met.origin) @ met.z for corner in plate.shape.corners
    )
    assert top <= met.section.height / 2 - met.section.profile.thickness


def test_golden_cleat_and_bolts():
    """By hand: 200 deep, M16, gauge 116 = the greatest listed up to 120; 35 mm off the line, 30 mm edges.

    Length: 2.5 + 8 + washer 3 + nut 14.8 + pitch 2 = 30.3, so M16x35 (EN 1090-2 8.2.2 and the series).
    """
    made = cleat(JOINTS["Z on a rafter"], OPTIONS)
    plate = fitting(made).shape
    assert plate.size == pytest.approx((200.0, 130.0))
    assert plate.thickness == 8.0
    for bolting in made.boltings:
        assert bolting.fastener.designation == "M16x35 4.6"
        assert np.linalg.norm(bolting.points[0] - bolting.points[1]) == pytest.approx(116.0)
    lines = np.concatenate([bolting.points for bolting in made.boltings])[:, 1]
    assert sorted({round(float(y), 6) for y in lines}) == [-35.0, 35.0]


def test_one_plate_for_butted_through_and_lone_ends():
    joints = [purlin_joint("IPE 330", "Z 200x75x20x2.5", how) for how in ("butted", "through", "lone")]
    plates = [np.array(fitting(cleat(joint, OPTIONS)).shape.corners) for joint in joints]
    assert np.ptp(plates, axis=0).max() < 1e-6
    rails = [
        rail_joint("HEB 300", "C 200x75x20x2.0", how, outward=o)
        for how in ("butted", "lone")
        for o in (-1, 1)
    ]
    plates = [np.array(fitting(cleat(joint, OPTIONS)).shape.corners) for joint in rails]
    assert np.ptp(plates, axis=0).max() < 1e-6


def test_a_mirrored_rail_gives_a_mirrored_cleat():
    """A C is its own mirror image, so the two side walls are images of each other."""
    for column in ("HEB 300", "CHS 219.1x8"):
        left, right = (cleat(rail_joint(column, "C 200x75x20x2.0", outward=o), OPTIONS) for o in (-1.0, 1.0))
        a, b = (
            np.concatenate([bolting.points for bolting in made.boltings] + [corners(made)])
            for made in (left, right)
        )
        image = mirrored(a)
        distance = np.linalg.norm(image[:, None] - b[None], axis=2)
        assert distance.min(axis=1).max() < 1e-6
        assert distance.min(axis=0).max() < 1e-6


def corners(made, name="cleat") -> np.ndarray:
    """The corners of both faces of a fitting (2 n, 3)."""
    plate = fitting(made, name)
    flat = [(x, y, z) for x, y in plate.shape.corners for z in (0.0, plate.shape.thickness)]
    return apply(plate.frame, flat)


def test_the_foot_on_a_round_column_follows_it():
    """R 136.5: the foot is cut to the circle, both ends of it on the circle."""
    joint = JOINTS["rail on a round"]
    plate = fitting(cleat(joint, OPTIONS))
    axis = joint.members[0].origin
    ends = [
        p for p, bulge in zip(plate.shape.corners, (*plate.shape.bulges, 0.0), strict=False) if bulge != 0.0
    ] + [plate.shape.corners[1]]
    for end in ends:
        point = apply(plate.frame, [(*end, 0.0)])[0] - axis
        assert hypot(point[0], point[1]) == pytest.approx(136.5, abs=1e-6)
    # The circle lies between: half the foot is 65, the arc rises by R - sqrt(R2 - 65²).
    assert plate.shape.bulges[0] == pytest.approx(-np.tan(np.arcsin(65.0 / 136.5) / 2))


def test_a_rail_between_flanges_is_welded_to_the_web():
    joint = JOINTS["rail between flanges"]
    made = cleat(joint, OPTIONS)
    column = joint.members[0]
    nearest = min(abs((point - column.origin) @ column.y) for point in corners(made))
    assert nearest == pytest.approx(column.section.profile.tw / 2)


def test_a_cleat_beside_its_column_stands_on_a_seat():
    for name in ("beside a column head", "beside a head that falls", "C beside a column head"):
        made = cleat(JOINTS[name], OPTIONS)
        seat = fitting(made, "seat")
        assert seat.role is Role.SEAT
        assert seat.shape.thickness == 6.0
        pack = fitting(made, "pack")
        assert pack.shape.thickness == 2.0
        assert {frozenset(weld.between) for weld in made.welds} == {
            frozenset(("seat", "cleat")),
            frozenset(("pack", "seat")),
            frozenset((0, "pack")),
        }
    assert [f.name for f in cleat(JOINTS["column head"], OPTIONS).fittings] == ["cleat"]


@pytest.mark.parametrize(
    "name", ["beside a column head", "beside a head that falls", "C beside a column head"]
)
def test_a_seat_passes_over_what_runs_up_to_the_column(name):
    """2 to 3 mm of air over the steel beside the head (common practice), which is as high as the head."""
    joint = JOINTS[name]
    column, made = joint.members[0], cleat(joint, OPTIONS)
    up = joint.members[1].z
    head = float(column.point(column.to_end, 0.0, 0.0) @ up)
    for word, low, high in (("pack", 0.0, 2.0), ("seat", 2.0, 8.0)):
        plate = fitting(made, word)
        levels = [
            float(apply(plate.frame, [(*corner, z)])[0] @ up) - head
            for corner in plate.shape.corners
            for z in (0.0, plate.shape.thickness)
        ]
        assert (min(levels), max(levels)) == pytest.approx((low, high), abs=1e-6)
    across = np.array([column.local(point)[2] for point in corners(made, "pack")])
    assert np.abs(across).max() < column.section.height / 2 - 2.0


def test_steep_valleys_leave_a_stub():
    """The roof's line rises from the column's axis to the foot, 110 mm under the purlin: (90 + 110 sin 12) tan 12.

    The cleat leans by 12 degrees and lies 1.25 mm (half the web of 2.5) up the slope from the purlin's axis.
    """
    flat = fitting(cleat(head_joint("HEB 300", "Z 200x75x20x2.5", -90.0, pitch=12.0), OPTIONS)).shape
    stub = fitting(cleat(JOINTS["valley"], OPTIONS)).shape
    pitch = radians(12.0)
    risen = (90.0 + 110.0 * sin(pitch)) * tan(pitch) + 1.25 * sin(pitch)
    low = [min(y for _, y in plate.corners) for plate in (flat, stub)]
    assert low[0] - low[1] == pytest.approx(risen / cos(pitch), abs=1e-6)


@pytest.mark.parametrize(
    ("joint", "field"),
    [
        (purlin_joint("IPE 300", "Z 80x40x15x1.5"), "purlins.section"),
        (rail_joint("IPE 300", "C 80x40x15x1.5"), "rails.section"),
        (head_joint("HEB 200", "Z 200x75x20x2.5", -220.0), "purlins.eaves_offset"),
        (head_joint("HEB 200", "Z 200x75x20x2.5", -98.0, pitch=20.0, valley=True), "purlins.valley_offset"),
    ],
)
def test_what_finds_no_room_is_refused(joint, field):
    with pytest.raises(DescriptionError) as error:
        cleat(joint, OPTIONS)
    assert [fault.field for fault in error.value.faults] == [field]


def test_options():
    thick = Connections(cleats={"thickness": "10 mm", "bolt": "M12"}, bolts={"secondary_grade": "8.8"})
    made = cleat(JOINTS["Z on a rafter"], thick)
    assert fitting(made).shape.thickness == 10.0
    assert {bolting.fastener.designation for bolting in made.boltings} == {"M12x30 8.8"}
    assert list(faults(JOINTS["Z on a rafter"], made)) == []
