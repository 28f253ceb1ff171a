"""Clashes of a shed with itself, against the written file, general libraries, linear programs and arithmetic."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import replace
from functools import cache
from io import BytesIO

import built_models
import changed_sheds as spoil
import ifcopenshell
import ifcopenshell.geom
import numpy as np
import pytest
from cast import PRESETS, TINY, changed, described, shed_of
from manifold3d import Manifold
from scipy.optimize import linprog

from shedbim.checks.clash.boxes import apart, boxes_around
from shedbim.checks.clash.clearances import CLEARANCES
from shedbim.checks.clash.configurations import Pair, measured
from shedbim.checks.clash.joined import linked
from shedbim.checks.clash.meetings import Meetings, meetings, placed_pieces
from shedbim.checks.clash.near_pairs import near_pairs, near_pairs_between
from shedbim.checks.clash.role_fields import field_of
from shedbim.checks.clash.windows import stretches
from shedbim.checks.finding import Finding
from shedbim.checks.grouping import findings_of
from shedbim.checks.subject import Subject
from shedbim.checks.table import CHECKS
from shedbim.expand import expand
from shedbim.geometry.placements import apply, compose, inverse, rotation
from shedbim.limits import CODES, Criteria, criteria
from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.roles import Role
from shedbim.model.shed import Shed
from shedbim.model.solids import solid
from shedbim.tolerance import SHARED_VOLUME
from shedbim.writers.ifc import write

AREA = {name for name, code in CODES.items() if code.area == "clashes"}


def found(shed: Shed, held: Criteria | None = None) -> list[Finding]:
    """What the checks of this area find."""
    subject = Subject(shed, held or criteria())
    return findings_of(subject, [hit for row in CHECKS if AREA & set(row.codes) for hit in row.run(subject)])


@cache
def met(name: str) -> Meetings:
    """The pieces of a specimen and their neighbours."""
    return meetings(Subject(shed_of(name), criteria()))


def pairs_of(meets: Meetings, rows: Iterable[int]) -> set[tuple[str, str]]:
    """Pairs by their keys."""
    keys, pairs = meets.subject.shed.pieces.keys, meets.pairs
    return {tuple(sorted((keys[pairs.first[k]], keys[pairs.second[k]]))) for k in rows}  # type: ignore[misc]


# ---------------------------------------------------------------------------------------------- spoiled sheds


def slid() -> Shed:
    """A diagonal slid 3 mm along itself, into the top chord."""
    shed = shed_of("flat")
    piece = spoil.matching(shed, "1/truss/diagonal/A-B/3")
    along = shed.pieces.placement[piece[0], :, 0]
    return spoil.moved(shed, piece, 3.0 * along * np.sign(along[2]))


def drawn_out() -> Shed:
    """A sag bar with its nuts, 40 mm beside its holes."""
    shed = shed_of("flat")
    return spoil.moved(shed, spoil.matching(shed, "1-2/sag bar/A-B/1/1*"), (-40.0, 0.0, 0.0))


SPOILED: dict[str, Callable[[], tuple[Shed, Criteria]]] = {
    "overlap": lambda: (slid(), criteria()),
    "duplicate": lambda: (
        spoil.doubled(shed_of("flat"), int(spoil.matching(shed_of("flat"), "1-2/purlin/A-B/1/4/*/cleat")[0])),
        criteria(),
    ),
    "joint-without-contact": lambda: (drawn_out(), criteria()),
    "contact-without-joint": lambda: (
        spoil.without_joints(shed_of("flat"), spoil.matching(shed_of("flat"), "1-2/strut/A-B/1/1")),
        criteria(),
    ),
    "too-near": lambda: (expand(changed("flat", rails__lift="4 mm")), criteria()),
    "bolt-access": lambda: (shed_of("flat"), criteria({"wrench_length": 60.0})),
}


@pytest.mark.parametrize("code", SPOILED)
def test_a_shed_spoiled_for_a_code_gives_that_code_and_no_other(code: str) -> None:
    """Beyond what the same shed gives unspoiled."""
    before = {(each.code.name, each.about) for each in found(shed_of("flat"))}
    after = [each for each in found(*SPOILED[code]()) if (each.code.name, each.about) not in before]
    assert {each.code.name for each in after} == {code}
    assert all(each.places and each.says and each.change and each.source for each in after)


@pytest.mark.parametrize("name", [*TINY, *(name for name in PRESETS if name != "distribution-hall")])
def test_no_specimen_has_an_error(name: str) -> None:
    """Warnings there are: of bolts under gussets and fins, and of plates at column heads that touch."""
    assert [(each.code.name, each.says) for each in found(shed_of(name)) if each.severe] == []


# ------------------------------------------------------------------------------------- what is said, by hand


def test_the_volume_and_the_depth_of_an_overlap() -> None:
    """A diagonal of CHS 60.3 x 4 that reaches 3 mm into a chord: its ring of steel times 3 mm along it, at least."""
    (hit,) = [each for each in found(slid()) if each.code.name == "overlap"]
    ring = np.pi * (60.3 - 4.0) * 4.0
    assert hit.value == pytest.approx(3.0 * ring, rel=0.05)
    assert "3 mm deep" in hit.says or "2 mm deep" in hit.says


def test_the_gap_of_a_joint_that_does_not_reach() -> None:
    """A base plate let down 5 mm from its column: the gap is 5 mm."""
    shed = shed_of("flat")
    plate = spoil.matching(shed, "1/column/A/start/base plate")
    down = spoil.moved(shed, plate, (0.0, 0.0, -5.0))
    (hit,) = [each for each in found(down) if each.code.name == "joint-without-contact"]
    assert hit.value == pytest.approx(5.0, abs=2e-3)
    assert "base" in hit.says


def test_the_distance_of_what_is_too_near() -> None:
    """Rails 4 mm off the columns and posts, where 5 mm are asked for."""
    hits = [each for each in found(*SPOILED["too-near"]()) if each.code.name == "too-near"]
    assert {round(each.value, 3) for each in hits} == {4.0}
    assert {each.limit for each in hits} == {5.0}
    assert {"column + side rail", "gable post + gable rail"} <= {each.about for each in hits}


def test_a_distance_that_just_holds_is_let_pass() -> None:
    """Purlins lie 10 mm above the roof steel: a limit of 10 mm holds, one of 10.1 mm does not."""

    def near(limit: float) -> int:
        return sum(
            each.code.name == "too-near"
            for each in found(shed_of("flat"), criteria({"clear_of_purlins": limit}))
        )

    assert near(10.0) == 0
    assert near(10.005) == 0
    assert near(10.1) > 0


def test_a_double_is_not_also_an_overlap_a_contact_or_in_the_way_of_wrenches() -> None:
    shed = shed_of("flat")
    for key in (
        "1-2/purlin/A-B/1/4",
        "1/column/A",
        "1-2/purlin/A-B/1/4/at 1/bolts",
        "1/column/A/end/cap plate",
    ):
        after = found(spoil.doubled(shed, int(spoil.matching(shed, key)[0])))
        before = {(each.code.name, each.about) for each in found(shed)}
        assert {each.code.name for each in after if (each.code.name, each.about) not in before} == {
            "duplicate"
        }


def test_a_plate_before_a_nut_is_in_the_way_as_far_off_as_it_is() -> None:
    """A cleat put 15 mm beside the axis of an anchor: M20 and more need 22 mm and more."""
    shed = shed_of("flat")
    anchors = int(spoil.matching(shed, "1/column/A/start/anchors")[0])
    group = shed.parts[int(shed.pieces.part[anchors])].shape
    assert isinstance(group, BoltGroup)
    top = min(disc.start for disc in group.fastener.stack)
    x, y = max(group.points)
    cleat = int(spoil.matching(shed, "1-2/purlin/A-B/1/4/at 1/cleat")[0])
    low, high = np.array(shed.parts[int(shed.pieces.part[cleat])].shape.box)
    # In the axes of the anchors: beyond their outermost in x by 15 mm, over the middle of what stands out of the plate.
    middle = np.array([x + 15.0 - low[0], y, top / 2])
    middle[1:] -= (low[1:] + high[1:]) / 2
    placement = shed.pieces.placement.copy()
    placement[cleat] = compose(placement[anchors], np.hstack([np.eye(3), middle[:, None]]))
    moved = replace(shed, pieces=replace(shed.pieces, placement=placement))
    hits = [each for each in found(moved) if each.code.name == "bolt-access"]
    values = [p.value for each in hits for p in each.places if p.pieces == (anchors, cleat)]
    assert values == [pytest.approx(15.0, abs=0.1)]


@pytest.mark.parametrize(
    "name", ["barn", "boat-hall", "goods-shed", "joinery-workshop", "packing-house", "seed-store"]
)
def test_joints_leave_room_for_wrenches_and_air_where_nothing_is_joined(name: str) -> None:
    """Bolts beside fins of struts, gussets of braces and sag bars; caps and seats beside end plates."""
    codes = {each.code.name for each in found(shed_of(name), described(name).checks.criteria)}
    assert not codes & {"bolt-access", "contact-without-joint"}


def test_a_chain_may_lead_over_a_plate_that_the_joint_does_not_name() -> None:
    """A purlin at the column head stands on the cap plate, which is of another joint: take it away, and it is loose."""
    shed = shed_of("lean")
    assert not [each for each in found(shed) if each.code.name == "joint-without-contact"]
    bare = spoil.moved(shed, spoil.matching(shed, "2/column/A/end/cap plate"), (0.0, 0.0, 5e4))
    says = [each.says for each in found(bare) if each.code.name == "joint-without-contact"]
    assert any("purlin cleat" in each for each in says)


def test_clearances_name_limits_and_every_role_has_a_field() -> None:
    held = criteria()
    assert all(held.limit(each.limit)[1] for each in CLEARANCES)
    assert all(field_of(role) for role in Role)


# ------------------------------------------------------------- the written file, read and cut by other means


@cache
def seeded() -> tuple[Shed, Meetings, ifcopenshell.file]:
    """A small shed with pieces out of place, its neighbours, and its file as the library opens it."""
    shed = slid()
    for keys, by in (
        ("1-2/purlin/A-B/1/4", (0.0, 0.0, -30.0)),
        ("1-2/wall brace/A/1/1*", (-40.0, 0.0, 0.0)),
        ("2/column/B/start/base plate", (0.0, 0.0, 5.0)),
        ("1-2/side rail/B/2", (7.0, 60.0, 4.0)),
    ):
        shed = spoil.moved(shed, spoil.matching(shed, keys), by)
    sink = BytesIO()
    write(shed, sink)
    file = ifcopenshell.file.from_string(sink.getvalue().decode("ascii"))
    return shed, meetings(Subject(shed, criteria())), file


def test_overlaps_and_volumes_are_those_of_booleans_of_all_candidates_of_the_written_file() -> None:
    """Bodies meshed by the library, every pair whose boxes meet cut by itself, one by one."""
    shed, meets, file = seeded()
    model = built_models.read(file, fine=True)
    row = {key: k for k, key in enumerate(model.names)}
    order = [row[key] for key in shed.pieces.keys]
    placed = [model.bodies[model.body[k]].transform(model.placement[k]) for k in order]
    boxes = np.array([each.bounding_box() for each in placed])
    meet = (boxes[:, None, :3] <= boxes[None, :, 3:]).all(axis=2)
    i, j = np.nonzero(np.triu(meet & meet.T, 1))
    assert len(i) > 500
    theirs = {}
    for a, b in zip(i.tolist(), j.tolist(), strict=True):
        volume = (placed[a] ^ placed[b]).volume()
        if volume > SHARED_VOLUME:
            theirs[a, b] = volume
    pairs = meets.pairs
    ours = {
        (int(pairs.first[k]), int(pairs.second[k])): float(pairs.volume[k])
        for k in np.flatnonzero(meets.overlapping)
    }
    assert len(theirs) > 8
    assert set(ours) == set(theirs)
    # Arcs are cut into other chords here and there.
    for pair, volume in theirs.items():
        assert ours[pair] == pytest.approx(volume, rel=0.03, abs=30.0), [shed.pieces.keys[k] for k in pair]


def test_the_library_s_own_search_for_collisions_agrees_pair_by_pair() -> None:
    """It also counts what touches when noise has it so: those pairs have no gap here either."""
    _, meets, file = seeded()
    settings = ifcopenshell.geom.settings()
    settings.set("mesher-angular-deflection", 0.5)
    tree = ifcopenshell.geom.tree(backend="opencascade.trianglebvh")
    iterator = ifcopenshell.geom.iterator(settings, file, 1)
    assert iterator.initialize()
    while True:
        tree.add_element(iterator.get())
        if not iterator.next():
            break
    elements = [each for each in file.by_type("IfcElement") if each.Representation]

    def theirs(*, touching: bool) -> set[tuple[str, str]]:
        clashes = tree.clash_collision_many(elements, elements, allow_touching=touching)
        sides = ([file.by_guid(side.get_argument(0)).Name for side in (each.a, each.b)] for each in clashes)
        return {tuple(sorted(names)) for names in sides if names[0] != names[1]}  # type: ignore[misc]

    through = theirs(touching=False)
    assert pairs_of(meets, np.flatnonzero(meets.overlapping)) <= through
    assert through <= pairs_of(meets, np.flatnonzero(meets.pairs.gap < 1e-3))
    assert pairs_of(meets, np.flatnonzero(meets.pairs.volume > 100.0)) <= through


# -------------------------------------------------------------------------- once for each configuration


@pytest.mark.parametrize("name", ["lopsided", "lean"])
def test_what_is_worked_out_once_holds_for_each_pair_itself(name: str) -> None:
    """Unequal bays: whole solids of every tenth pair, cut by themselves, no lengths and no grouping."""
    meets = met(name)
    pairs, placed = meets.pairs, meets.placed
    known: dict[int, Manifold] = {}
    for k in range(0, len(pairs.first), 10):
        one, other = int(pairs.first[k]), int(pairs.second[k])
        solids = []
        for piece in (one, other):
            shape = int(placed.shape[piece])
            if shape not in known:
                known[shape] = solid(placed.shapes[shape], 0.25)
            solids.append(known[shape])
        between = compose(inverse(placed.placement[one]), placed.placement[other])
        moved = solids[1].transform(between)
        assert pairs.volume[k] == pytest.approx((solids[0] ^ moved).volume(), abs=1.0)
        assert pairs.gap[k] == pytest.approx(solids[0].min_gap(moved, 10.0), abs=5e-3)


def test_equal_places_are_looked_at_once_and_unsure_ones_by_themselves() -> None:
    shed = shed_of("depot")
    placed = placed_pieces(Subject(shed, criteria()))
    low, high = boxes_around(placed.boxes[placed.shape], placed.placement, 0.5)
    i, j = near_pairs(low, high)
    i, j = i[:600], j[:600]
    reach = np.ones((len(placed.shapes), len(placed.shapes)))
    seen: list[int] = []

    def work(pair: Pair) -> tuple[float]:
        seen.append(pair.row)
        return (1.0,)

    counted = measured(placed, i, j, reach, work, (0.0,))[:, 0]
    once, near = len(seen), int(counted.sum())
    assert 10 < once < near / 3
    seen.clear()
    every = measured(placed, i, j, reach, work, (0.0,), lambda values: values[:, 0] > 0)[:, 0]
    assert np.array_equal(every, counted)
    assert len(seen) == once + near
    assert not len(measured(placed, i[:0], j[:0], reach, work, (0.0,)))


def test_a_piece_out_of_place_is_found_wherever_along_the_building_it_stands() -> None:
    shed = shed_of("lopsided")
    for key in ("1-2/purlin/A-B/1/3", "2-3/purlin/A-B/2/4", "3-4/purlin/A-B/1/2"):
        piece = int(spoil.matching(shed, key)[0])
        meets = meetings(Subject(spoil.moved(shed, [piece], (0.0, 0.0, -35.0)), criteria()))
        rows = np.flatnonzero(meets.overlapping)
        assert len(rows)
        assert all(piece in (meets.pairs.first[k], meets.pairs.second[k]) for k in rows)


# --------------------------------------------------------------------- boxes, against other ways to tell


def random_boxes(number: int, spread: float, seed: int) -> tuple[np.ndarray, np.ndarray]:
    """Corners of boxes from flat to long, some of no size."""
    rng = np.random.default_rng(seed)
    low = rng.uniform(-3000, 3000, (number, 3))
    size = rng.exponential(spread, (number, 3)) * rng.choice([0.0, 0.1, 1.0, 5.0], (number, 3))
    return low, low + size


@pytest.mark.parametrize("spread", [10.0, 300.0, 5000.0])
@pytest.mark.parametrize("number", [2, 40, 300])
def test_near_pairs_are_those_of_comparing_all_with_all(number: int, spread: float) -> None:
    low, high = random_boxes(number, spread, number)
    meet = (low[:, None] <= high[None]).all(axis=2)
    meet &= meet.T
    i, j = near_pairs(low, high)
    assert np.array_equal(np.stack([i, j]), np.stack(np.nonzero(np.triu(meet, 1))))
    k = number // 3
    i, j = near_pairs_between(low[:k], high[:k], low[k:], high[k:])
    assert np.array_equal(np.stack([i, j]), np.stack(np.nonzero(meet[:k, k:])))


def test_near_pairs_of_nothing_of_far_things_and_of_equal_ones() -> None:
    none = np.zeros((0, 3))
    assert not len(near_pairs(none, none)[0])
    assert not len(near_pairs_between(none, none, np.zeros((1, 3)), np.ones((1, 3)))[0])
    far = np.array([[0.0, 0.0, 0.0], [1e9, 1e9, 1e9], [1e9, 1e9, 1e9]])
    assert [each.tolist() for each in near_pairs(far, far)] == [[1], [2]]
    same = np.zeros((30, 3))
    assert len(near_pairs(same, same + 5.0)[0]) == 30 * 29 // 2


def turned(rng: np.random.Generator, kind: str) -> np.ndarray:
    """A turn (3, 3): any, or almost one that leaves edges parallel."""
    if kind == "any":
        return np.linalg.qr(rng.normal(size=(3, 3)))[0]
    right = rotation(rng.choice(np.eye(3)), rng.choice([0.0, np.pi / 2, np.pi]))[:, :3]
    slight = 10.0 ** rng.uniform(-16, -2) if kind == "nearly parallel" else 0.0
    # Through the axes of a building, as placements come: with the noise of that.
    building = np.linalg.qr(rng.normal(size=(3, 3)))[0]
    return building.T @ (building @ (rotation(rng.normal(size=3), slight)[:, :3] @ right))


@pytest.mark.parametrize("kind", ["any", "parallel", "nearly parallel"])
def test_boxes_are_apart_where_a_linear_program_finds_no_point_in_both(kind: str) -> None:
    """The greatest s such that some point lies s deep in both: below 0 there is none (HiGHS, by scipy)."""
    rng = np.random.default_rng(7)
    told = {True: 0, False: 0}
    for _ in range(300):
        half = rng.uniform(2.0, 60.0, (2, 3)) * rng.choice([1.0, 200.0], (2, 3), p=[0.7, 0.3])
        turn = turned(rng, kind)
        # Beside one another: about as far as the sizes of both along some direction.
        way = rng.normal(size=3) if rng.random() < 0.5 else rng.choice(np.eye(3))
        way = way / np.linalg.norm(way)
        touch = np.abs(way) @ half[0] + np.abs(turn.T @ way) @ half[1]
        # From deep in one another to well apart, or by so little that noise may hide it.
        share = rng.uniform(0.3, 1.1) if rng.random() < 0.5 else 1.0 - 10.0 ** rng.uniform(-6, -3)
        offset = way * touch * share
        gap = apart(half[:1], half[1:], turn[None], offset[None])[0]
        rows = np.vstack([np.eye(3), -np.eye(3), turn.T, -turn.T])
        shift = turn.T @ offset
        room = np.concatenate([half[0], half[0], half[1] + shift, half[1] - shift])
        answer = linprog([0, 0, 0, -1], np.column_stack([rows, np.ones(12)]), room, bounds=[(None, None)] * 4)
        assert answer.status == 0
        deep = -answer.fun
        if abs(deep) > 1e-6:
            assert (gap > 0) == (deep < 0), (kind, gap, deep)
            told[bool(deep < 0)] += 1
        cubes = [Manifold.cube(tuple(2 * each), True) for each in half]
        other = cubes[1].transform(
            np.column_stack([turn if np.linalg.det(turn) > 0 else turn @ np.diag([1, 1, -1]), offset])
        )
        assert gap <= cubes[0].min_gap(other, 1e5) + 1e-6
    assert min(told.values()) > 20


def test_the_gap_of_boxes_side_by_side_is_their_distance() -> None:
    half = np.array([[100.0, 50.0, 10.0]])
    offset = np.array([[0.0, 0.0, 24.5]])
    assert apart(half, half, np.eye(3)[None], offset)[0] == pytest.approx(4.5)
    assert apart(half, half, np.eye(3)[None], offset * 0.5)[0] == pytest.approx(-7.75)


def test_all_that_is_near_lies_in_the_stretch() -> None:
    """Points all over boxes: those within reach of the other box lie on the stretch of the axis; it is no longer."""
    rng = np.random.default_rng(11)
    share, lengths = 0, []
    for _ in range(200):
        half, other = np.array([[3000.0, 60.0, 40.0]]), rng.uniform(20.0, 400.0, (1, 3))
        turn = turned(rng, str(rng.choice(["any", "nearly parallel"])))
        offset = rng.uniform(-600.0, 600.0, 3)
        low, high = stretches(half, other, turn[None], offset[None], np.array([25.0]))[0]
        points = rng.uniform(-1.0, 1.0, (4000, 3)) * half
        seen = points @ turn.T + offset
        beyond = np.linalg.norm(np.maximum(np.abs(seen) - other, 0.0), axis=1)
        near = points[beyond <= 25.0, 0]
        assert not len(near) or (low <= near.min() and near.max() <= high)
        share += len(near) > 0
        lengths.append(max(high - low, 0.0))
    assert share > 40
    assert np.median(lengths) < 2500.0  # of 6000


def test_boxes_around_hold_every_corner() -> None:
    placed = placed_pieces(Subject(shed_of("lean"), criteria()))
    local = placed.boxes[placed.shape]
    low, high = boxes_around(local, placed.placement)
    corners = np.stack([local[:, (k >> np.arange(3)) & 1, np.arange(3)] for k in range(8)], axis=1)
    everywhere = apply(placed.placement, corners)
    np.testing.assert_allclose(low, everywhere.min(axis=1), atol=1e-6)
    np.testing.assert_allclose(high, everywhere.max(axis=1), atol=1e-6)


def test_what_hangs_together_is_what_a_search_from_node_to_node_reaches() -> None:
    rng = np.random.default_rng(5)
    for number in (1, 12, 200):
        a, b = rng.integers(0, number, (2, number * 2 // 3))
        label = linked(number, a, b)
        beside: dict[int, set[int]] = {k: {k} for k in range(number)}
        for x, y in zip(a.tolist(), b.tolist(), strict=True):
            beside[x].add(y)
            beside[y].add(x)
        for node in range(number):
            reached, front = {node}, [node]
            while front:
                new = beside[front.pop()] - reached
                reached |= new
                front += new
            assert label[node] == min(reached)


def test_things_placed_anywhere_are_measured_in_their_own_frames() -> None:
    """The whole shed turned and moved far off gives the same numbers."""
    meets = met("flat")
    far = compose(rotation((1.0, 2.0, 3.0), 0.7), meets.placed.placement)
    far[:, :, 3] += (5e5, -3e5, 1e4)
    shed = meets.subject.shed
    moved = meetings(Subject(replace(shed, pieces=replace(shed.pieces, placement=far)), criteria()))
    one = dict(zip(zip(meets.pairs.first, meets.pairs.second, strict=True), meets.pairs.gap, strict=True))
    two = dict(zip(zip(moved.pairs.first, moved.pairs.second, strict=True), moved.pairs.gap, strict=True))
    # Float noise may turn pairs at the very reach of the search.
    assert len(set(one) ^ set(two)) < 0.01 * len(one)
    assert all(abs(one[pair] - two[pair]) < 5e-3 for pair in set(one) & set(two))
