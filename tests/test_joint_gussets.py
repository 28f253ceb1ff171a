"""Gussets of braces: whole panels without a clash, few plates, rooms that are kept and refusals that are said."""

from __future__ import annotations

from dataclasses import replace

import joint_panels
import joint_solids
import numpy as np
import pytest
from joint_panels import PanelCase, corners_of, faults, made_panel, mirrored

from shedbim.description.connections import Connections
from shedbim.errors import DescriptionError
from shedbim.expand.braces import strut_reach
from shedbim.expand.clearances import BRACE_SET_BACK, GUSSET
from shedbim.expand.joints.bolt_lines import leg_line, tube_line
from shedbim.expand.joints.brace_gusset import brace_gusset
from shedbim.expand.joints.contract import Joint, Work
from shedbim.expand.joints.strut_end import strut_end
from shedbim.expand.sticks import stick, stop_before
from shedbim.model.joints import At, JointKind
from shedbim.model.roles import Role
from shedbim.sections.catalogue import section
from shedbim.sections.profiles import IShape

#: Unequal carriers, widths and bays throughout.
CASES = {
    "angles in a roof": PanelCase(("IPE 300", "SHS 150x150x8"), "L 80x80x8", "CHS 88.9x4", 4700.0, 6100.0, 0.105),
    "unequal angles": PanelCase(("IPE 450", "IPE 200"), "L 100x75x8", "SHS 60x60x4", 3600.0, 5900.0, 0.0),
    "angles in a wall": PanelCase(("HEB 300", "SHS 250x250x10"), "L 90x90x8", "CHS 88.9x4", 4100.0, 6800.0, None),
    "small angles, flat": PanelCase(("IPE 270", "IPE 300"), "L 50x50x5", "CHS 48.3x3", 2200.0, 6400.0, -0.2),
    "tubes in a roof": PanelCase(("SHS 140x140x6", "IPE 240"), "CHS 76.1x4", "SHS 100x100x5", 4900.0, 6300.0, 0.3),
    "one tube in a wall": PanelCase(
        ("CHS 273x10", "HEA 320"), "CHS 114.3x5", "RHS 120x60x5", 5300.0, 6700.0, None, "single"
    ),
    "three bolts, capped": PanelCase(
        ("HEB 360", "HEB 300"), "CHS 88.9x4", "CHS 168.3x6", 5100.0, 7200.0, None, "crossed",
        Connections.model_validate({"gussets": {"bolts": "3"}, "tube_ends": {"braces": "capped", "struts": "slotted"}}),
    ),
}  # fmt: skip


def _gussets(case):
    _, joints = made_panel(case)
    return [made for made in joints if made.joint.kind is JointKind.BRACE_GUSSET]


@pytest.mark.parametrize("case", CASES.values(), ids=CASES)
def test_a_panel_is_sound(case):
    """No overlap, holes on bolts in every layer, edges, pitches, room for wrenches, welds that touch, nothing loose."""
    assert list(faults(case)) == []


@pytest.mark.parametrize("case", CASES.values(), ids=CASES)
def test_every_end_of_a_brace_is_bolted(case):
    members, joints = made_panel(case)
    ends = {(name, at) for name in members if name.startswith("brace") for at in (0, 1)}
    for made in joints:
        of_braces = {number for number, name in enumerate(made.names) if name.startswith("brace")}
        bolted = {layer.of for bolting in made.connection.boltings for layer in bolting.layers}
        welded = {weld.between for weld in made.connection.welds}
        for number in of_braces:
            fins = {pair[0] for pair in welded if pair[1] == number} | {
                pair[0] for a in welded if a[1] == number for pair in welded if pair[1] == a[0]
            }
            if number in bolted or fins & bolted:
                ends.discard((made.names[number], int(made.joint.members[number].at)))
    assert ends == set()


def test_gussets_of_equal_braces_are_equal_plates():
    """Whichever way the leg of the angle points and whatever corner of the panel it is."""
    case = replace(CASES["angles in a wall"], carriers=("HEB 300", "HEB 300"))
    shapes = [_fingerprint(made.connection) for made in _gussets(case)]
    assert len(shapes) == 4
    assert all(np.allclose(shape, shapes[0], atol=1e-6) for shape in shapes[1:])
    # Unequal carriers need unequal plates: two kinds, not four.
    shapes = [_fingerprint(made.connection) for made in _gussets(CASES["angles in a wall"])]
    assert len({tuple(np.round(shape, 4)) for shape in shapes}) == 2


def _fingerprint(connection):
    """Distances of the bolts from each corner, and the sides of a gusset, sorted: the same after any motion."""
    corners = corners_of(connection, "gusset")
    plate = next(each for each in connection.fittings if each.name == "gusset")
    normal = plate.frame[:, 2]
    points = connection.boltings[0].points
    flat = points - np.outer((points - corners[0]) @ normal, normal)
    away = np.linalg.norm(corners[:, None] - flat[None], axis=2).ravel()
    sides = np.linalg.norm(corners[:, None] - corners[None], axis=2).ravel()
    return np.concatenate([np.sort(away), np.sort(sides)])


@pytest.mark.parametrize("name", ["angles in a roof", "angles in a wall", "one tube in a wall"])
@pytest.mark.parametrize("axis", [0, 1, 2])
def test_the_mirror_image_of_a_joint_has_mirrored_plates(name, axis):
    for made in _gussets(CASES[name]):
        image = brace_gusset(mirrored(made, axis), CASES[name].options)
        for fitting in made.connection.fittings:
            expected, found = corners_of(made.connection, fitting.name), corners_of(image, fitting.name)
            expected[:, axis] *= -1
            assert len(found) == len(expected)
            assert all(np.linalg.norm(found - corner, axis=1).min() < 1e-6 for corner in expected)
        assert image.works[0].set_back == pytest.approx(made.connection.works[0].set_back, abs=1e-6)


def test_plates_are_convex_and_have_few_corners():
    for case in CASES.values():
        for made in _gussets(case):
            plate = next(each for each in made.connection.fittings if each.name == "gusset").shape
            corners = np.array(plate.corners)
            a, b = (
                np.roll(corners, -1, axis=0) - corners,
                np.roll(corners, -2, axis=0) - np.roll(corners, -1, axis=0),
            )
            assert (a[:, 0] * b[:, 1] - a[:, 1] * b[:, 0] > 0).all()
            assert len(corners) <= 7
            assert plate.thickness == GUSSET


def test_first_bolts_stand_whole_steps_off_the_carrier():
    for made in _gussets(CASES["angles in a wall"]):
        column = made.joint.members[0]
        web = column.section.profile.tw / 2 if column.section.family == "HEB" else column.section.width / 2
        off = abs(float((made.connection.boltings[0].points[0] - column.origin) @ column.y)) - web
        assert off == pytest.approx(round(off / 5.0) * 5.0, abs=1e-6)


def test_bolts_are_on_the_back_mark():
    """L 80 is drilled 45 mm from its heel (common practice)."""
    for made in _gussets(CASES["angles in a roof"]):
        brace = made.joint.members[1]
        for point in made.connection.boltings[0].points:
            assert brace.local(point)[1] - brace.section.outline.bounds[0] == pytest.approx(45.0)


def test_a_leg_takes_the_bolt_that_its_toe_allows():
    found = {
        name: leg_line(section(name).profile, 2, None) for name in ("L 50x50x5", "L 60x60x6", "L 80x80x8")
    }
    assert [line.diameter for line in found.values()] == [12.0, 16.0, 20.0]
    assert leg_line(section("L 60x60x6").profile, 2, "M20") is None
    assert leg_line(section("L 30x30x3").profile, 2, None) is None
    assert tube_line(section("CHS 33.7x3.2"), 2, None).diameter == 12.0
    assert tube_line(section("CHS 26.9x3.2"), 2, None) is None


def test_a_leg_too_small_for_the_bolts_asked_for_is_refused():
    case = replace(
        CASES["small angles, flat"], options=Connections.model_validate({"gussets": {"size": "M20"}})
    )
    with pytest.raises(DescriptionError) as refused:
        made_panel(case)
    assert refused.value.faults[0].field == "bracing.roof.section"
    assert "M20" in refused.value.faults[0].given


def test_a_panel_too_small_for_its_gussets_is_refused():
    case = PanelCase(("IPE 300", "IPE 240"), "CHS 88.9x4", "CHS 88.9x4", 420.0, 640.0, None, "single")
    with pytest.raises(DescriptionError, match="no room"):
        made_panel(case)


def test_braces_move_back_from_their_stops_never_on():
    for case in CASES.values():
        for made in _gussets(case):
            assert all(work.set_back >= 0.0 for work in made.connection.works)
            assert isinstance(made.connection.works[0], Work)


def test_the_bench_finds_what_is_wrong(monkeypatch):
    """Bolts moved 3 mm, a gusset moved 1 mm off its web, a gusset that is twice as thick."""
    right = joint_panels.made_panel
    case = CASES["angles in a wall"]

    def spoilt(change):
        def made(case):
            members, joints = right(case)
            k = next(k for k, each in enumerate(joints) if each.joint.kind is JointKind.BRACE_GUSSET)
            joints[k] = replace(joints[k], connection=change(joints[k].connection))
            return members, joints

        return made

    def moved(connection):
        bolting = connection.boltings[0]
        off = replace(bolting, points=bolting.points + 3.0 * bolting.axis)
        return replace(connection, boltings=(off,))

    def loose(connection):
        plate = connection.fittings[0]
        frame = plate.frame.copy()
        frame[1, 3] += 1.0
        return replace(connection, fittings=(replace(plate, frame=frame),))

    def thick(connection):
        plate = connection.fittings[0]
        return replace(connection, fittings=(replace(plate, shape=replace(plate.shape, thickness=20.0)),))

    for change, word in ((moved, "share"), (loose, "bridges"), (thick, "share")):
        monkeypatch.setattr(joint_panels, "made_panel", spoilt(change))
        assert any(word in fault for fault in faults(case))


@pytest.mark.parametrize("column", ["HEB 300", "IPE 450", "HEA 240", "SHS 250x250x10", "CHS 273x10"])
@pytest.mark.parametrize("pitch", [0.0, 0.3, -0.25])
def test_at_the_head_of_a_column_the_gusset_is_led_between_strut_and_flange(column, pitch):
    size = section(column)
    bar, place = stick(size, (0, 0, -4000), (0, 0, 260), (1, 0, 0))
    head = joint_solids.met(Role.COLUMN, bar, place, At.ALONG, np.zeros(3))
    between = (
        isinstance(size.profile, IShape) and size.profile.h - 2 * (size.profile.tf + size.profile.r) >= 100.0
    )
    stop = (size.profile.tw if between else size.width) / 2 + 10.0
    bar, place = stick(section("SHS 100x100x5"), (0, stop, 0), (0, 6000, 0), (0, 0, 1))
    strut = joint_solids.met(Role.EAVES_STRUT, bar, place, At.START, np.zeros(3))
    u, y = np.array([np.cos(pitch), 0.0, np.sin(pitch)]), np.array([0.0, 1.0, 0.0])
    up = np.array([-u[2], 0.0, u[0]])
    profile = section("L 80x80x8")
    lift = GUSSET / 2 - profile.outline.bounds[1]
    planes = (
        (y * (size.width / 2 + BRACE_SET_BACK), y),
        (u * (strut_reach(strut.section, u) + BRACE_SET_BACK), u),
    )
    start, end = stop_before(profile, up * lift, u * 4400 + y * 5900 + up * lift, up, planes, ())
    bar, place = stick(profile, start, end, up)
    brace = joint_solids.met(Role.ROOF_BRACE, bar, place, At.START, np.zeros(3))
    made = brace_gusset(Joint(JointKind.BRACE_GUSSET, (head, brace), (strut,)), Connections())
    ends = strut_end(Joint(JointKind.STRUT_END, (head, strut)), Connections())
    bodies = joint_solids.scene(Joint(JointKind.BRACE_GUSSET, (head, brace)), made)
    bodies |= {
        f"strut {k}": v
        for k, v in joint_solids.scene(Joint(JointKind.STRUT_END, (head, strut)), ends).items()
        if k
    }
    assert joint_solids.overlapping(bodies, 100.0) == []
    assert joint_solids.apart(bodies["gusset"], bodies[0]) < 0.5
    clear = [
        joint_solids.apart(bodies["gusset"], body) for name, body in bodies.items() if "strut" in str(name)
    ]
    assert min(clear) > 9.0
