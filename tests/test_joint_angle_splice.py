"""Bolted cover splices of chords of two angles, and trusses of angles divided for the road."""

from __future__ import annotations

from functools import cache
from itertools import combinations
from math import cos, radians, sin

import cast
import invariants
import numpy as np
import pytest
from fastened import FASTENING_RULES
from joint_checks import faults, shape_of
from joint_solids import apart, met
from manifold3d import Manifold
from overlaps import overlaps
from test_angle_trusses import BOLTED, SAME, WARREN, text_of

from shedbim.description import Description, read_text
from shedbim.description.connections import Connections
from shedbim.errors import DescriptionError
from shedbim.expand import expand
from shedbim.expand.joints.angle_splice import angle_splice
from shedbim.expand.joints.contract import Connection, Joint
from shedbim.expand.pairs import pair_of
from shedbim.fasteners.distances import least_edge, least_gauge, least_pitch
from shedbim.model.joints import At, JointKind, JointRun
from shedbim.model.roles import Role
from shedbim.model.shed import Shed
from shedbim.model.solids import solid
from shedbim.sections.catalogue import section

CHORDS = (Role.TOP_CHORD, Role.BOTTOM_CHORD)
#: Angles, the bolts by rule (back marks: common practice), and rows in a leg.
ANGLES = [
    ("L 45x45x4.5", 12.0, 1),
    ("L 50x50x5", 12.0, 1),
    ("L 60x60x6", 16.0, 1),
    ("L 70x70x7", 20.0, 1),
    ("L 100x100x10", 20.0, 1),
    ("L 120x120x12", 16.0, 2),
    ("L 150x150x15", 16.0, 2),
]


def spliced(name: str, degrees: float, role: Role, gap: float = 10.0, half: float = 3.0) -> Joint:
    """Two lengths of a chord that rises to the right, their ends ``half`` before the splice."""
    run = np.array([cos(radians(degrees)), sin(radians(degrees))])
    heel = np.array([-run[1], run[0]]) * (1 if role is Role.TOP_CHORD else -1)
    left, right = (
        pair_of(word, role, section(name), line, heel, gap, (None, None), "S355", "painted")
        for word, line in (("left", (-3000 * run, -half * run)), ("right", (half * run, 4000 * run)))
    )
    ends = zip((left, right), (left.meets(At.END), right.meets(At.START)), strict=True)
    near, far = zip(*[((p.near, a), (p.far, b)) for p, (a, b) in ends], strict=True)
    return Joint(
        JointKind.ANGLE_SPLICE,
        tuple(
            met(role, member.bar, member.placement, meets.at, np.zeros(3)) for member, meets in (*near, *far)
        ),
    )


def options(**own: object) -> Connections:
    return Connections.model_validate({"splices": own})


@pytest.mark.parametrize("role", CHORDS, ids=lambda role: role.word)
@pytest.mark.parametrize(
    ("name", "own"),
    [(name, {}) for name, _, _ in ANGLES]
    + [
        ("L 60x60x6", {"row": 2, "bolt": "M12"}),
        ("L 100x100x10", {"row": 4, "cover": "20 mm", "bolt": "M24"}),
    ],
)
def test_spliced_chords_hold(name, own, role):
    """Nothing overlaps, bolts keep their distances, wrenches turn on heads and nuts, and nothing is loose."""
    joint = spliced(name, 9.0, role) if role is Role.TOP_CHORD else spliced(name, -4.0, role, 14.0)
    assert faults(joint, angle_splice(joint, options(**own))) == []


@pytest.mark.parametrize("case", ANGLES, ids=lambda case: case[0])
def test_each_leg_has_its_rows_of_bolts_on_either_side(case):
    name, diameter, rows = case
    joint = spliced(name, 0.0, Role.TOP_CHORD)
    made = angle_splice(joint, options(row=3))
    holes = {number: [] for number in range(4)}
    for bolting in made.boltings:
        assert bolting.fastener.diameter == diameter
        assert len(bolting.points) == 3 * rows
        for layer in bolting.layers:
            if isinstance(layer.of, int):
                holes[layer.of].append(bolting)
    # Each angle is bolted to the plate in the gap by one leg and to the cover by the other.
    for boltings in holes.values():
        through = [{layer.of for layer in each.layers if isinstance(layer.of, str)} for each in boltings]
        assert sorted(map(sorted, through)) == [["cover"], ["splice plate"]]


@pytest.mark.parametrize("case", ANGLES, ids=lambda case: case[0])
def test_distances_of_table_3_3_are_held(case):
    """EN 1993-1-8 Table 3.3: 2.2 d0 along, 2.4 d0 across, 1.2 d0 to ends; 14 t and 200 mm at most (from memory)."""
    name, diameter, _ = case
    # EN 1090-2 Table 11: 1 mm over M12, 2 mm over M16 and M20.
    hole = diameter + (1.0 if diameter == 12.0 else 2.0)
    wall = section(name).profile.thickness
    for bolting in angle_splice(spliced(name, 0.0, Role.TOP_CHORD), options()).boltings:
        along = np.unique(np.abs(bolting.points[:, 0]).round(6))
        assert along[0] - 3.0 >= least_edge(hole)
        assert np.diff(along).min() >= least_pitch(hole)
        assert np.diff(along).max() <= min(14 * wall, 200.0)
        first = bolting.points[np.isclose(np.abs(bolting.points[:, 0]), along[0])]
        for a, b in combinations(first, 2):
            assert np.linalg.norm(a - b) >= least_gauge(hole)


@pytest.mark.parametrize("role", CHORDS, ids=lambda role: role.word)
def test_a_plate_packs_the_gap_and_a_cover_lies_on_the_backs(role):
    joint = spliced("L 90x90x9", 0.0, role, 12.0)
    made = angle_splice(joint, options())
    up = 1.0 if role is Role.TOP_CHORD else -1.0
    # EN 10056-1, L 90x90x9: 25.4 mm from the back to the centroid.
    back = 25.4
    boxes = {each.name: box(solid(each.shape).transform(each.frame)) for each in made.fittings}
    (_, low_y, low_z), (_, high_y, high_z) = boxes["splice plate"]
    assert (low_y, high_y) == pytest.approx((-6.0, 6.0))
    # As wide as the leg, but for the 5 mm that gussets too keep inside the backs.
    assert sorted((up * low_z, up * high_z)) == pytest.approx([back - 90.0, back - 5.0], abs=0.1)
    (_, low_y, low_z), (_, high_y, high_z) = boxes["cover"]
    assert (low_y, high_y) == pytest.approx((-96.0, 96.0))
    # No thinner than the leg: 10 mm is the next plate of the stock over 9.
    assert sorted((up * low_z, up * high_z)) == pytest.approx([back, back + 10.0], abs=0.1)
    assert {each.role for each in made.fittings} == {Role.SPLICE_PLATE}
    assert made.welds == ()
    # Heads are on the cover, where there is least room to miss.
    for bolting in made.boltings:
        if bolting.layers[0].of == "cover":
            assert (bolting.points[:, 2] * up).min() == pytest.approx(back + 10.0, abs=0.1)


def box(body) -> np.ndarray:
    return np.array(body.bounding_box()).reshape(2, 3)


def test_the_mirrored_splice_has_the_mirrored_plates():
    joints = [spliced("L 80x80x8", degrees, Role.TOP_CHORD) for degrees in (7.0, -7.0)]
    plates = [Connection(angle_splice(joint, options()).fittings) for joint in joints]
    first, second = shape_of(joints[0], plates[0]), shape_of(joints[1], plates[1], flip=(0,))
    assert (first - second).volume() < 1.0
    assert first.volume() == pytest.approx(second.volume())


@pytest.mark.parametrize(
    ("name", "own", "field"),
    [
        ("L 50x50x4", {}, "frames.roof.bottom_chord"),  # 14 t is less than a wrench needs
        ("L 35x35x4", {}, "frames.roof.bottom_chord"),
        ("L 60x60x6", {"bolt": "M20"}, "connections.splices.bolt"),
    ],
)
def test_legs_too_small_for_bolts_are_refused(name, own, field):
    with pytest.raises(DescriptionError) as caught:
        angle_splice(spliced(name, 0.0, Role.BOTTOM_CHORD), options(**own))
    assert [fault.field for fault in caught.value.faults] == [field]


# Trusses divided for the road

EIGHT = (("    depth: 1.2 m", "    depth: 1.2 m\n    longest: 8 m"),)
CASES = {
    "plain": EIGHT,
    "bolted": (*BOLTED, *EIGHT),
    "warren": (*WARREN, *EIGHT),
    # The web that is cut across first stands at a column: it is bolted at its other end.
    "by columns": (*EIGHT, ("panels: 7", "panels: 4")),
    "gables": (*SAME, *EIGHT),
    "over nodes": (*EIGHT, ("eaves_offset: 80 mm", "set_out: nodes")),
}
ALL = pytest.mark.parametrize("case", CASES)
#: Panels of 1.3 m, most of which gussets take up.
CROWDED = {"crowded": (*EIGHT, ("panels: 7", "panels: 10"))}


@cache
def divided(case: str) -> tuple[Description, Shed]:
    description = read_text(text_of({**CASES, **CROWDED}[case]))
    return description, expand(description)


@cache
def bodies_of(case: str) -> list[Manifold]:
    return [solid(part.shape, 0.1) for part in divided(case)[1].parts]


def placed(case: str, piece: int) -> Manifold:
    pieces = divided(case)[1].pieces
    return bodies_of(case)[pieces.part[piece]].transform(pieces.placement[piece])


def runs(shed: Shed, kind: JointKind) -> list[JointRun]:
    return [run for run in shed.joints if run.kind is kind]


def count(shed: Shed, kind: JointKind) -> int:
    return sum(len(run.pieces) for run in runs(shed, kind))


@ALL
def test_the_whole_shed_holds(case):
    description, shed = divided(case)
    assert [fault for rule in FASTENING_RULES for fault in rule(shed)] == []
    assert overlaps(bodies_of(case), shed.pieces.part, shed.pieces.placement, 1000.0) == []
    for rule in invariants.RULES if case == "gables" else (invariants.bars_end_in_joints,):
        assert list(rule(shed, description)) == [], rule.__name__


@ALL
def test_trusses_leave_the_shop_in_parts_short_enough(case):
    _, shed = divided(case)
    chords = [i for i, number in enumerate(shed.pieces.part) if shed.parts[number].role in CHORDS]
    parts = np.unique(shed.pieces.assembly[chords]).tolist()
    trusses = {key.split("/")[0] for key in shed.assemblies.keys if "/truss/" in key}
    cuts = count(shed, JointKind.ANGLE_SPLICE) // 2
    assert cuts >= len(trusses)
    # Where all webs are bolted, the two chords of each part go apart.
    assert len(parts) == (cuts + len(trusses)) * (2 if case == "bolted" else 1)
    for part in parts:
        inside = np.flatnonzero(shed.pieces.assembly == part)
        boxes = np.array([box(placed(case, i)) for i in inside])
        (low, high) = boxes[:, 0].min(axis=0), boxes[:, 1].max(axis=0)
        # Measured level, by the box of the part; a part leans by 13 degrees at most.
        assert (high - low)[0] <= 8000.0


@ALL
def test_one_web_crosses_each_cut_and_is_bolted_at_one_end_alone(case):
    _, shed = divided(case)
    assert count(shed, JointKind.ANGLE_SITE_NODE) == count(shed, JointKind.ANGLE_SPLICE) // 2
    joined = 0
    for run in runs(shed, JointKind.ANGLE_SITE_NODE):
        columns = np.hstack([run.pieces, run.fittings])
        welded = {column for weld in run.welds for column in weld.between}
        clamped = {column for clamp in run.clamps for column, _ in clamp.layers}
        web = [c for c in range(run.pieces.shape[1]) if c in clamped]
        if case != "bolted":
            assert len(web) == 2
            assert not welded & set(web)
            assert welded | clamped == set(range(run.pieces.shape[1])) | {run.pieces.shape[1]}
        for row in columns:
            assert all(shed.parts[shed.pieces.part[row[c]]].role in (Role.DIAGONAL, Role.POST) for c in web)
            joined += len(web)
            gusset = shed.pieces.assembly[row[run.pieces.shape[1]]]
            for c in web if case != "bolted" else ():
                # It leaves with the part that it is welded to, not with the gusset that it is bolted to.
                assert shed.pieces.assembly[row[c]] >= 0
                assert shed.pieces.assembly[row[c]] != gusset
    assert joined


@pytest.mark.parametrize("case", [*CASES, *CROWDED])
def test_splices_stand_clear_of_gussets_packs_and_purlins(case):
    """20 mm to plates in the gap, so that paint reaches in; and to cleats (common practice)."""
    _, shed = divided(case)
    splices = [
        (int(row[1]), int(row[0])) for run in runs(shed, JointKind.ANGLE_SPLICE) for row in run.fittings
    ]
    others = {role: [] for role in (Role.GUSSET, Role.PACK, Role.CLEAT)}
    for i, number in enumerate(shed.pieces.part.tolist()):
        if shed.parts[number].role in others:
            others[shed.parts[number].role].append(i)
    boxes = {role: np.array([box(placed(case, i)) for i in which]) for role, which in others.items()}
    looked = 0
    for cover, plate in splices:
        assert all(shed.parts[shed.pieces.part[i]].role is Role.SPLICE_PLATE for i in (cover, plate))
        for piece, about in ((plate, (Role.GUSSET, Role.PACK)), (cover, (Role.CLEAT,))):
            body = placed(case, piece)
            low, high = box(body)
            for role in about:
                near = (boxes[role][:, 0] < high + 150).all(axis=1) & (boxes[role][:, 1] > low - 150).all(
                    axis=1
                )
                for i in np.array(others[role])[near].tolist():
                    assert apart(body, placed(case, i)) > 19.0
                    looked += 1
    assert looked


def test_chords_end_a_few_mm_apart_off_their_nodes():
    _, shed = divided("plain")
    for run in runs(shed, JointKind.ANGLE_SPLICE):
        for pieces, ends in zip(run.pieces, run.at, strict=True):
            bodies = [placed("plain", i) for i in pieces]
            for one, other in ((0, 1), (2, 3)):
                # Common practice: 3 to 10 mm.
                assert 3.0 <= apart(bodies[one], bodies[other]) <= 10.0
            assert all(end in (At.START, At.END) for end in ends)


def test_a_short_truss_is_whole_and_one_that_is_not_divided_keeps_its_keys():
    whole = expand(read_text(text_of(())))
    assert count(whole, JointKind.ANGLE_SPLICE) == 0
    asked = expand(read_text(text_of((("    depth: 1.2 m", "    depth: 1.2 m\n    longest: none"),))))
    assert asked.pieces.keys == whole.pieces.keys
    _, parts = divided("plain")
    members = {
        key for i, key in enumerate(whole.pieces.keys)
        if whole.parts[whole.pieces.part[i]].role in (Role.DIAGONAL, Role.POST, Role.PURLIN)
    }  # fmt: skip
    assert members <= set(parts.pieces.keys)


def test_the_default_length_divides_a_wide_truss():
    wide = cast.changed(
        "goods-shed", building__spans=["21 m"], frames__roof__panels=10, frames__roof__longest=None
    )
    shed = expand(wide)
    assert count(shed, JointKind.ANGLE_SPLICE) == 2 * 3
    assert any("over 18 m are divided for the road" in note for note in shed.notes)


def test_the_preset_shows_a_splice():
    shed = cast.shed_of("goods-shed")
    assert count(shed, JointKind.ANGLE_SPLICE) == 2 * 3
    plates = [part for part in shed.parts if part.role is Role.SPLICE_PLATE]
    assert len(plates) == 4  # plate and cover of either chord, the same in all three trusses
    assert {part.mark[:2] for part in plates} == {"SP"}


@pytest.mark.parametrize(
    ("changes", "field"),
    [
        ((("panels: 7", "panels: 16"), *EIGHT), "frames.roof.longest"),  # no chord is free for so long
        ((("bracing:", "connections: {splices: {row: 8}}\nbracing:"), *EIGHT), "frames.roof.longest"),
        ((("diagonals: L 60x60x6\n", "diagonals: L 35x35x4\n"), *EIGHT), "connections.truss_gussets.size"),
        ((("bracing:", "connections: {splices: {bolt: M27}}\nbracing:"), *EIGHT), "connections.splices.bolt"),
    ],
)
def test_what_cannot_be_divided_is_refused_with_the_field_to_change(changes, field):
    with pytest.raises(DescriptionError) as caught:
        expand(read_text(text_of(changes)))
    assert [fault.field for fault in caught.value.faults] == [field]
