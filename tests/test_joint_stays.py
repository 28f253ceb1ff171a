"""Flange stays: from the purlin's web past the upper flange to a fin at the lower one; where they stand."""

from __future__ import annotations

from itertools import combinations

import numpy as np
import pytest
from joint_bench import cylinder, faults, member_solid, met

from shedbim.description import read_text
from shedbim.errors import DescriptionError
from shedbim.expand.bays import braced_bays
from shedbim.expand.frames import inner_frame, roof_lifts
from shedbim.expand.joints.contract import Joint
from shedbim.expand.joints.stay import flange_stay
from shedbim.expand.layout import lay_out
from shedbim.expand.purlins import purlins
from shedbim.expand.stays import stays
from shedbim.model.joints import At
from shedbim.model.roles import Role

SHED = """
project: {{name: Stayed}}
building:
  spans: [17 m]
  bays: [5 m, 6.2 m, 5.8 m, 6.2 m, 5.4 m]
  eaves: 5 m
  roof: {{form: gable, pitch: 6 deg, pitch_right: 9 deg}}
frames:
  columns: {{section: IPE 400}}
  roof: {roof}
  gables: {{system: same, posts: IPE 240}}
purlins: {{section: {purlin}, spacing: 1.6 m{more}}}
rails: {{section: C 200x75x20x2.0}}
bracing:
  bays: [{braced}]
  roof: {{pattern: crossed, section: L 80x80x8}}
  walls: {{pattern: crossed, section: L 90x90x8}}
connections: {{stays: {{{options}}}, cleats: {{{cleats}}}}}
"""
RAFTER = "{system: rafter, section: IPE 360}"
TRUSS = (
    "{system: truss, pattern: warren, panels: 8, depth: 1.4 m, top_chord: SHS 120x120x6, "
    "bottom_chord: SHS 120x120x6, end_diagonals: SHS 80x80x5, diagonals: SHS 70x70x4, posts: SHS 50x50x4}"
)


def built(roof=RAFTER, purlin="Z 200x75x20x2.0", braced="first", options="", cleats="", more=""):
    """The description, its layout, its inner frame and its stays."""
    text = SHED.format(roof=roof, purlin=purlin, braced=braced, options=options, cleats=cleats, more=more)
    description = read_text(text)
    slopes = description.building.roof.slopes(description.building.spans)
    layout = lay_out(description, roof_lifts(description, slopes), slopes)
    inner = inner_frame(description, layout)
    return description, layout, inner, stays(description, layout, inner)


def joints(description, layout, inner, runs) -> list[Joint]:
    """The joints of the stays of every kit, in the axes of their work points."""
    bars = {m.name: m for m in inner.kit.all_members()}
    bars |= {
        m.name: m
        for run in purlins(description, layout, inner, (inner, inner), 300.0)[1:2]
        for m in run.kit.members
    }
    found = []
    for run in runs:
        own = {m.name: m for m in run.kit.members}
        for meeting in run.kit.meetings:
            members = []
            for piece in meeting.pieces:
                member = own.get(piece.name) or bars[piece.name]
                place = member.placement.copy()
                if piece.name.startswith("purlin/") and run.kit.members[0].name.endswith("/far"):
                    place[1, 3] -= 6200.0  # the bay before the frame
                place[:, 3] -= meeting.point
                members.append(met(member.role, (member.bar, place), piece.at))
            found.append(Joint(meeting.kind, tuple(members)))
    return found


@pytest.mark.parametrize("purlin", ["Z 200x75x20x2.0", "C 225x75x20x2.5"])
@pytest.mark.parametrize("options", ["", "sides: both, section: L 60x60x6"])
def test_stays_are_bolted_and_hit_nothing(purlin, options):
    description, layout, inner, runs = built(purlin=purlin, options=options)
    made = joints(description, layout, inner, runs)
    assert {joint.members[0].role for joint in made} == {Role.PURLIN, Role.RAFTER}
    for joint in made[::3]:
        assert list(faults(joint, flange_stay(joint, description.connections))) == []


def test_where_stays_stand():
    """Every second purlin from the eaves, on inner frames, in the bay that is not braced.

    The ridge is 10 219 mm from the left, so the slopes are 10 275 and 6866 mm long: less 150 at both ends, 7 and
    5 steps of at most 1600, 8 and 6 purlins. The ones by the ridge, over the end plates, hand theirs down.
    """
    description, layout, inner, runs = built(braced="first, 4")
    assert braced_bays(description, layout) == {0, 3}
    placed = sorted(
        (bay, line) for run in runs for bay, line in zip(run.labels, run.first_lines, strict=True)
    )
    # Line 2 is beside the braced bay 1-2, lines 4 and 5 beside 4-5; line 3 takes the bay before it.
    assert placed == [("2-3", "2"), ("2-3", "3"), ("3-4", "4"), ("5-6", "5")]
    names = {m.name.rsplit("/", 1)[0] for run in runs for m in run.kit.members}
    courses = purlins(description, layout, inner, (inner, inner), 0.0)[0].kit.members
    for slope, expected in ((1, [2, 4, 6, 7]), (2, [7 - 5, 7 - 4, 7 - 2])):
        stayed = sorted(int(name.rsplit("/", 1)[1]) for name in names if f"A-B/{slope}/" in name)
        assert sum(f"purlin/A-B/{slope}/" in m.name for m in courses) == {1: 8, 2: 6}[slope]
        assert stayed == expected
    assert {m.role for run in runs for m in run.kit.members} == {Role.STAY}


def test_no_stays_at_a_frame_between_two_braced_bays():
    *_, runs = built(braced="2, 3")
    assert sorted(line for run in runs for line in run.first_lines) == ["2", "4", "5"]


def test_both_sides():
    *_, runs = built(braced="first", options="sides: both")
    placed = sorted(
        (bay, line) for run in runs for bay, line in zip(run.labels, run.first_lines, strict=True)
    )
    assert placed == [
        ("2-3", "2"), ("2-3", "3"), ("3-4", "3"), ("3-4", "4"), ("4-5", "4"), ("4-5", "5"), ("5-6", "5"),
    ]  # fmt: skip


def test_all_stays_of_a_rafter_are_one_length():
    *_, runs = built(options="sides: both")
    lengths = [m.bar.length for run in runs for m in run.kit.members]
    assert np.ptp(lengths) < 1e-6


@pytest.mark.parametrize("purlin", ["Z 200x75x20x2.0", "C 250x80x22x2.5"])
@pytest.mark.parametrize("sleeve", [800.0, 1200.0])
def test_stays_reach_past_sleeves(purlin, sleeve):
    """Beyond the sleeve by 60 mm at least, and clear of washers of 30 mm and nuts at its end bolts (M16)."""
    cleats = f"continuity: sleeved, sleeve: {sleeve:.0f} mm"
    description, layout, inner, runs = built(purlin=purlin, cleats=cleats)
    gauge = {200.0: 116.0, 250.0: 146.0}[round(description.purlins.section.height, 6)]
    heads = [
        joint for joint in joints(description, layout, inner, runs) if joint.members[0].role is Role.PURLIN
    ]
    for joint in heads:
        made = flange_stay(joint, description.connections)
        course, stay = joint.members
        side = 1.0 if course.to_start < course.to_end else -1.0
        end = course.point(-course.to_start if side > 0 else course.to_end, 0.0, 0.0)
        line = end - course.x * side * 3.0  # the frame's plane: half of the gap of 6 mm
        head = (made.boltings[0].points[0] - line) @ course.x * side
        assert head >= sleeve / 2 + 60.0 - 1e-6
        body = member_solid(stay)
        out = stay.y
        for level in (-gauge / 2, gauge / 2):
            bolt = line + course.x * side * (sleeve / 2 - 30.0) + course.z * level
            nut = cylinder(bolt - out * 60.0, out, 30.0, 120.0)
            assert nut.min_gap(body, 100.0) > 2.0


def test_stays_keep_clear_of_their_purlins_cleats_and_rafters():
    """The whole stay beside the whole rafter and purlin, not at its ends only."""
    description, layout, inner, runs = built()
    pairs = joints(description, layout, inner, runs)
    for joint in pairs[:6]:
        solids = [member_solid(each) for each in joint.members]
        for one, two in combinations(solids, 2):
            assert (one ^ two).volume() < 1.0


@pytest.mark.parametrize(
    "case",
    [
        {"options": "every: 0"},
        {"roof": TRUSS},
    ],
)
def test_none_where_none_are_asked_for(case):
    assert built(**case)[3] == []


@pytest.mark.parametrize(
    ("case", "field"),
    [
        (
            {"more": ", sag_bars: 5", "roof": "{system: rafter, section: UB 762x267x134}"},
            "connections.stays.every",
        ),
        ({"options": "section: L 30x30x3"}, "connections.stays.section"),
        ({"roof": "{system: rafter, section: HEB 120}"}, "connections.stays.every"),
    ],
)
def test_what_finds_no_room_is_refused(case, field):
    with pytest.raises(DescriptionError) as error:
        built(**case)
    assert [fault.field for fault in error.value.faults] == [field]


def test_stays_are_bars_between_their_work_points():
    *_, runs = built()
    for run in runs:
        bars = {m.name: m for m in run.kit.members}
        for meeting in run.kit.meetings:
            end = meeting.pieces[1]
            bar = bars[end.name]
            x = bar.bar.axis[0 if end.at == At.START else 1]
            assert bar.placement[:, 3] + bar.placement[:, 0] * x == pytest.approx(meeting.point)


def test_purlins_refuse_sleeves_that_reach_their_sag_bars():
    """Five rows in the bay of 5 m: the first 833 mm from the frame, less 60: sleeves of 1.547 m at most."""
    case = {"more": ", sag_bars: 5", "options": "every: 0"}
    description, layout, inner, _ = built(**case, cleats="continuity: sleeved, sleeve: 1.54 m")
    purlins(description, layout, inner, (inner, inner), 300.0)
    description, *_ = built(**case, cleats="continuity: sleeved, sleeve: 1.56 m")
    with pytest.raises(DescriptionError) as error:
        purlins(description, layout, inner, (inner, inner), 300.0)
    assert [fault.field for fault in error.value.faults] == ["connections.cleats.sleeve"]
