"""Stability by computation, against dense matrices, a general frame library, and counts by hand."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pytest
from cast import CAST, shed_of
from changed_sheds import matching
from general_frames import furthest
from small_sheds import SMALL, small_shed
from space_frame import frame_stiffness, freely_moving
from taken_out import freed, joined_as, taken_out

from shedbim.checks.finding import Finding
from shedbim.checks.grouping import findings_of
from shedbim.checks.stability.compatibility import compatibility
from shedbim.checks.stability.mechanisms import mechanisms
from shedbim.checks.stability.plane import figure_of
from shedbim.checks.stability.skeleton import Skeleton, skeleton
from shedbim.checks.stability.stability import stability
from shedbim.checks.stability.trusses import trusses
from shedbim.checks.subject import Subject
from shedbim.limits import CODES, Criteria, criteria
from shedbim.model.joints import JointKind
from shedbim.model.roles import Role
from shedbim.model.shed import Shed


def _found(shed: Shed, held: Criteria | None = None) -> list[Finding]:
    subject = Subject(shed, held or criteria())
    return findings_of(subject, stability(subject))


def _codes(shed: Shed, held: Criteria | None = None) -> set[str]:
    return {finding.code.name for finding in _found(shed, held)}


def _bars(shed: Shed) -> tuple[Subject, Skeleton]:
    subject = Subject(shed, criteria())
    return subject, skeleton(subject)


def _mechanisms(shed: Shed) -> int:
    subject, bars = _bars(shed)
    return mechanisms(compatibility(subject, bars).matrix).shape[1]


@pytest.mark.parametrize("name", CAST)
def test_the_cast_stands(name: str) -> None:
    assert not [f for f in _found(shed_of(name)) if f.code.name != "purlin-off-node"]


# Spoiled sheds: one for each code


def _without(name: str, *patterns: str) -> Callable[[], tuple[Shed, Criteria]]:
    return lambda: (taken_out(shed_of(name), matching(shed_of(name), *patterns)), criteria())


def _pinned_corners() -> tuple[Shed, Criteria]:
    """Rafters that are bolted to the columns as purlins are: the inner frames have three hinges too many."""
    return joined_as(shed_of("joinery-workshop"), JointKind.RAFTER_COLUMN, JointKind.PURLIN_CLEAT), criteria()


def _free_tie() -> tuple[Shed, Criteria]:
    shed = shed_of("lopsided")
    return freed(shed, int(matching(shed, "2-3/bottom chord tie/*")[0]), 0), criteria()


def _between_nodes() -> tuple[Shed, Criteria]:
    """The same purlins as before, held against a distance below which none was found."""
    return shed_of("seed-store"), criteria({"purlin_off_node": 1000.0})


SPOILED: dict[str, Callable[[], tuple[Shed, Criteria]]] = {
    "mechanism": _pinned_corners,
    "loose-bar": _free_tie,
    "truss-mechanism": _without("lopsided", "2/truss/diagonal/A-B/3"),
    "unbraced-panel": _without("lopsided", "1-2/wall brace/A/*"),
    "one-way-brace": _without("lopsided", "1-2/wall brace/A/1/1"),
    "purlin-off-node": _between_nodes,
}


def test_every_code_of_stability_is_spoiled() -> None:
    assert set(SPOILED) == {code.name for code in CODES.values() if code.area == "stability"}


@pytest.mark.parametrize("code", SPOILED)
def test_a_spoiled_shed_gives_its_own_code_alone(code: str) -> None:
    shed, held = SPOILED[code]()
    assert _codes(shed, held) - {"purlin-off-node"} == {code} - {"purlin-off-node"}
    if code == "purlin-off-node":
        assert code in _codes(shed, held)
        assert code not in _codes(shed, criteria({"purlin_off_node": 1200.0}))


# What a mechanism is told as


def test_frames_without_wall_bracing_sway_along_the_building() -> None:
    shed = taken_out(shed_of("seed-store"), matching(shed_of("seed-store"), "*wall brace*"))
    (sways,) = [finding for finding in _found(shed) if finding.code.name == "mechanism"]
    assert sways.says == "Frames 1 to 11 can sway along the building without any resistance."
    assert {"1/column/A", "6/column/B"} <= {shed.pieces.keys[piece] for piece in sways.pieces}


@pytest.mark.parametrize("name", ["flat", "lopsided", "lean", "valley", "barn", "goods-shed"])
def test_frames_on_pinned_bases_sway_whatever_their_joints_miss_by(name: str) -> None:
    """Struts at unequal levels, posts beside the columns' axes, and braces off the chords' seem to hold nothing."""
    assert _mechanisms(taken_out(shed_of(name), matching(shed_of(name), "*wall brace*"))) == 1


def test_one_panel_of_a_slope_left_open_is_told() -> None:
    shed = taken_out(shed_of("lopsided"), matching(shed_of("lopsided"), "1-2/roof brace/A-B/1/1/*"))
    (found,) = [finding for finding in _found(shed) if finding.code.name == "unbraced-panel"]
    assert found.about == "roof slope A-B/1"


def test_frames_with_pinned_corners_sway_across_it_each_for_itself() -> None:
    shed, _ = _pinned_corners()
    (sways,) = _found(shed)
    assert sways.says.endswith("can sway across the building without any resistance.")
    # Frames 3 to 5: unequal posts and rails hold the two in the gables, and roof bracing holds frame 2 to one of them.
    assert len(sways.places) == 3


def test_fixed_bases_hold_what_pinned_ones_do_not() -> None:
    shed = taken_out(small_shed("rafters"), matching(small_shed("rafters"), "*wall brace*"))
    assert _mechanisms(shed) == 1
    assert _mechanisms(joined_as(shed, JointKind.PINNED_BASE, JointKind.FIXED_BASE)) == 0


@pytest.mark.parametrize("role", [Role.WALL_BRACE, Role.ROOF_BRACE])
@pytest.mark.parametrize("name", SMALL)
def test_each_brace_counts(name: str, role: Role) -> None:
    """No rule names the pattern: a single brace leaves a panel open, one of a tension-only pair a way to sway."""
    shed = small_shed(name)
    found = Subject(shed, criteria()).having(role)
    assert found.size
    for piece in found.tolist():
        assert _codes(taken_out(shed, [piece])) & {"unbraced-panel", "one-way-brace"}


@pytest.mark.parametrize(("name", "bay"), [("rafters", "1-2/eaves"), ("trusses", "2-3/")])
def test_each_strut_of_a_braced_bay_counts(name: str, bay: str) -> None:
    """But for one at the ridge over a single panel: the one brace there holds one of its two ends without it."""
    shed = small_shed(name)
    struts = Subject(shed, criteria()).having(Role.STRUT, Role.EAVES_STRUT).tolist()
    struts = [piece for piece in struts if shed.pieces.keys[piece].startswith(bay)]
    assert struts
    for piece in struts:
        assert "unbraced-panel" in _codes(taken_out(shed, [piece]))


@pytest.mark.parametrize("name", ["lopsided", "valley", "goods-shed"])
def test_each_web_counts(name: str) -> None:
    """The trusses of the cast have as many bars as they need: m = 2 j - 3, Calladine's rule with s = 0."""
    shed = shed_of(name)
    subject, bars = _bars(shed)
    truss = next(trusses(subject, bars))
    assert len(truss.bars) == 2 * len(truss.nodes) - 3
    # A post at a column only doubles it: without it the chord is still joined to the column.
    beside = np.abs(subject.centres[:, :1] - np.array(shed.grid.x)).min(axis=1) < 500.0
    webs = [
        p for p in truss.pieces.tolist() if subject.role[p] in (Role.DIAGONAL, Role.POST) and not beside[p]
    ]
    sides = {shed.pieces.keys[p].removesuffix("/near").removesuffix("/far") for p in webs}
    for key in sorted(sides)[::7]:
        gone = [p for p in webs if f"{shed.pieces.keys[p]}/".startswith(f"{key}/")]
        assert "truss-mechanism" in _codes(taken_out(shed, gone))


# Against other ways of counting


def _random_deletions(name: str, count: int) -> list[tuple[int, ...]]:
    """Braces, ties, struts and webs to take out: none at first, then some by chance, then all that brace the walls."""
    subject = Subject(small_shed(name), criteria())
    some = subject.having(
        Role.WALL_BRACE, Role.ROOF_BRACE, Role.TIE, Role.STRUT, Role.DIAGONAL, Role.EAVES_STRUT
    )
    chance = np.random.default_rng(len(name))
    walls = tuple(subject.having(Role.WALL_BRACE).tolist())
    drawn = [
        tuple(chance.choice(some, size=int(chance.integers(1, 1 + len(some) // 2)), replace=False).tolist())
        for _ in range(count)
    ]
    return [(), walls, *drawn]


@pytest.mark.parametrize(("name", "count"), [("rafters", 6), ("trusses", 2)])
def test_mechanisms_are_as_many_as_a_dense_stiffness_matrix_has(name: str, count: int) -> None:
    numbers = []
    for gone in _random_deletions(name, count):
        shed = taken_out(small_shed(name), gone)
        _, bars = _bars(shed)
        numbers.append(_mechanisms(shed))
        assert numbers[-1] == freely_moving(frame_stiffness(shed, bars))
    assert 0 in numbers
    assert max(numbers) > 0


@pytest.mark.parametrize("name", SMALL)
def test_a_general_frame_library_moves_far_where_there_is_a_mechanism_and_little_where_there_is_none(
    name: str,
) -> None:
    whole = small_shed(name)
    posts = [p for p in Subject(whole, criteria()).having(Role.GABLE_POST, Role.GABLE_RAIL).tolist()]
    seen = set()
    for gone in _random_deletions(name, 4):
        shed = taken_out(whole, {*gone, *posts})
        _, bars = _bars(shed)
        far = max(furthest(shed, bars, along=way) for way in (True, False))
        unstable = _mechanisms(shed) > 0
        seen.add(unstable)
        # 1 N at each node: millimetres where the frame is stable, kilometres or no answer where it is not.
        assert far > 10.0 if unstable else far < 0.1
    assert seen == {True, False}


def test_self_stress_and_mechanisms_of_figures_counted_by_hand() -> None:
    """A square of four bars, with one diagonal and with two: 4 - 2*4 + 3 = -1, 0, 1 by Maxwell's rule.

    And Maxwell's rule alone is not enough: two braced squares in one with none beside it have s = m = 1.
    """
    square = np.array([(0, 0), (1, 0), (1, 1), (0, 1.0)]) * 1000
    sides = [(0, 1), (1, 2), (2, 3), (0, 3)]
    for more, s, m in (([], 0, 1), ([(0, 2)], 0, 0), ([(0, 2), (1, 3)], 1, 0)):
        figure = figure_of(square, np.array(sides + more))
        assert (figure.self_stresses, figure.mechanisms) == (s, m)
    pair = np.vstack([square, [(2000, 0), (2000, 1000)]])
    figure = figure_of(pair, np.array([*sides, (0, 2), (1, 3), (1, 4), (4, 5), (2, 5)]))
    assert (figure.bars, figure.nodes, figure.self_stresses, figure.mechanisms) == (9, 6, 1, 1)
    held = np.array([True, True, False, False])
    assert figure_of(square, np.array(sides), held).mechanisms == 1
