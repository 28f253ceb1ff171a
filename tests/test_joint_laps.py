"""Lapped purlins: Z of unequal flanges nested in each other over the frames, bolted through both webs."""

from __future__ import annotations

from dataclasses import replace
from functools import lru_cache
from math import cos, pi, radians, sin

import invariants
import numpy as np
import pytest
from fastened import FASTENING_RULES
from joint_bench import bench, faults, met
from overlaps import overlaps
from secondary_cast import LENGTHWISE, UP, steel
from shapely import Polygon
from shapely.affinity import affine_transform

from shedbim.description import read_text
from shedbim.description.connections import Connections
from shedbim.errors import DescriptionError
from shedbim.expand import expand
from shedbim.expand.cold_formed import Course, Stretch, course_bar
from shedbim.expand.joints.cleat import cleat
from shedbim.expand.joints.contract import Joint
from shedbim.expand.joints.lap import purlin_lap
from shedbim.geometry.placements import apply
from shedbim.model.joints import At, JointKind
from shedbim.model.roles import Role
from shedbim.model.solids import solid
from shedbim.sections import catalogue

NAMES = ("Z 200x75/68x20x2.5", "Z 150x66/60x18x1.6", "Z 300x95/84x25x3.0")
OPTIONS = Connections(cleats={"continuity": "lapped"})

SHED = """
project: {{name: Lapped}}
building:
  spans: [9 m]
  bays: {bays}
  eaves: 4 m
  roof: {{form: gable, pitch: 6 deg, pitch_right: 9 deg}}
frames:
  columns: {{section: IPE 330}}
  roof: {{system: rafter, section: IPE 300}}
  gables: {{system: same, posts: IPE 200}}
purlins: {{section: {purlin}, spacing: 1.7 m{more}}}
rails: {{section: {rail}, spacing: 1.9 m}}
bracing:
  bays: [last]
  roof: {{pattern: crossed, section: L 70x70x7}}
  walls: {{pattern: crossed, section: L 70x70x7}}
connections: {{stays: {{sides: both, every: 1}}, cleats: {{{cleats}}}}}
"""
LAPPED = "continuity: lapped, lap: 900 mm"


def described(cleats=LAPPED, purlin=NAMES[0], more="", rail="C 175x65x18x1.6", bays="[5.2 m, 6.3 m, 5.7 m]"):
    return read_text(SHED.format(cleats=cleats, purlin=purlin, more=more, rail=rail, bays=bays))


@lru_cache(maxsize=8)
def built(**case):
    return expand(described(**case))


def purlins_of(shed):
    """Key, part and placement of every purlin."""
    return [
        (key, shed.parts[part], shed.pieces.placement[i])
        for i, (key, part) in enumerate(zip(shed.pieces.keys, shed.pieces.part.tolist(), strict=True))
        if shed.parts[part].role is Role.PURLIN
    ]


# The section


def test_a_z_of_two_flanges():
    """By hand: the outline is that of the equal Z with 7 mm of strip less in the lower flange."""
    unequal, equal = (catalogue.section(name) for name in (NAMES[0], "Z 200x75x20x2.5"))
    assert unequal.designation == NAMES[0]
    assert catalogue.section("z 200 × 75 / 68 × 20 × 2,50") is unequal
    assert catalogue.section("Z 200x75/75x20x2.5").profile == equal.profile
    assert equal.area - unequal.area == pytest.approx(7.0 * 2.5)
    assert (unequal.height, unequal.width) == pytest.approx((200.0, 75.0 + 68.0 - 2.5))
    # 7 mm are gone from the lower flange before its bend at 73.75 - 6.25, at -64 and -98.75 from the middle of the
    # web; the bend, a quarter of a ring from 3.75 to 6.25, and the lip, 20 - 6.25 long, have come 7 mm nearer.
    moved = pi / 4 * (6.25**2 - 3.75**2) + 13.75 * 2.5
    by_hand = (17.5 * 64.0 + 7.0 * moved) / unequal.area, 17.5 * 98.75 / unequal.area
    assert unequal.profile.outline.centroid == pytest.approx(by_hand)
    assert equal.profile.symmetry.turns == 2
    assert unequal.profile.symmetry.turns == 1


@pytest.mark.parametrize(
    "name",
    ["Z 200x75x68x20x2.5", "Z 200/75x68x20x2.5", "C 200x75/68x20x2", "IPE 300/5", "RHS 200x100/8",
     "Z 200x68/75x20x2.5", "Z 200x75/5x20x2.5"],
)  # fmt: skip
def test_no_other_section_has_a_stroke(name):
    with pytest.raises(catalogue.UnknownSection):
        catalogue.section(name)


# One joint


def lap_joint(name, kind, *, pitch=7.0, rises=True, even_first=False):
    """Two purlins over a rafter, lapped by 1.2 m, and what meets there: both over it, or at either end."""
    slope = radians(pitch if rises else -pitch)
    direction, normal = np.array([cos(slope), 0, sin(slope)]), np.array([-sin(slope), 0, cos(slope)])
    line = Course("purlin", np.zeros(3), direction if rises else -direction, normal, LENGTHWISE)
    section, rafter = catalogue.section(name), catalogue.section("IPE 330")
    wall = section.profile.thickness
    odd, even = replace(line, aside=-wall / 2), replace(line, aside=wall / 2, turned=True)
    near, far = (even, odd) if even_first else (odd, even)
    stretches = ((near, Stretch(-5400.0, 600.0)), (far, Stretch(-600.0, 6100.0)))
    bars = [
        course_bar(course, along, section, Role.PURLIN, "S350GD", "galvanized") for course, along in stretches
    ]
    here, beyond = [(bar.bar, bar.placement) for bar in bars]
    start, end = (At.START, At.END) if line.forwards else (At.END, At.START)
    if kind == "cleat":
        middle = -normal * (section.height / 2 + wall / 2 + 10.0 + rafter.height / 2)
        carrier = steel(Role.RAFTER, "IPE 330", middle - direction * 4000, middle + direction * 5000, UP)
        pair = (met(Role.PURLIN, here, At.ALONG), met(Role.PURLIN, beyond, At.ALONG))
        return Joint(JointKind.PURLIN_CLEAT, (carrier, *pair))
    point = LENGTHWISE * (600.0 if kind == "far" else -600.0)
    moved = [(bar, np.column_stack([place[:, :3], place[:, 3] - point])) for bar, place in (here, beyond)]
    through, ended, at = (moved[1], moved[0], end) if kind == "far" else (moved[0], moved[1], start)
    return Joint(JointKind.PURLIN_LAP, (met(Role.PURLIN, through, At.ALONG), met(Role.PURLIN, ended, at)))


@pytest.mark.parametrize("even_first", [False, True])
@pytest.mark.parametrize("rises", [True, False])
@pytest.mark.parametrize("name", NAMES)
def test_both_webs_lie_on_the_cleat_and_nothing_overlaps(name, rises, even_first):
    joint = lap_joint(name, "cleat", rises=rises, even_first=even_first)
    made = cleat(joint, OPTIONS)
    assert list(faults(joint, made)) == []
    solids = bench(joint, made).drilled
    assert solids[1].min_gap(solids[2], 5.0) == pytest.approx(0.0, abs=1e-3)
    on_cleat = 1 if even_first else 2
    assert solids[on_cleat].min_gap(solids["cleat"], 5.0) == pytest.approx(0.0, abs=1e-3)
    (bolting,) = made.boltings
    assert [layer.of for layer in bolting.layers] == [3 - on_cleat, on_cleat, "cleat"]
    assert len(bolting.points) == 4


@pytest.mark.parametrize("even_first", [False, True])
@pytest.mark.parametrize("rises", [True, False])
@pytest.mark.parametrize("kind", ["near", "far"])
def test_each_end_is_bolted_to_the_web_that_runs_on(kind, rises, even_first):
    joint = lap_joint(NAMES[0], kind, rises=rises, even_first=even_first)
    made = purlin_lap(joint, OPTIONS)
    assert list(faults(joint, made)) == []
    (bolting,) = made.boltings
    assert sorted(layer.of for layer in bolting.layers) == [0, 1]
    # Two bolts, 30 mm from the end, which is at the work point.
    assert [abs(float(point[1])) for point in bolting.points] == pytest.approx([30.0, 30.0])
    assert np.linalg.norm(np.diff(bolting.points, axis=0)) == pytest.approx(116.0)


def test_golden_bolts():
    """2.5 + 2.5 + 8 + 19.8 = 32.8: M16x35; 5 + 19.8 = 24.8: M16x30 (EN 1090-2 8.2.2 and the series)."""
    made = [cleat(lap_joint(NAMES[0], "cleat"), OPTIONS), purlin_lap(lap_joint(NAMES[0], "far"), OPTIONS)]
    assert [each.boltings[0].fastener.designation for each in made] == ["M16x35 4.6", "M16x30 4.6"]


# The shed


def test_nothing_overlaps():
    shed = built()
    bodies = [solid(part.shape, 0.05) for part in shed.parts]
    assert overlaps(bodies, shed.pieces.part, shed.pieces.placement, 1000.0) == []


@pytest.mark.parametrize(
    "case", [{}, {"cleats": "continuity: sleeved", "rail": NAMES[0]}], ids=["lapped", "sleeved"]
)
def test_what_holds_of_every_shed_holds(case):
    assert invariants.broken(built(**case), described(**case)) == []
    assert [fault for rule in FASTENING_RULES for fault in rule(built(**case))] == []


def test_bays_take_turns_and_overlap_by_the_lap():
    """Bays of 5.2, 6.3 and 5.7 m with 450 mm on either side of an inner frame."""
    shed = built()
    lines = np.array(shed.grid.y)
    spans = {}
    for key, part, placement in purlins_of(shed):
        bay = int(key.split("-", maxsplit=1)[0]) - 1
        y = apply(placement, [(x, 0.0, 0.0) for x in part.shape.axis])[:, 1]
        spans[bay] = (y.min(), y.max())
        odd = bay % 2 == 0
        assert (placement[2, 2] > 0) == odd
        # The wide flange is up in odd bays, and open to the ridge.
        corners = apply(placement, [(0.0, y, z) for y, z in part.shape.section.outline.rim])
        normal, uphill = placement[:, 2] * (1 if odd else -1), placement[:, 1] * (1 if odd else -1)
        up, across = corners @ normal, corners @ uphill
        width = np.ptp(across[up > up.max() - 1.0])
        assert width > (75.0 if odd else 68.0) - 12.5 - 1.0
        assert width < (75.0 if odd else 68.0)
        assert uphill[2] > 0.0
    assert spans[0][1] == pytest.approx(lines[1] + 450.0)
    assert spans[1] == pytest.approx((lines[1] - 450.0, lines[2] + 450.0))
    assert spans[2][0] == pytest.approx(lines[2] - 450.0)


def test_the_lower_ones_lie_a_wall_lower_at_the_lift():
    shed = built()
    feet = {}
    for key, part, placement in purlins_of(shed):
        bay, course = key.split("/", 1)
        if course.startswith("purlin/A-B/1/"):
            corners = apply(placement, [(0.0, y, z) for y, z in part.shape.section.outline.rim])
            normal = placement[:, 2] * np.sign(placement[2, 2])
            levels = corners @ normal
            feet.setdefault(course, {})[bay] = (levels.min(), levels.max())
    rafter = next(i for i, key in enumerate(shed.pieces.keys) if key == "2/rafter/A-B/1")
    place, part = shed.pieces.placement[rafter], shed.parts[shed.pieces.part[rafter]]
    top = float((place[:, 3] + place[:, 2] * part.shape.section.height / 2) @ place[:, 2])
    assert len(feet) > 2
    for by_bay in feet.values():
        assert by_bay["2-3"][0] - top == pytest.approx(10.0, abs=1e-6)
        for odd in ("1-2", "3-4"):
            assert np.subtract(by_bay[odd], by_bay["2-3"]) == pytest.approx([2.5, 2.5], abs=1e-6)


def test_joints_of_a_lap():
    """On each inner line a cleat with both purlins along it, and a lap at either end: one END, one ALONG."""
    shed = built()
    courses = {key.split("/", 1)[1] for key, _, _ in purlins_of(shed)}
    runs = [run for run in shed.joints if run.kind is JointKind.PURLIN_LAP]
    assert sum(len(run.pieces) for run in runs) == 2 * 2 * len(courses)
    for run in runs:
        assert (run.at[:, 0] == At.ALONG).all()
        assert (run.at[:, 1] != At.ALONG).all()
    pairs = [run for run in shed.joints if run.kind is JointKind.PURLIN_CLEAT and run.pieces.shape[1] == 3]
    assert sum(len(run.pieces) for run in pairs) == 2 * len(courses)
    assert all((run.at == At.ALONG).all() for run in pairs)
    fitted = set(shed.pieces.keys)
    course = sorted(courses)[0]
    wanted = {f"1-2/{course}/at 2/cleat", f"1-2/{course}/at 2/bolts", f"2-3/{course}/at 3/cleat"}
    wanted |= {f"2-3/{course}/{end}/bolts" for end in ("start", "end")}
    assert wanted <= fitted


def test_stays_stand_beyond_the_laps():
    """In odd and even bays: every bay but the last, which is braced."""
    shed = built()
    heads = [
        (run.points[row, 1], shed.pieces.keys[piece].split("/", 1)[0])
        for run in shed.joints
        if run.kind is JointKind.FLANGE_STAY
        for row, piece in enumerate(run.pieces[:, 0].tolist())
        if shed.parts[shed.pieces.part[piece]].role is Role.PURLIN
    ]
    assert {bay for _, bay in heads} == {"1-2", "2-3"}
    lines = np.array(shed.grid.y)
    assert min(np.abs(lines - y).min() for y, _ in heads) > 450.0


# Refusals, and what stays as it was


@pytest.mark.parametrize(
    ("case", "field"),
    [
        ({"purlin": "Z 200x75x20x2.5"}, "purlins.section"),
        ({"purlin": "C 200x75x20x2.5"}, "purlins.section"),
        ({"purlin": "Z 200x75/69.5x20x2.5"}, "purlins.section"),
        ({"cleats": "continuity: lapped, lap: 2.8 m", "more": ", sag_bars: 3"}, "connections.cleats.lap"),
    ],
)
def test_what_does_not_nest_or_has_no_room_is_refused(case, field):
    with pytest.raises(DescriptionError) as error:
        expand(described(**case))
    assert [fault.field for fault in error.value.faults] == [field]


def test_the_narrowest_nest():
    """Flanges that differ by two walls and 1 mm: the lips are 1 mm apart, both walls touch."""
    shape = Polygon(catalogue.section("Z 200x75/69x20x2.5").profile.outline.polygons(1e-3)[0])
    odd = affine_transform(shape, [1, 0, 0, 1, -1.25, 1.25])
    even = affine_transform(shape, [-1, 0, 0, -1, 1.25, -1.25])
    assert odd.intersection(even).area < 1e-6
    upper, lower = (half.buffer(0) for half in (odd, even))
    lips = [part.intersection(Polygon([(50, 80), (90, 80), (90, 84), (50, 84)])) for part in (upper, lower)]
    assert lips[0].distance(lips[1]) == pytest.approx(1.0, abs=1e-6)
    described(purlin="Z 200x75/69x20x2.5")


def test_a_sag_bar_row_sets_the_longest_lap():
    """One row in the middle of 5.2, 6.3 and 5.7 m: 2 x (2600 - 60) = 5080 mm; three rows: 2 x (1300 - 60) = 2480."""
    expand(described(cleats="continuity: lapped, lap: 2480 mm", more=", sag_bars: 3"))
    with pytest.raises(DescriptionError) as error:
        expand(described(cleats="continuity: lapped, lap: 2482 mm", more=", sag_bars: 3"))
    assert error.value.faults[0].allowed.startswith("2480 mm")


def test_butted_bays_take_no_turns():
    """The length of laps says nothing of them; bays of one length have the same purlins, odd or even."""
    bays = "[5.2 m, 2 x 6.3 m, 5.7 m]"
    plain, named = (built(cleats=cleats, bays=bays) for cleats in ("continuity: butted", "lap: 2 m"))
    assert plain.pieces.keys == named.pieces.keys
    assert [part.shape for part in plain.parts] == [part.shape for part in named.parts]
    assert np.array_equal(plain.pieces.placement, named.pieces.placement)
    assert not any(run.kind is JointKind.PURLIN_LAP for run in plain.joints)
    assert all(placement[2, 2] > 0 for _, _, placement in purlins_of(plain))
    members = {key for key, _, _ in purlins_of(plain)}
    assert members == {key for key, _, _ in purlins_of(built(bays=bays))}
