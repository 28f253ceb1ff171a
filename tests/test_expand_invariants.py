"""What holds in every building of the cast, and that each rule can fail."""

from __future__ import annotations

from dataclasses import replace

import cast
import invariants
import numpy as np
import pytest
from invariants import RULES, bars_end_in_joints, broken

from shedbim.geometry.placements import compose, rotation, translation
from shedbim.model.bars import Bar
from shedbim.model.joints import At, JointKind
from shedbim.model.shapes import Shape
from shedbim.model.shed import Shed


@pytest.mark.parametrize("rule", RULES, ids=lambda rule: rule.__name__)
def test_rules_hold(shed, description, rule):
    assert list(rule(shed, description)) == []


def test_every_kind_of_joint_is_in_the_cast():
    """Else a bound of the rules would never have been tried; laps are by option, tried in test_connections.py."""
    seen = {run.kind for name in cast.CAST for run in cast.shed_of(name).joints}
    assert seen == set(JointKind) - {JointKind.PURLIN_LAP}


def test_handed_and_turned_parts_are_in_the_cast():
    """Joints are counted after flips: in some sheds a part runs against its stock bar."""
    shed = cast.shed_of("lopsided")
    webs = [i for i, key in enumerate(shed.pieces.keys) if "/diagonal/" in key or "/truss/post/" in key]
    upwards = shed.pieces.placement[webs, 2, 0] > 0
    assert upwards.any()
    assert not upwards.all()


# Spoiled sheds: what each rule is there for.


def _moved(shed: Shed, key: str, motion: np.ndarray) -> Shed:
    """The shed with one piece moved by a motion in its own frame."""
    placement = shed.pieces.placement.copy()
    number = shed.pieces.keys.index(key)
    placement[number] = compose(placement[number], motion)
    return replace(shed, pieces=replace(shed.pieces, placement=placement))


def _joint(shed: Shed, kind: JointKind, **columns: np.ndarray) -> Shed:
    """The shed with other columns in the first run of a kind."""
    number = next(i for i, run in enumerate(shed.joints) if run.kind is kind)
    runs = list(shed.joints)
    runs[number] = replace(runs[number], **columns)
    return replace(shed, joints=tuple(runs))


def _run(shed: Shed, kind: JointKind):
    return next(run for run in shed.joints if run.kind is kind)


def _spoil_keys(shed: Shed) -> Shed:
    keys = (shed.pieces.keys[1], *shed.pieces.keys[1:])
    return replace(shed, pieces=replace(shed.pieces, keys=keys))


def _spoil_tables(shed: Shed) -> Shed:
    placement = shed.pieces.placement.copy()
    placement[7, :, 1] *= -1  # a mirror
    return replace(shed, pieces=replace(shed.pieces, placement=placement))


def _spoil_ends(shed: Shed) -> Shed:
    run = _run(shed, JointKind.NODE)
    at = run.at.copy()
    at[0, 1] = 1 - at[0, 1]
    return _joint(shed, JointKind.NODE, at=at)


def _spoil_points(shed: Shed) -> Shed:
    run = _run(shed, JointKind.CHORD_COLUMN)
    return _joint(shed, JointKind.CHORD_COLUMN, points=run.points + np.array([0.0, 1.0, 0.0]))


def _spoil_carriers(shed: Shed) -> Shed:
    run = _run(shed, JointKind.RAIL_CLEAT)
    pieces = run.pieces.copy()
    pieces[0, 0] = shed.pieces.keys.index("2/column/B")
    return _joint(shed, JointKind.RAIL_CLEAT, pieces=pieces)


def _spoil_mass(shed: Shed) -> Shed:
    number = next(i for i, p in enumerate(shed.parts) if _is_skew(p.shape))
    bar = shed.parts[number].bar
    # The mass of the bar before its ends are cut.
    heavy = replace(bar)
    heavy.__dict__["volume"] = bar.section.area * bar.length
    parts = list(shed.parts)
    parts[number] = replace(parts[number], shape=heavy)
    return replace(shed, parts=tuple(parts))


def _is_skew(shape: Shape) -> bool:
    return isinstance(shape, Bar) and shape.start.slopes[0] != (0.0, 0.0)


def _of_like(shed: Shed, word: str = "") -> str:
    """The key of a piece, of a role or of any, in an assembly that is not the first of its type."""
    groups = shed.assemblies.type
    _, firsts = np.unique(groups, return_index=True)
    again = ~np.isin(np.arange(len(groups)), firsts)
    for key, part, group in zip(
        shed.pieces.keys, shed.pieces.part.tolist(), shed.pieces.assembly.tolist(), strict=True
    ):
        if group >= 0 and again[group] and word in ("", shed.parts[part].role.word):
            return key
    raise AssertionError(f"no {word} in a second assembly of its type")


def _spoil_assemblies(shed: Shed) -> Shed:
    return _moved(shed, _of_like(shed), translation([8.0, 0.0, 0.0]))


def _spoil_eccentricity(shed: Shed) -> Shed:
    run = _run(shed, JointKind.NODE)
    worst = np.abs(run.eccentricity).argmax()
    changed = run.eccentricity.copy()
    changed[worst] += 0.1
    return _joint(shed, JointKind.NODE, eccentricity=changed)


SPOILED = (
    _spoil_keys,
    _spoil_tables,
    _spoil_ends,
    _spoil_points,
    _spoil_carriers,
    _spoil_mass,
    _spoil_assemblies,
    _spoil_eccentricity,
)


@pytest.mark.parametrize(("rule", "spoil"), list(zip(RULES, SPOILED, strict=True)), ids=lambda f: f.__name__)
def test_each_rule_can_fail(rule, spoil):
    shed, description = cast.shed_of("lopsided"), cast.described("lopsided")
    assert list(rule(shed, description)) == []
    assert list(rule(spoil(shed), description)) != []


def test_an_end_in_two_joints_is_found():
    shed, description = cast.shed_of("lopsided"), cast.described("lopsided")
    run = _run(shed, JointKind.FREE)
    again = replace(run, **{n: getattr(run, n)[:1] for n in ("pieces", "at", "points", "eccentricity")})
    found = list(bars_end_in_joints(replace(shed, joints=(*shed.joints, again)), description))
    assert len(found) == 1
    assert "in 2 joints" in found[0]


def test_a_turned_over_member_of_an_assembly_is_found():
    """A diagonal turned round its own middle fills nearly the same space: only its skew cuts tell."""
    shed, description = cast.shed_of("seed-store"), cast.described("seed-store")
    key = _of_like(shed, "diagonal")
    bar = shed.parts[shed.pieces.part[shed.pieces.keys.index(key)]].bar
    turn = compose(translation([bar.length, 0.0, 0.0]), rotation([0.0, *bar.start.slopes[0]], np.pi))
    found = list(invariants.equal_assemblies_are_equal(_moved(shed, key, turn), description))
    # The truss, and the frame that it stands in.
    assert len(found) == 2


@pytest.mark.parametrize(("what", "found"), [("base plate", 2), ("cleat", 2), ("gusset", 2)])
def test_a_moved_fitting_of_an_assembly_is_found(what, found):
    shed, description = cast.shed_of("seed-store"), cast.described("seed-store")
    moved = _moved(shed, _of_like(shed, what), translation([8.0, 0.0, 0.0]))
    assert len(list(invariants.equal_assemblies_are_equal(moved, description))) == found


def test_all_is_reported_at_once():
    shed, description = cast.shed_of("lopsided"), cast.described("lopsided")
    found = broken(_spoil_ends(_spoil_points(shed)), description)
    assert {finding.split(":")[0] for finding in found} >= {"bars_end_in_joints", "joints_are_at_ends"}


def test_work_points_of_ends_are_taken_after_flips():
    """START and END of the finished part, whatever way the stock bar ran: seen at the ends of all purlins."""
    shed = cast.shed_of("valley")
    bars = invariants.Bars(shed)
    for run in shed.joints:
        if run.kind not in (JointKind.PURLIN_CLEAT, JointKind.CHORD_RIDGE):
            continue
        for pieces, at, point in zip(run.pieces.tolist(), run.at.tolist(), run.points, strict=True):
            for piece, end in zip(pieces, at, strict=True):
                if end != At.ALONG:
                    here, there = np.linalg.norm(bars.ends[piece] - point, axis=1)[[end, 1 - end]]
                    assert here < there
