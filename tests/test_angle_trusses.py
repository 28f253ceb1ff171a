"""Trusses of pairs of angles: nodes, gussets, welds, bolts, packs, and what is refused."""

from __future__ import annotations

from functools import cache
from itertools import combinations, pairwise

import numpy as np
import pytest
from joint_checks import faults
from joint_solids import apart, scene
from manifold3d import CrossSection
from overlaps import overlaps

from shedbim.description.reading import read_text
from shedbim.errors import DescriptionError
from shedbim.expand import connecting, expand
from shedbim.expand.joints.contract import Connection, Joint
from shedbim.expand.joints.gusset_legs import Leg, Web, starts, toe_length
from shedbim.expand.joints.table import JOINTS, JointRow
from shedbim.fasteners.distances import least_edge, least_pitch
from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.joints import JointKind
from shedbim.model.plates import Plate
from shedbim.model.roles import Role, Sort
from shedbim.model.shed import Shed
from shedbim.model.solids import solid
from shedbim.sections.catalogue import section

TEXT = """
project: {id: 0d6c1e0a-8d53-4a0c-9a64-0c7d4d0f3b11, name: Angle Bench, number: T9}
building:
  spans: [13.4 m]
  bays: [5.3 m, 4.4 m]
  eaves: 4.9 m
  roof: {form: gable, pitch: 9 deg, pitch_right: 13 deg}
frames:
  columns: {section: HEA 240}
  roof:
    system: angle-truss
    shape: pitched
    pattern: pratt
    panels: 7
    depth: 1.2 m
    top_chord: L 100x100x10
    bottom_chord: L 90x90x8
    end_diagonals: L 70x70x7
    diagonals: L 60x60x6
    posts: L 50x50x5
  gables: {system: rafter, rafter: IPE 240, posts: IPE 200}
purlins: {section: Z 175x65x18x2.0, spacing: 1.7 m, eaves_offset: 80 mm}
rails: {section: C 175x65x18x1.6, spacing: 1.7 m}
bracing:
  bays: [1, 2]
  roof: {pattern: crossed, section: L 70x70x7}
  walls: {pattern: crossed, section: L 70x70x7}
  ties: {spacing: 5 m}
"""
MIRRORED = (("9 deg, pitch_right: 13 deg", "13 deg, pitch_right: 9 deg"),)
BOLTED = (
    (
        "bracing:",
        "connections: {truss_gussets: {fastening: bolted, bolts: 3, size: M12, packs: 700 mm}}\nbracing:",
    ),
)
WARREN = (
    ("pratt", "warren"), ("{form: gable, pitch: 9 deg, pitch_right: 13 deg}", "{form: mono-pitch, pitch: 4 deg}"),
    ("shape: pitched", "shape: parallel\n    gusset: 12 mm"), ("panels: 7", "panels: 6"),
)  # fmt: skip
HOWE = (("pratt", "howe"), ("shape: pitched", "shape: parallel"))
#: Trusses in the end walls too, over posts; both chords kink.
SAME = (
    ("system: rafter, rafter: IPE 240, posts", "system: same, post_spacing: 4 m, posts"),
    ("shape: pitched", "shape: parallel"),
)
CASES = {"plain": (), "mirrored": MIRRORED, "bolted": BOLTED, "howe": HOWE, "warren": WARREN, "same": SAME}
ANGLE_KINDS = (JointKind.ANGLE_NODE, JointKind.ANGLE_COLUMN)
ALL = pytest.mark.parametrize("case", CASES)


def text_of(changes: tuple[tuple[str, str], ...]) -> str:
    text = TEXT
    for old, new in changes:
        assert old in text
        text = text.replace(old, new)
    return text


@cache
def made(case: str) -> tuple[Shed, tuple[tuple[Joint, Connection], ...]]:
    """The shed of a case, and all its joints of trusses as they were seen and made."""
    seen: list[tuple[Joint, Connection]] = []

    def watched(row: JointRow) -> JointRow:
        def make(joint, options):
            connection = row.make(joint, options)
            seen.append((joint, connection))
            return connection

        return JointRow(make, row.sees_neighbours, row.sees_all_round)

    kinds = (*ANGLE_KINDS, JointKind.PACKED_PAIR)
    rows = {kind: watched(row) if kind in kinds else row for kind, row in JOINTS.items()}
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(connecting, "JOINTS", rows)
        shed = expand(read_text(text_of(CASES[case])))
    return shed, tuple(seen)


def nodes(case: str) -> list[tuple[Joint, Connection]]:
    return [(joint, made) for joint, made in made(case)[1] if joint.kind in ANGLE_KINDS]


def is_web(met) -> bool:
    return met.role in (Role.DIAGONAL, Role.POST)


@ALL
def test_axes_meet_at_the_nodes_between_the_two_angles_of_each_pair(case):
    shed, _ = made(case)
    gap = 12.0 if case == "warren" else 10.0
    count = 0
    for run in shed.joints:
        if run.kind not in ANGLE_KINDS:
            continue
        for pieces, point in zip(run.pieces, run.points, strict=True):
            for i in pieces:
                part = shed.parts[shed.pieces.part[i]]
                if part.role is Role.COLUMN:
                    continue
                placement = shed.pieces.placement[i]
                off = point - placement[:, 3]
                off -= placement[:, 0] * float(off @ placement[:, 0])
                assert np.hypot(off[0], off[2]) < 0.01, shed.pieces.keys[i]
                assert abs(off[1]) == pytest.approx(gap / 2 - part.bar.section.outline.bounds[0], abs=0.01)
                side = "near" if off[1] > 0 else "far"
                assert shed.pieces.keys[i].endswith(side)
                count += 1
    assert count > 40


def test_the_backs_of_the_bottom_chord_are_at_eaves_level():
    shed, _ = made("plain")
    for key, number, placement in zip(shed.pieces.keys, shed.pieces.part, shed.pieces.placement, strict=True):
        if key.startswith("2/truss/bottom chord/") and key.endswith(("/near", "/far")):
            low = solid(shed.parts[number].shape).transform(placement).bounding_box()[2]
            assert low == pytest.approx(4900.0, abs=0.01)


@ALL
def test_joints_hold(case):
    for joint, connection in made(case)[1]:
        assert faults(joint, connection, walls=joint.kind is not JointKind.PACKED_PAIR) == []


@ALL
def test_webs_stop_clear_of_chords_and_of_each_other(case):
    nearest = []
    for joint, connection in nodes(case):
        solids = scene(joint, connection)
        ours = [i for i, met in enumerate(joint.members) if met.origin[1] < 0 and met.role is not Role.COLUMN]
        for a, b in combinations(ours, 2):
            if is_web(joint.members[a]) or is_web(joint.members[b]):
                nearest.append(apart(solids[a], solids[b]))
    # Common practice: 10 to 20 mm, and never less.
    assert min(nearest) > 9.9
    assert sum(gap < 20.1 for gap in nearest) > len(nearest) / 3


def flat(plate: Plate, frame: np.ndarray) -> CrossSection:
    """A plate in the plane of the truss, in x and z of the joint."""
    corners = np.array([[*corner, 0.0] for corner in plate.corners]) @ frame[:, :3].T + frame[:, 3]
    area = CrossSection([corners[:, [0, 2]]])
    return area if area.area() > 0 else CrossSection([corners[::-1][:, [0, 2]]])


def holds(area: CrossSection, point: np.ndarray) -> bool:
    x, z = point
    spot = CrossSection(
        [np.array([[x - 0.1, z - 0.1], [x + 0.1, z - 0.1], [x + 0.1, z + 0.1], [x - 0.1, z + 0.1]])]
    )
    return (spot - area).area() < 1e-4


@pytest.mark.parametrize("case", [case for case in CASES if case != "bolted"])
def test_gussets_reach_members_along_their_welds_with_room_beside_them(case):
    for joint, connection in nodes(case):
        (gusset,) = [each for each in connection.fittings if each.name == "gusset"]
        area = flat(gusset.shape, gusset.frame)
        welded = {ref for weld in connection.welds for ref in weld.between if isinstance(ref, int)}
        angles = {i for i, met in enumerate(joint.members) if met.role is not Role.COLUMN}
        assert welded == angles
        for number in angles:
            met = joint.members[number]
            low, high = met.section.outline.bounds[1], met.section.outline.bounds[3]
            (weld,) = [weld for weld in connection.welds if number in weld.between]
            if not is_web(met):
                continue
            # Twice the leg along the heel; along the toe what balances it about the axis, 40 mm at least.
            heel = 2 * met.section.height
            toe = weld.length - heel
            assert toe == pytest.approx(max(10 * np.ceil(heel * -low / high / 10 - 1e-9), 40.0))
            for length, z in ((heel, low - 10.0), (toe, high + 10.0)):
                for x in (0.5, length - 0.5):
                    point = (met.origin + met.into * x + met.z * z)[[0, 2]]
                    assert holds(area, point), (joint.kind, met.role, x, z)


@ALL
def test_gussets_stay_inside_the_backs_of_the_chords(case):
    for joint, connection in nodes(case):
        (gusset,) = [each for each in connection.fittings if each.name == "gusset"]
        corners = np.array([[*corner, 0.0] for corner in gusset.shape.corners]) @ gusset.frame[:, :3].T
        corners = corners + gusset.frame[:, 3]
        chords = [met for met in joint.members if met.role in (Role.TOP_CHORD, Role.BOTTOM_CHORD)]
        inside = np.array([(corners - met.origin) @ met.z - met.section.outline.bounds[1] for met in chords])
        # At a ridge the bottom chord's hollow side takes a corner inside the backs of either length.
        assert inside.max(axis=0).min() > 4.9
        assert gusset.shape.thickness == (12.0 if case == "warren" else 10.0)


@ALL
def test_nothing_overlaps_and_a_welded_truss_is_one_piece_of_the_shop(case):
    shed, _ = made(case)
    bodies = [solid(part.shape, 0.1) for part in shed.parts]
    assert overlaps(bodies, shed.pieces.part, shed.pieces.placement, 1000.0) == []
    trusses = {
        shed.pieces.assembly[i]
        for i, key in enumerate(shed.pieces.keys)
        if key.startswith("2/truss/") and key.split("/")[2] in ("top chord", "bottom chord")
        and shed.parts[shed.pieces.part[i]].role.sort is Sort.MEMBER
    }  # fmt: skip
    # Webs that are bolted leave two chords with their gussets.
    names = sorted(shed.assemblies.keys[i] for i in trusses)
    assert names == (["2/truss/A-B/1", "2/truss/A-B/2"] if case == "bolted" else ["2/truss/A-B"])


def test_a_mirrored_roof_has_mirrored_trusses():
    def places(case: str, mirror: bool) -> np.ndarray:
        shed, _ = made(case)
        rows = []
        for key, number, placement in zip(
            shed.pieces.keys, shed.pieces.part, shed.pieces.placement, strict=True
        ):
            part = shed.parts[number]
            if not key.startswith("2/truss/") or isinstance(part.shape, BoltGroup):
                continue
            box = solid(part.shape, 0.1).transform(placement).bounding_box()
            low, high = (13400.0 - box[3], 13400.0 - box[0]) if mirror else (box[0], box[3])
            rows.append((low, high, box[1], box[4], box[2], box[5], part.shape.mass * 1e3))
        found = np.array(rows)
        return found[np.lexsort(np.round(found, 0).T)]

    assert places("plain", mirror=True) == pytest.approx(places("mirrored", mirror=False), abs=0.02)


def test_bolted_webs_keep_their_distances():
    count = 0
    for joint, connection in nodes("bolted"):
        (gusset,) = [each for each in connection.fittings if each.name == "gusset"]
        area = flat(gusset.shape, gusset.frame)
        for bolting in connection.boltings:
            webs = [layer.of for layer in bolting.layers if isinstance(layer.of, int)]
            if "gusset" not in [layer.of for layer in bolting.layers]:
                continue
            count += 1
            assert (len(bolting.points), bolting.fastener.diameter) == (3, 12.0)
            hole = 13.0  # EN 1090-2: 1 mm over M12
            inset = area.offset(-least_edge(hole) + 0.01)
            met = joint.members[webs[0]]
            for point in bolting.points:
                assert holds(inset, point[[0, 2]])
                along, _, up = met.local(point)
                reach = along if float(met.into @ met.x) > 0 else -along
                assert reach >= least_edge(hole)
                assert met.section.outline.bounds[3] - up >= least_edge(hole)
            for a, b in pairwise(bolting.points):
                assert np.linalg.norm(b - a) >= least_pitch(hole)
    assert count > 10


@ALL
def test_packs_hold_the_angles_of_every_pair_together(case):
    shed, _ = made(case)
    most = 700.0 if case == "bolted" else 1000.0
    held: dict[int, list[float]] = {}
    for run in shed.joints:
        for number in range(len(run.pieces)):
            plates = [
                i for i in run.fittings[number] if isinstance(shed.parts[shed.pieces.part[i]].shape, Plate)
            ]
            if run.kind in (*ANGLE_KINDS, JointKind.PACKED_PAIR):
                pack = next(
                    i for i in plates if shed.parts[shed.pieces.part[i]].role in (Role.PACK, Role.GUSSET)
                )
                box = solid(shed.parts[shed.pieces.part[pack]].shape).transform(shed.pieces.placement[pack])
                middle = np.array(box.bounding_box()).reshape(2, 3).mean(axis=0)
                for i in run.pieces[number]:
                    if shed.parts[shed.pieces.part[i]].role is not Role.COLUMN:
                        held.setdefault(int(i), []).append(middle)
    webs = 0
    for i, middles in held.items():
        part, placement = shed.parts[shed.pieces.part[i]], shed.pieces.placement[i]
        x = np.sort((np.array(middles) - placement[:, 3]) @ placement[:, 0])
        reach = 250.0  # a gusset's middle is not its edge
        assert np.diff(x).max() < most + 2 * reach, shed.pieces.keys[i]
        if part.role in (Role.DIAGONAL, Role.POST):
            webs += 1
            assert len(x) >= 4, shed.pieces.keys[i]  # a gusset at each end, packs at the third points
    assert webs > 20


def test_purlins_are_welded_to_both_angles_and_ties_to_the_one_beside_them():
    shed, _ = made("plain")
    keys = shed.pieces.keys
    seen = set()
    for run in shed.joints:
        for pieces in run.pieces:
            names = [keys[i] for i in pieces]
            on_chord = [name for name in names if "chord/" in name and "tie" not in name]
            if run.kind is JointKind.PURLIN_CLEAT and on_chord:
                assert [name.rsplit("/", 1)[1] for name in on_chord] == ["near", "far"]
                welded = {column for weld in run.welds for column in weld.between}
                assert {0, len(pieces) - 1} <= welded
            elif run.kind in (JointKind.TIE_END, JointKind.STRUT_END, JointKind.BRACE_GUSSET) and on_chord:
                # What lies in the bay after line 2 meets the far angle.
                bay = names[-1].split("/", 1)[0]
                assert on_chord[0].endswith("far" if bay == "2-3" else "near")
                seen.add((run.kind, bay))
    both = {(kind, bay) for kind in (JointKind.STRUT_END, JointKind.BRACE_GUSSET) for bay in ("1-2", "2-3")}
    assert both <= seen


def test_lengths_of_welds_balance_about_the_axis_of_an_angle():
    # EN 10056-1, L 100x100x10: 28.2 mm from the back to the centroid.
    low, high = section("L 100x100x10").outline.bounds[1::2]
    leg = Leg(np.zeros(2), np.array([1.0, 0.0]), np.array([0.0, 1.0]), -low, high)
    assert leg.back == pytest.approx(28.2, abs=0.1)
    assert toe_length(leg, 200.0) == 80.0  # 200 x 28.2 / 71.8 = 78.6, in steps of 10 mm
    assert toe_length(leg, 60.0) == 40.0


def test_two_like_diagonals_stop_alike_on_either_side_of_their_middle():
    run = np.array([np.cos(1.0), np.sin(1.0)])
    right = Leg(np.zeros(2), run, np.array([-run[1], run[0]]), 17.0, 43.0)
    left = Leg(np.zeros(2), run * [-1, 1], np.array([run[1], run[0]]), 17.0, 43.0)
    chord = (np.array([0.0, 60.0]), np.array([0.0, 1.0]))
    a, b = starts(np.zeros(2), [Web(left, False), Web(right, False)], [[chord], [chord]])
    assert a == pytest.approx(b)
    assert a >= 60.0
    # Beside a post the diagonal gives way alone.
    post = Leg(np.zeros(2), np.array([0.0, 1.0]), np.array([-1.0, 0.0]), 17.0, 43.0)
    upright, leaning = starts(np.zeros(2), [Web(post, True), Web(right, False)], [[chord], [chord]])
    assert upright == pytest.approx(60.0)
    corner = run * leaning + right.heel * 17.0
    assert corner[0] >= 43.0 + 15.0 - 1e-9


@pytest.mark.parametrize(
    ("old", "new", "field"),
    [
        ("HEA 240", "SHS 250x250x10", "frames.columns.section"),
        ("L 60x60x6\n    posts", "L 60x40x6\n    posts", "frames.roof.diagonals"),
        ("top_chord: L 100x100x10", "top_chord: L 60x60x6", "frames.roof.end_diagonals"),
        ("frames:\n  columns: {section: HEA 240}",
         "connections: {chords: {bolt: M24}}\nframes:\n  columns: {section: IPE 200}", "connections.chords.bolt"),
        ("top_chord: L 100x100x10", "top_chord: SHS 100x100x5", "frames.roof.top_chord"),
        ("roof: {pattern: crossed, section: L 70x70x7}", "roof: {pattern: crossed, section: L 120x120x10}",
         "frames.roof.top_chord"),
        ("bracing:", "connections: {truss_gussets: {fastening: bolted, size: M24}}\nbracing:",
         "connections.truss_gussets.size"),
    ],
)  # fmt: skip
def test_what_cannot_be_made_is_refused_with_the_field_to_change(old, new, field):
    with pytest.raises(DescriptionError) as caught:
        expand(read_text(text_of(((old, new),))))
    assert field in [fault.field for fault in caught.value.faults]
