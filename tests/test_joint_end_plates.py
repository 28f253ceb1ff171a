"""End plates: rafters on columns, rafters at the apex, chords on columns; on unequal sections and pitches."""

from __future__ import annotations

from math import cos, radians, tan

import numpy as np
import pytest
from joint_checks import faults, shape_of, wrenches
from joint_solids import met, scene

from shedbim.description.connections import Connections
from shedbim.errors import DescriptionError
from shedbim.expand.joints.apex import apex
from shedbim.expand.joints.brace_gusset import brace_gusset
from shedbim.expand.joints.chord_column import chord_column
from shedbim.expand.joints.contract import Connection, Joint, Met
from shedbim.expand.joints.rafter_column import rafter_column
from shedbim.expand.joints.strut_end import strut_end
from shedbim.expand.sticks import along, stick
from shedbim.model.joints import At, JointKind
from shedbim.model.roles import Role
from shedbim.sections.catalogue import section
from shedbim.sections.profiles import IShape

UP, ACROSS, LENGTHWISE = np.eye(3)[2], np.eye(3)[0], np.eye(3)[1]
TOP = 6000.0  # the top line over the column line


def bracket_gap(options: Connections, column, plate: float) -> float:
    """What rafters and chords are sawn short of the column's face."""
    if isinstance(column.profile, IShape):
        return plate
    return plate + options.brackets.thickness + options.brackets.stand_off


def on_column(
    kind: JointKind,
    column_name: str,
    carried_name: str,
    role: Role,
    degrees: float,
    options: Connections,
    *,
    side: int = 1,
    below: float = 0.0,
    gap: float | None = None,
) -> Joint:
    """A member that runs out from a column on the right (``side`` 1) or left of it, rising by so many degrees.

    ``below``: how far its upper face is under the top line, upright.
    """
    column, carried = section(column_name), section(carried_name)
    rise = tan(radians(degrees))
    own = options.rafters if kind is JointKind.RAFTER_COLUMN else options.chords
    gap = bracket_gap(options, column, own.thickness) if gap is None else gap
    start = column.height / 2 + gap

    def axis(x: float) -> np.ndarray:
        level = TOP - below + rise * x - carried.height / 2 / cos(radians(degrees))
        return np.array([side * x, 0.0, level])

    head = along((-side * rise, 0.0, 1.0))
    upright = stick(column, (0, 0, 0), (0, 0, TOP), ACROSS, end_planes=head)
    planes = {"start_planes": along(ACROSS), "end_planes": along(ACROSS)}
    near, far = axis(start), axis(start + 4000.0)
    bar, at = (near, far), At.START
    if side < 0:
        bar, at = (far, near), At.END
    runs = stick(carried, *bar, UP, **planes)
    point = axis(0.0)
    return Joint(kind, (met(Role.COLUMN, *upright, At.ALONG, point), met(role, *runs, at, point)))


def strut_on(joint: Joint, name: str, level: float, role: Role = Role.EAVES_STRUT) -> Met:
    """A strut that leaves the column lengthwise, its axis ``level`` above the work point."""
    column = joint.members[0]
    profile = column.section.profile
    bar = stick(section(name), (0, profile.tw / 2 + 10, 0), (0, 5000, 0), UP)
    return met(role, *bar, At.START, np.array([0.0, 0.0, -level]))


def lengths(joint: Joint, made: Connection) -> list[float]:
    """How far each stiffener runs between the flanges, shortest first."""
    boxes = [
        body.bounding_box() for name, body in scene(joint, made).items() if str(name).startswith("stiffener")
    ]
    return sorted(box[3] - box[0] for box in boxes)


OPTIONS = Connections()
HAUNCHED = Connections.model_validate({"rafters": {"haunch": {"rafters": "all"}}})
THICK = Connections.model_validate(
    {"rafters": {"thickness": "25 mm"}, "chords": {"thickness": "25 mm", "seat": "plate"}}
)

RAFTERS = [
    ("IPE 450", "IPE 400", Role.RAFTER, 5.0),
    ("HEB 300", "IPE 300", Role.GABLE_RAFTER, 6.0),
    ("W 12x40", "W 12x26", Role.RAFTER, 18.43),
    ("CHS 244.5x10", "IPE 330", Role.RAFTER, 6.5),
    ("CHS 244.5x10", "IPE 220", Role.GABLE_RAFTER, -6.5),
    ("SHS 250x250x10", "IPE 160", Role.RAFTER, 10.0),
    ("RHS 300x200x10", "UB 406x178x60", Role.RAFTER, -3.0),
    ("UC 254x254x89", "UB 406x178x60", Role.RAFTER, -12.0),
    ("IPE 500", "HEA 260", Role.RAFTER, 31.0),
    ("HEB 360", "IPE 450", Role.RAFTER, 1.0),
]


@pytest.mark.parametrize("options", [OPTIONS, HAUNCHED, THICK], ids=["plain", "haunched", "thick"])
@pytest.mark.parametrize("case", RAFTERS, ids=lambda case: f"{case[0]}+{case[1]}")
def test_rafters_on_columns_hold(case, options):
    joint = on_column(JointKind.RAFTER_COLUMN, *case, options)
    made = rafter_column(joint, options)
    assert faults(joint, made) == []
    roles = {each.role for each in made.fittings}
    inner = case[2] is Role.RAFTER or options is HAUNCHED
    assert (Role.HAUNCH in roles) == inner
    tube = not isinstance(joint.members[0].section.profile, IShape)
    assert (Role.GUSSET in roles) == tube
    assert (Role.STIFFENER in roles) == (inner or tube)


@pytest.mark.parametrize("case", RAFTERS, ids=lambda case: f"{case[0]}+{case[1]}")
def test_nothing_stands_out_above_the_roof_steel_nor_beside_it(case):
    joint = on_column(JointKind.RAFTER_COLUMN, *case, HAUNCHED)
    made = rafter_column(joint, HAUNCHED)
    column, rafter = joint.members
    rise = tan(radians(case[3]))
    top = TOP - (TOP - rafter.section.height / 2 / cos(radians(case[3])))
    widest = max(column.section.width, rafter.section.width) / 2
    for name, solid in scene(joint, made).items():
        if isinstance(name, str):
            corners = np.asarray(solid.to_mesh().vert_properties, float)[:, :3]
            assert (corners[:, 2] - rise * corners[:, 0]).max() < top + 0.01, name
            assert np.abs(corners[:, 1]).max() < widest + 5.0, name


@pytest.mark.parametrize("case", RAFTERS, ids=lambda case: f"{case[0]}+{case[1]}")
def test_the_mirrored_joint_gives_the_mirrored_plates(case):
    right, left = (on_column(JointKind.RAFTER_COLUMN, *case, HAUNCHED, side=side) for side in (1, -1))
    one = shape_of(right, rafter_column(right, HAUNCHED))
    # Bolts turn with the axes, so that the corners of their hexagons are elsewhere: less than a bolt in all.
    other = shape_of(left, rafter_column(left, HAUNCHED), flip=(0, 1))
    assert (one - other).volume() < 0.002 * one.volume()
    assert one.volume() == pytest.approx(other.volume(), rel=1e-6)


def test_a_plate_of_another_thickness_than_the_gap_moves_the_rafters_end():
    joint = on_column(JointKind.RAFTER_COLUMN, "HEB 300", "IPE 360", Role.RAFTER, 8.0, THICK, gap=20.0)
    made = rafter_column(joint, THICK)
    (work,) = made.works
    assert work.of == 1
    assert work.set_back == pytest.approx(5.0 / cos(radians(8.0)))
    assert faults(joint, made) == []


def test_two_rafters_on_one_column_share_it():
    """Stiffeners of either side stop short of the middle; the other rafter is a neighbour."""
    options = HAUNCHED
    right = on_column(JointKind.RAFTER_COLUMN, "HEA 300", "IPE 360", Role.RAFTER, 5.0, options)
    left = on_column(JointKind.RAFTER_COLUMN, "HEA 300", "IPE 360", Role.RAFTER, 5.0, options, side=-1)
    one = rafter_column(Joint(right.kind, right.members, (left.members[1],)), options)
    other = rafter_column(Joint(left.kind, left.members, (right.members[1],)), options)
    assert (shape_of(right, one) ^ shape_of(left, other)).volume() < 1.0
    alone = rafter_column(right, options)
    assert shape_of(right, alone).volume() > shape_of(right, one).volume() + 1e5


def test_stiffeners_keep_clear_of_struts_and_of_gussets_of_wall_braces():
    joint = on_column(JointKind.RAFTER_COLUMN, "HEB 300", "IPE 330", Role.RAFTER, 7.0, OPTIONS)
    level = next(f.frame[2, 3] for f in rafter_column(joint, OPTIONS).fittings if f.name == "stiffener 1")
    strut = strut_on(joint, "CHS 88.9x4", level)
    beside = Joint(joint.kind, joint.members, (strut,))
    made = rafter_column(beside, OPTIONS)
    assert faults(beside, made) == []
    assert lengths(beside, made) == pytest.approx([262.0 / 2 - 88.9 / 2 - 20.0, 262.0])
    bar = stick(section("L 80x80x8"), (0, 200, 0), (0, 3000, -3000), UP)
    brace = met(Role.WALL_BRACE, *bar, At.START, np.array([0.0, 0.0, -level - 300.0]))
    braced = Joint(joint.kind, joint.members, (brace,))
    assert lengths(braced, rafter_column(braced, OPTIONS)) == pytest.approx([262.0 / 2 - 6.0 - 20.0, 262.0])
    wide = Joint(joint.kind, joint.members, (strut_on(joint, "SHS 180x180x8", level),))
    with pytest.raises(DescriptionError, match="a strut is in the way"):
        rafter_column(wide, OPTIONS)


def test_a_haunch_by_rule_ends_before_a_post_and_one_that_is_asked_for_is_refused():
    joint = on_column(JointKind.RAFTER_COLUMN, "HEB 300", "IPE 330", Role.RAFTER, 7.0, OPTIONS)
    bar = stick(section("IPE 200"), (1200, 0, 0), (1200, 0, 5600), LENGTHWISE)
    point = np.array([0.0, 0.0, TOP - 160.0])
    beside = Joint(joint.kind, joint.members, (met(Role.GABLE_POST, *bar, At.END, point),))
    made = rafter_column(beside, OPTIONS)
    web = scene(beside, made)["haunch flange"].bounding_box()
    assert web[3] < 1200 - 50 - 50
    asked = Connections.model_validate({"rafters": {"haunch": {"length": "1.3 m"}}})
    with pytest.raises(DescriptionError, match="a haunch comes over a gable post"):
        rafter_column(beside, asked)


@pytest.mark.parametrize(
    ("column", "rafter", "changed", "field"),
    [
        ("HEB 300", "IPE 160", {"rafters": {"bolt": "M36"}}, "connections.rafters.bolt"),
        (
            "SHS 250x250x10",
            "IPE 300",
            {"rafters": {"bolt": "M24"}, "brackets": {"stand_off": "30 mm"}},
            "connections.brackets.stand_off",
        ),
    ],
)
def test_what_leaves_no_room_for_bolts_is_refused(column, rafter, changed, field):
    options = Connections.model_validate(changed)
    joint = on_column(JointKind.RAFTER_COLUMN, column, rafter, Role.GABLE_RAFTER, 5.0, options)
    with pytest.raises(DescriptionError) as caught:
        rafter_column(joint, options)
    assert [fault.field for fault in caught.value.faults] == [field]


# Apex


def at_apex(name: str, left: float, right: float, role: Role, thickness: float = 20.0) -> Joint:
    """Two rafters whose undersides meet at the ridge, with unequal pitches."""
    rafter = section(name)
    ends = []
    for side, degrees, at in ((-1, left, At.END), (1, right, At.START)):
        drop = tan(radians(degrees))
        points = [
            np.array([side * x, 0.0, -drop * x + rafter.height / 2 / cos(radians(degrees))])
            for x in (thickness, 5000.0)
        ]
        bar = stick(
            rafter,
            *(points[::-1] if side < 0 else points),
            UP,
            start_planes=along(ACROSS),
            end_planes=along(ACROSS),
        )
        ends.append(met(role, *bar, at, np.array([0.0, 0.0, rafter.height / 2])))
    return Joint(JointKind.APEX, tuple(ends))


APEX_HAUNCH = Connections.model_validate({"apex": {"haunch": {"depth": "220 mm"}, "thickness": "25 mm"}})


@pytest.mark.parametrize("options", [OPTIONS, APEX_HAUNCH], ids=["plain", "haunched"])
@pytest.mark.parametrize(
    "case",
    [
        ("IPE 400", 5.0, 8.0, Role.RAFTER),
        ("W 12x26", 18.43, 18.43, Role.RAFTER),
        ("IPE 220", 6.0, 4.0, Role.GABLE_RAFTER),
        ("IPE 160", 12.0, 12.0, Role.RAFTER),
        ("HEA 260", 31.0, 24.0, Role.RAFTER),
        ("UB 406x178x60", 2.0, 3.0, Role.RAFTER),
    ],
    ids=lambda case: case[0],
)
def test_rafters_at_the_apex_hold(case, options):
    joint = at_apex(*case)
    made = apex(joint, options)
    assert faults(joint, made) == []
    rafter = joint.members[0].section
    for name, solid in scene(joint, made).items():
        if isinstance(name, str) and "plate" in name:
            low_y, low_z, high_y, high_z = np.array(solid.bounding_box())[[1, 2, 4, 5]]
            assert max(-low_y, high_y) <= rafter.width / 2 + 5.0
            # Flush above and, where there is no haunch, below: heads of posts are 25 mm under the rafters.
            lift = [rafter.height / cos(radians(degrees)) for degrees in case[1:3]]
            assert high_z < min(lift) - rafter.height / 2 + 1e-6
            steepest = tan(radians(max(case[1:3])))
            if options is OPTIONS:
                assert low_z > -rafter.height / 2 - 20.0 * steepest - 1e-6


def post_below(x: float) -> Met:
    """A gable post 200 mm wide at ``x`` from the ridge."""
    bar = stick(section("IPE 200"), (x, 0, -5000), (x, 0, -120), LENGTHWISE)
    return met(Role.GABLE_POST, *bar, At.END, np.array([0.0, 0.0, 165.0]))


@pytest.mark.parametrize(("x", "haunched"), [(0.0, False), (-300.0, False), (500.0, False), (1000.0, True)])
def test_an_apex_over_a_post_has_no_haunch(x, haunched):
    """The post carries the apex: both sides go without. Beyond 2 x 330 mm and the post's half there is room."""
    joint = at_apex("IPE 330", 5.0, 7.0, Role.RAFTER)
    made = apex(Joint(joint.kind, joint.members, (post_below(x),)), APEX_HAUNCH)
    assert [each.role for each in made.fittings].count(Role.HAUNCH) == (4 if haunched else 0)
    assert faults(joint, made) == []


def strut_at_ridge(joint: Joint, name: str, level: float) -> Met:
    """A strut from the ridge along the building, its axis ``level`` above the middle of the rafters."""
    stop = joint.members[0].section.width / 2 + 10.0
    bar = stick(section(name), (0, stop, level), (0, stop + 5000, level), UP)
    return met(Role.STRUT, *bar, At.START, np.zeros(3))


@pytest.mark.parametrize(
    ("rafter", "strut", "level"),
    [
        ("IPE 240", "CHS 88.9x4", 46.0),
        ("IPE 270", "CHS 88.9x4", 66.0),
        ("IPE 400", "CHS 88.9x4", 0.0),
        ("IPE 400", "CHS 114.3x5", -60.0),
        ("IPE 330", "SHS 60x60x4", 20.0),
    ],
)
def test_bolts_at_the_apex_keep_clear_of_the_fin_of_a_strut(rafter, strut, level):
    """The room that a wrench needs is from a data handbook: fasteners/data/distances.csv."""
    bare = at_apex(rafter, 5.0, 5.0, Role.GABLE_RAFTER)
    beside = strut_at_ridge(bare, strut, level)
    ends = Joint(JointKind.STRUT_END, (bare.members[0], beside))
    steel = {name: body for name, body in scene(ends, strut_end(ends, OPTIONS)).items() if name != 0}
    joint = Joint(bare.kind, bare.members, (beside,))
    made = apex(joint, OPTIONS)
    assert faults(bare, made) == []
    assert list(wrenches(made.boltings[0], steel)) == []
    levels = np.unique(np.round(made.boltings[0].points[:, 2], 3))
    assert len(levels) >= 2
    assert np.diff(levels).max() <= 200.0  # EN 1993-1-8 Table 3.3


def test_where_a_fin_leaves_no_room_the_apex_has_bolts_all_the_same():
    """The check of bolts says so then; see ``checks.clash.bolt_access``."""
    bare = at_apex("IPE 160", 5.0, 5.0, Role.GABLE_RAFTER)
    joint = Joint(bare.kind, bare.members, (strut_at_ridge(bare, "CHS 114.3x5", 0.0),))
    assert len(apex(joint, OPTIONS).boltings[0].points) >= 4


# Chords


def webs_at(joint: Joint, name: str) -> tuple[Met, ...]:
    """A post on a chord, 10 mm off its sawn end."""
    chord = joint.members[1]
    web = section(name)
    out = float(np.sign(chord.into[0]))
    up = -1.0 if chord.role is Role.TOP_CHORD else 1.0
    x = chord.origin[0] + out * (web.height / 2 + 10.0)
    foot = chord.origin[2] + up * (chord.section.height / 2 + 12.0)
    bar = stick(web, (x, 0, foot), (x, 0, foot + up * 900.0), ACROSS)
    return (met(Role.POST, *bar, At.START, np.zeros(3)),)


CHORDS = [
    ("HEB 300", "SHS 150x150x8", "SHS 90x90x5"),
    ("SHS 250x250x10", "SHS 140x140x6", "SHS 60x60x4"),
    ("UB 305x165x40", "SHS 120x120x5", "SHS 50x50x4"),
    ("CHS 273x10", "RHS 160x80x6", "CHS 76.1x4"),
    ("RHS 300x200x10", "RHS 200x120x8", "SHS 90x90x5"),
    ("IPE 500", "SHS 200x200x8", "SHS 90x90x5"),
    ("HEB 360", "SHS 160x160x8", "SHS 100x100x6"),
    ("CHS 406.4x10", "SHS 160x160x8", "SHS 90x90x5"),
]


@pytest.mark.parametrize("options", [OPTIONS, THICK], ids=["plain", "thick with seat"])
@pytest.mark.parametrize("role", [Role.TOP_CHORD, Role.BOTTOM_CHORD], ids=["top", "bottom"])
@pytest.mark.parametrize("degrees", [0.0, 6.0, -9.0])
@pytest.mark.parametrize("case", CHORDS, ids=lambda case: f"{case[0]}+{case[1]}")
def test_chords_on_columns_hold(case, degrees, role, options):
    column, chord, web = case
    below = 0.0 if role is Role.TOP_CHORD else 1500.0
    bare = on_column(JointKind.CHORD_COLUMN, column, chord, role, degrees, options, below=below)
    joint = Joint(bare.kind, bare.members, webs_at(bare, web))
    made = chord_column(joint, options)
    # A nut of a bottom chord's upper row may not be reached by a socket where the chord is not level.
    assert faults(joint, made) == []
    assert len(made.boltings[0].points) >= 4
    names = {each.name for each in made.fittings}
    assert ("seat" in names) == (options is THICK and role is Role.BOTTOM_CHORD)
    if role is Role.TOP_CHORD:
        rise = tan(radians(degrees))
        level = joint.members[1].section.height / 2 / cos(radians(degrees))
        for name, solid in scene(joint, made).items():
            if isinstance(name, str):
                corners = np.asarray(solid.to_mesh().vert_properties, float)[:, :3]
                assert (corners[:, 2] - rise * corners[:, 0]).max() < level + 0.01


def test_bolts_are_beside_the_chord_where_the_column_is_wide_enough():
    wide = on_column(JointKind.CHORD_COLUMN, "HEB 300", "SHS 150x150x8", Role.TOP_CHORD, 6.0, OPTIONS)
    narrow = on_column(JointKind.CHORD_COLUMN, "UB 305x165x40", "SHS 120x120x5", Role.TOP_CHORD, 6.0, OPTIONS)
    narrow = Joint(narrow.kind, narrow.members, webs_at(narrow, "SHS 50x50x4"))
    levels = [chord_column(each, OPTIONS).boltings[0].points[:, 2] for each in (wide, narrow)]
    assert np.abs(levels[0]).max() < 75.0
    assert levels[1].max() < -60.0


def test_a_chord_too_wide_for_its_column_is_refused():
    joint = on_column(
        JointKind.CHORD_COLUMN, "IPE 200", "SHS 200x200x8", Role.BOTTOM_CHORD, 3.0, OPTIONS, below=1500.0
    )
    joint = Joint(joint.kind, joint.members, webs_at(joint, "SHS 100x100x5"))
    with pytest.raises(DescriptionError, match="no room for bolts between a chord and its column"):
        chord_column(joint, OPTIONS)


# Beside the gussets of roof braces


def roof_brace(joint: Joint, depth: float, degrees: float) -> Met:
    """A roof brace from the column's head, its gusset ``depth`` under the top line over the column's axis."""
    column = joint.members[0]
    top = float(column.point(column.to_end, 0, 0)[2])
    u = np.array([cos(radians(degrees)), 0.0, np.sin(radians(degrees))])
    up = np.array([-u[2], 0.0, u[0]])
    into = (u * 0.6 + LENGTHWISE * 0.8) / np.hypot(0.6, 0.8)
    at = np.array([0.0, 0.0, top - depth]) + into * (column.section.width / 2 + 90.0)
    bar = stick(section("L 70x70x7"), at, at + into * 5000.0, up)
    return met(Role.ROOF_BRACE, *bar, At.START, np.zeros(3))


BESIDE_GUSSETS = [
    (JointKind.RAFTER_COLUMN, "IPE 450", "IPE 400", Role.RAFTER, 5.0),
    (JointKind.RAFTER_COLUMN, "HEB 280", "IPE 270", Role.GABLE_RAFTER, 4.0),
    (JointKind.RAFTER_COLUMN, "W 310x60", "W 310x38.7", Role.RAFTER, 18.4),
    (JointKind.CHORD_COLUMN, "HEB 280", "SHS 140x140x6", Role.TOP_CHORD, 4.0),
    (JointKind.CHORD_COLUMN, "HEA 320", "SHS 140x140x8", Role.TOP_CHORD, 6.0),
]


@pytest.mark.parametrize("case", BESIDE_GUSSETS, ids=lambda case: f"{case[1]}+{case[2]}")
@pytest.mark.parametrize("share", [0.3, 0.5, 0.7])
def test_bolts_in_a_column_keep_clear_of_the_gusset_of_a_roof_brace(case, share):
    """The room that a wrench needs is from a data handbook: fasteners/data/distances.csv."""
    kind, *rest = case
    make = rafter_column if kind is JointKind.RAFTER_COLUMN else chord_column
    bare = on_column(kind, *rest, OPTIONS)
    brace = roof_brace(bare, share * section(case[2]).height, case[4])
    place = Joint(JointKind.BRACE_GUSSET, (bare.members[0], brace))
    gusset = {"gusset": scene(place, brace_gusset(place, OPTIONS))["gusset"]}
    made = make(Joint(bare.kind, bare.members, (brace,)), OPTIONS)
    assert faults(bare, made) == []
    assert list(wrenches(made.boltings[0], gusset)) == []
    assert len(made.boltings[0].points) >= 4
