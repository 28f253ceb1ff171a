"""Site splices: chords, the web bolted across, and trusses divided for the road."""

from __future__ import annotations

from collections.abc import Sequence
from functools import cache
from itertools import pairwise
from math import cos, radians, sin

import cast
import numpy as np
import pytest
from joint_checks import faults, shape_of
from joint_solids import met

from shedbim.description.connections import Connections
from shedbim.errors import DescriptionError
from shedbim.expand import expand
from shedbim.expand.joints.chord_splice import chord_splice
from shedbim.expand.joints.contract import Connection, Joint
from shedbim.expand.joints.web_splice import Beside, lap_of, web_splice
from shedbim.expand.sticks import stick
from shedbim.expand.truss_splits import Outline, cuts
from shedbim.fasteners.distances import wrench_wall
from shedbim.model.joints import At, JointKind
from shedbim.model.roles import Role
from shedbim.model.shed import Shed
from shedbim.sections.catalogue import section

UP = np.eye(3)[2]
OPTIONS = Connections()
THICK = Connections.model_validate({"splices": {"thickness": "30 mm", "bolt": "M24", "web_bolt": "M16"}})


def spliced(name: str, degrees: float, role: Role, gap: float) -> Joint:
    """Two bars of a chord that rises to the right, their ends ``gap`` before the splice."""
    along = np.array([cos(radians(degrees)), 0.0, sin(radians(degrees))])
    left = stick(section(name), along * -3000.0, along * -gap, UP)
    right = stick(section(name), along * gap, along * 4000.0, UP)
    return Joint(
        JointKind.CHORD_SPLICE,
        (met(role, *left, At.END, np.zeros(3)), met(role, *right, At.START, np.zeros(3))),
    )


@pytest.mark.parametrize("options", [OPTIONS, THICK], ids=["plain", "thick"])
@pytest.mark.parametrize("role", [Role.TOP_CHORD, Role.BOTTOM_CHORD], ids=["top", "bottom"])
@pytest.mark.parametrize(
    ("name", "degrees"), [("SHS 150x150x8", 6.0), ("RHS 160x80x6", -11.0), ("SHS 100x100x5", 0.0)]
)
def test_spliced_chords_hold(name, degrees, role, options):
    joint = spliced(name, degrees, role, 20.0)
    made = chord_splice(joint, options)
    assert faults(joint, made) == []
    assert len(made.boltings[0].points) >= 4
    # Square to the axis, and nothing above a top chord nor below a bottom chord.
    normal = joint.members[1].z if role is Role.TOP_CHORD else -joint.members[1].z
    half = joint.members[0].section.height / 2
    for fitting in made.fittings:
        assert abs(float(fitting.frame[:, 2] @ joint.members[0].x)) == pytest.approx(1.0)
        corners = np.array([[*corner, 0.0] for corner in fitting.shape.corners]) @ fitting.frame[:, :3].T
        assert ((corners + fitting.frame[:, 3]) @ normal).max() < half + 1e-6
    moved = [work.set_back for work in made.works]
    assert moved == ([] if options is OPTIONS else pytest.approx([10.0, 10.0]))


WEBS = [
    ("SHS 140x140x8", "SHS 70x70x5", 52.0, 0.0),
    ("SHS 140x140x8", "SHS 90x90x5", 133.0, 6.0),
    ("RHS 200x120x8", "CHS 76.1x4", 90.0, -4.0),
    ("SHS 100x100x5", "CHS 48.3x4", 38.0, 0.0),
    ("SHS 120x120x6", "RHS 80x40x4", 145.0, 9.0),
]


def joined(
    chord_name: str, web_name: str, degrees: float, pitch: float, options: Connections, up: int = 1
) -> Joint:
    """A web that leaves a chord at an angle to it, sawn square where its lap ends."""
    chord, web = section(chord_name), section(web_name)
    along = np.array([cos(radians(pitch)), 0.0, sin(radians(pitch))])
    off = up * np.array([-along[2], 0.0, along[0]])
    direction = (cos(radians(degrees)), sin(radians(degrees)))
    leaving = along * direction[0] + off * direction[1]
    start = off * chord.height / 2 + leaving * lap_of(web, direction, [], options.splices).end
    bars = stick(chord, along * -2000.0, along * 3000.0, UP)
    lean = stick(web, start, start + leaving * 1500.0, np.cross(leaving, [0.0, 1.0, 0.0]))
    point = np.zeros(3)
    return Joint(
        JointKind.WEB_SPLICE,
        (met(Role.BOTTOM_CHORD, *bars, At.ALONG, point), met(Role.DIAGONAL, *lean, At.START, point)),
    )


@pytest.mark.parametrize("options", [OPTIONS, THICK], ids=["plain", "M16"])
@pytest.mark.parametrize("up", [1, -1], ids=["bottom chord", "top chord"])
@pytest.mark.parametrize("case", WEBS, ids=lambda case: case[1])
def test_webs_joined_on_site_hold(case, up, options):
    if options is THICK and case[1] == "CHS 48.3x4":
        options = Connections.model_validate({"splices": {"web_bolt": "M12"}})
    joint = joined(*case, options, up)
    made = web_splice(joint, options)
    assert faults(joint, made) == []
    assert len(made.boltings[0].points) == 2
    # The web stays loose of the chord's own shop assembly.
    assert all(not weld.site and set(weld.between) != {0, 1} for weld in made.welds)


def test_the_mirrored_joint_gives_the_mirrored_plates():
    one = joined("SHS 140x140x8", "SHS 70x70x5", 52.0, 6.0, OPTIONS)
    other = joined("SHS 140x140x8", "SHS 70x70x5", 128.0, -6.0, OPTIONS)
    plates = [Connection(web_splice(joint, OPTIONS).fittings) for joint in (one, other)]
    first, second = shape_of(one, plates[0]), shape_of(other, plates[1], flip=(0,))
    assert (first - second).volume() < 1.0
    assert first.volume() == pytest.approx(second.volume())


def test_bolts_move_up_the_web_until_a_wrench_passes_the_next_web():
    web, direction = section("SHS 70x70x5"), (cos(radians(60)), sin(radians(60)))
    alone = lap_of(web, direction, [], OPTIONS.splices)
    near = Beside(-42.0, (-0.2, 0.98))
    lap = lap_of(web, direction, [near], OPTIONS.splices)
    for each in (lap.first, lap.second):
        x, y = each * direction[0] + 42.0, each * direction[1]
        assert abs(x * 0.98 + y * 0.2) >= wrench_wall(lap.room.diameter)
    steep = lap_of(web, direction, [Beside(10.0, (0.62, 0.785))], OPTIONS.splices)
    assert steep.first > alone.first
    assert steep.end - steep.first == pytest.approx(alone.end - alone.first)


def test_a_web_too_narrow_for_bolts_is_refused():
    with pytest.raises(DescriptionError, match="too narrow for its bolts"):
        lap_of(section("SHS 25x25x2.5"), (0.6, 0.8), [], OPTIONS.splices)


# Where a truss is divided


def warren(
    panels: int, panel: float, ridge: float | None = None, busy: Sequence[tuple[float, float]] = ()
) -> Outline:
    """Bottom nodes at the panel points, top nodes in mid-panel, diagonals between them."""
    bottom = [panel * k for k in range(panels + 1)]
    top = [panel * (k + 0.5) for k in range(panels)]
    webs = [pair for k in range(panels) for pair in ((k, k), (k + 1, k))]
    toes = tuple(
        [(nodes[web[i]] - 50.0, nodes[web[i]] + 50.0) for web in webs]
        for i, nodes in enumerate((bottom, top))
    )
    return Outline(
        webs, [True] * len(webs), (bottom, top), toes, (-30.0, panel * panels + 30.0), 1.0, ridge, ((), busy)
    )


def test_few_cuts_that_leave_no_part_too_long():
    """Four parts of 30.06 m would be 7.5 m long, but for the webs that stand out of them: over 9 m, so five."""
    outline = warren(12, 2500.0)
    assert cuts(outline, 30_060.0) == []
    for longest, parts in ((18_000.0, 2), (16_000.0, 2), (12_000.0, 3), (9_000.0, 5)):
        found = cuts(outline, longest)
        assert len(found) == parts - 1
        stops = [-30.0, *[cut.middle for cut in found], 30_030.0]
        assert max(b - a for a, b in pairwise(stops)) <= longest
    assert cuts(outline, 1_500.0) is None


def test_a_cut_crosses_one_web_a_third_of_a_panel_off_its_nodes():
    (cut,) = cuts(warren(12, 2500.0), 18_000.0)
    outline = warren(12, 2500.0)
    bottom, top = outline.webs[cut.web]
    for chord, node in enumerate((outline.nodes[0][bottom], outline.nodes[1][top])):
        assert abs(cut.x[chord] - node) == pytest.approx(2500.0 / 3)
    crossing = [
        w for w, (b, t) in enumerate(outline.webs)
        if (outline.nodes[0][b] < cut.x[0]) != (outline.nodes[1][t] < cut.x[1])
    ]  # fmt: skip
    assert crossing == [cut.web]


def test_cuts_keep_off_the_ridge_and_the_nodes_of_the_roof_bracing():
    plain = cuts(warren(12, 2500.0), 18_000.0)[0]
    low, high = plain.x[1] - 510.0, plain.x[1] + 490.0
    moved = cuts(warren(12, 2500.0, busy=[(low, high)]), 18_000.0)[0]
    assert not low < moved.x[1] < high
    ridge = cuts(warren(12, 2500.0, ridge=plain.x[1]), 18_000.0)[0]
    assert min(abs(x - plain.x[1]) for x in ridge.x) > 260.0 - 1e-6


@cache
def divided(name: str, longest: str) -> Shed:
    return expand(cast.changed(name, frames__roof__longest=longest))


def test_trusses_that_are_not_divided_keep_their_keys():
    keys = set(divided("lopsided", "none").pieces.keys)
    assert not any(key.split("/")[-1] == "2" and "chord/A-B/1/" in key for key in keys)
    assert "2/truss/top chord/A-B/1" in keys
    parts = set(divided("lopsided", "12 m").pieces.keys)
    # Only chords and what stands at them change; webs keep their names.
    assert {k for k in keys if "/diagonal/" in k and k.count("/") == 4} <= parts


@pytest.mark.parametrize(("name", "longest"), [("lopsided", "12 m"), ("valley", "12 m"), ("flat", "7.5 m")])
def test_divided_trusses_leave_the_shop_in_parts_short_enough(name, longest):
    shed = divided(name, longest)
    most = float(longest.split()[0]) * 1000.0
    spans = cast.described(name).building.spans
    halves = [i for i, key in enumerate(shed.assemblies.keys) if "/truss/" in key]
    lines = {key.split("/")[0] for key in shed.assemblies.keys if "/truss/" in key}
    assert len(halves) == 2 * len(lines) * len([span for span in spans if span > most])
    for kind, each in ((JointKind.CHORD_SPLICE, 2), (JointKind.WEB_SPLICE, 1)):
        count = sum(len(run.pieces) for run in shed.joints if run.kind is kind)
        assert count == each * len(halves) // 2
    for half in halves:
        inside = np.flatnonzero(shed.pieces.assembly == half)
        members = [
            i for i in inside if shed.parts[shed.pieces.part[i]].role in (Role.TOP_CHORD, Role.BOTTOM_CHORD)
        ]
        ends = []
        for i in members:
            bar, place = shed.parts[shed.pieces.part[i]].bar, shed.pieces.placement[i]
            ends += [place[:, 3], place[:, 3] + place[:, 0] * bar.length]
        x = np.array(ends)[:, 0]
        assert np.ptp(x) < most
