"""Every connection of the cast: closed, bolted through holes that fit, welded together in the shop; and that each
rule can fail. Written from the finished tables alone."""

from __future__ import annotations

from collections import Counter
from dataclasses import replace
from functools import cache

import cast
import fastened
import numpy as np
import pytest
from fastened import FASTENING_RULES
from invariants import broken, coarse_bodies
from overlaps import overlaps

from shedbim.description import Description
from shedbim.expand import expand
from shedbim.model.bars import Bar
from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.joints import JointKind
from shedbim.model.plates import Plate
from shedbim.model.roles import Role, Sort
from shedbim.model.shed import Shed
from shedbim.sections.profiles import Hollow, Pipe
from shedbim.tolerance import SHARED_VOLUME

SPECIMEN = "lopsided"


@pytest.mark.parametrize("rule", FASTENING_RULES, ids=lambda rule: rule.__name__)
def test_rules_hold(shed, rule):
    assert list(rule(shed)) == []


def test_every_fastened_kind_has_welds_or_bolts_in_the_cast():
    """By the word of the kind: what is called bolted has bolts, what is called welded has welds and no bolts."""
    sheds = [*map(cast.shed_of, cast.CAST), *map(optioned, OPTIONS)]
    for kind in JointKind:
        runs = [run for shed in sheds for run in shed.joints if run.kind is kind]
        assert runs, kind
        if kind.fastening == "bolted":
            assert all(run.clamps for run in runs if _is_made(run)), kind
        else:
            assert not any(run.clamps for run in runs), kind
            assert all(run.welds for run in runs) == (kind.fastening == "welded"), kind


def _is_made(run) -> bool:
    """Whether a run has joints at all."""
    return len(run.pieces) > 0


def test_every_fitting_and_fastener_has_a_use_in_the_cast():
    """Else a role would stand in the lists that no building ever has."""
    seen = {part.role for name in cast.CAST for part in cast.shed_of(name).parts}
    optional = {
        Role.SHEAR_KEY,
        Role.SEAT,
        Role.SLEEVE,
    }  # by option
    assert {role for role in Role if role.sort is not Sort.MEMBER} - seen <= optional


#: What the presets leave at its default, the other way; each names the roles that only it brings.
OPTIONS = {
    "sleeves, keys and slots": (
        "lean",
        {
            "frames__columns__base": "fixed",
            "connections__cleats": {"continuity": "sleeved", "sleeve": "1.2 m", "bolt": "M16"},
            "connections__bases": {"shear_key": "HEA 100", "grout": "40 mm", "packs": "none"},
            "connections__tube_ends": {"struts": "slotted", "braces": "capped"},
            "connections__gussets": {"bolts": "3", "size": "M16"},
            "connections__struts": {"bolts": "3", "thickness": "12 mm"},
            "connections__stays": {"every": 1, "sides": "both"},
            "finish": {"frames": "galvanized"},
        },
        {Role.SLEEVE, Role.SHEAR_KEY, Role.STAY},
    ),
    "seats and other bolts": (
        "flat",
        {
            "connections__chords": {"seat": "plate", "thickness": "25 mm", "bolt": "M16"},
            "connections__bolts": {"grade": "10.9", "secondary_grade": "8.8"},
            "connections__bases": {"anchors": "4", "size": "M20", "thickness": "30 mm"},
            "connections__caps": {"thickness": "15 mm"},
            "connections__post_heads": {"size": "M20"},
        },
        {Role.SEAT},
    ),
    "divided in a braced bay": ("flat", {"frames__roof__longest": "7 m"}, {Role.END_PLATE}),
    "laps": (
        "lopsided",
        {
            "purlins__section": "Z 200x75/68x20x2.0",
            "connections__cleats": {"continuity": "lapped"},
            "finish": {"frames": "galvanized"},
        },
        set(),
    ),
    "stiffened bases and haunches": (
        "barn",
        {
            "frames__columns__base": "fixed",
            "connections__bases": {"stiffeners": "gussets", "anchors": "6"},
            "connections__apex": {"thickness": "25 mm"},
            "connections__rafters": {"haunch": {"rafters": "all", "depth": "260 mm"}, "stiffeners": "none"},
        },
        {Role.STIFFENER, Role.HAUNCH},
    ),
}


def description_of(story: str) -> Description:
    name, fields, _ = OPTIONS[story]
    return cast.changed(name, **fields)


@cache
def optioned(story: str) -> Shed:
    return expand(description_of(story))


@pytest.mark.parametrize("story", OPTIONS)
def test_rules_hold_with_other_options_too(story):
    shed = optioned(story)
    assert [finding for rule in FASTENING_RULES for finding in rule(shed)] == []
    assert broken(shed, description_of(story)) == []
    assert OPTIONS[story][2] <= {part.role for part in shed.parts}


@pytest.mark.parametrize("story", OPTIONS)
def test_nor_do_solids_overlap_with_other_options(story):
    shed = optioned(story)
    found = overlaps(coarse_bodies(shed), shed.pieces.part, shed.pieces.placement, SHARED_VOLUME)
    keys = shed.pieces.keys
    assert [f"{keys[o.first]} and {keys[o.second]}: {o.volume:.0f} mm3" for o in found] == []


# Spoiled sheds: what each rule is there for.


def _parts(shed: Shed, number: int, **fields) -> Shed:
    """The shed with another shape for one part."""
    parts = list(shed.parts)
    parts[number] = replace(parts[number], **fields)
    return replace(shed, parts=tuple(parts))


def _drilled(shed: Shed, role: Role) -> int:
    """The first part of a role with holes."""
    return next(i for i, p in enumerate(shed.parts) if p.role is role and p.shape.holes)


def _run(shed: Shed, kind: JointKind, **fields) -> Shed:
    """The shed with something else in the first run of a kind."""
    runs = list(shed.joints)
    number = next(i for i, run in enumerate(runs) if run.kind is kind)
    runs[number] = replace(runs[number], **fields)
    return replace(shed, joints=tuple(runs))


def _first(shed: Shed, kind: JointKind):
    return next(run for run in shed.joints if run.kind is kind)


def _a_fitting_twice(shed: Shed) -> Shed:
    run = _first(shed, JointKind.PURLIN_CLEAT)
    return replace(
        shed, joints=(*shed.joints, replace(run, pieces=run.pieces[:1], fittings=run.fittings[:1]))
    )


def _a_weld_left_out(shed: Shed) -> Shed:
    run = _first(shed, JointKind.PINNED_BASE)
    welds = tuple(weld for weld in run.welds if 0 not in weld.between)
    assert len(welds) < len(run.welds)
    return _run(shed, JointKind.PINNED_BASE, welds=welds)


def _a_hole_beside_its_wall(shed: Shed) -> Shed:
    number = _drilled(shed, Role.COLUMN)
    bar = shed.parts[number].bar
    (x, y, z), *_ = (hole.centre for hole in bar.holes)
    aside = tuple(c + 0.3 * a for c, a in zip((x, y, z), bar.holes[0].axis, strict=True))
    return _parts(
        shed, number, shape=replace(bar, holes=(replace(bar.holes[0], centre=aside), *bar.holes[1:]))
    )


def _a_moved_plate(shed: Shed) -> Shed:
    placement = shed.pieces.placement.copy()
    number = next(i for i, part in enumerate(shed.pieces.part) if shed.parts[part].role is Role.CLEAT)
    placement[number, :, 3] += placement[number, :, 0]
    return replace(shed, pieces=replace(shed.pieces, placement=placement))


def _a_plate_off_the_face(shed: Shed) -> Shed:
    placement = shed.pieces.placement.copy()
    number = next(i for i, part in enumerate(shed.pieces.part) if shed.parts[part].role is Role.CLEAT)
    placement[number, :, 3] += placement[number, :, 2]
    return replace(shed, pieces=replace(shed.pieces, placement=placement))


def _a_hole_left_out(shed: Shed) -> Shed:
    number = _drilled(shed, Role.PURLIN)
    shape = shed.parts[number].shape
    return _parts(shed, number, shape=replace(shape, holes=shape.holes[1:]))


def _a_tight_hole(shed: Shed) -> Shed:
    number = _drilled(shed, Role.BASE_PLATE)
    shape = shed.parts[number].shape
    tight = tuple(replace(hole, diameter=12.0) for hole in shape.holes)
    return _parts(shed, number, shape=replace(shape, holes=tight))


def _a_wrong_grip(shed: Shed) -> Shed:
    number = next(i for i, p in enumerate(shed.parts) if p.role is Role.BOLTS)
    group = shed.parts[number].shape
    longer = replace(group.fastener, grip=group.fastener.grip + 1.0)
    return _parts(shed, number, shape=replace(group, fastener=longer))


def _a_hole_too_many(shed: Shed) -> Shed:
    number = _drilled(shed, Role.GUSSET)
    shape = shed.parts[number].shape
    x, y, z = shape.holes[0].centre
    more = replace(shape.holes[0], centre=(x + 1.0, y + 50.0, z))
    return _parts(shed, number, shape=replace(shape, holes=(*shape.holes, more)))


def _a_cleat_not_fastened(shed: Shed) -> Shed:
    return _run(shed, JointKind.PURLIN_CLEAT, welds=(), clamps=())


def _a_sunken_pack(shed: Shed) -> Shed:
    placement = shed.pieces.placement.copy()
    number = next(i for i, key in enumerate(shed.pieces.keys) if "/column/A/start/pack/" in key)
    placement[number, 2, 3] -= 1.0
    return replace(shed, pieces=replace(shed.pieces, placement=placement))


def _a_weld_of_the_site(shed: Shed) -> Shed:
    run = _first(shed, JointKind.PINNED_BASE)
    return _run(shed, JointKind.PINNED_BASE, welds=tuple(replace(weld, site=True) for weld in run.welds))


def _an_assembly_mixed_up(shed: Shed) -> Shed:
    owner = shed.pieces.assembly.copy()
    plates = [i for i, part in enumerate(shed.pieces.part) if shed.parts[part].role is Role.BASE_PLATE]
    owner[plates[0]], owner[plates[1]] = owner[plates[1]], owner[plates[0]]
    return replace(shed, pieces=replace(shed.pieces, assembly=owner))


def _a_hole_near_the_edge(shed: Shed) -> Shed:
    number = _drilled(shed, Role.CLEAT)
    plate = shed.parts[number].shape
    assert isinstance(plate, Plate)
    _, y, z = plate.holes[0].centre
    edge = max(px for px, _ in plate.corners) - 1.19 * plate.holes[0].diameter
    near = replace(plate.holes[0], centre=(edge, y, z))
    return _parts(shed, number, shape=replace(plate, holes=(near,)))


def _holes_near_each_other(shed: Shed) -> Shed:
    number = _drilled(shed, Role.BASE_PLATE)
    plate = shed.parts[number].shape
    d = plate.holes[0].diameter
    pair = (replace(plate.holes[0], centre=(0.0, s * 2.19 * d / 2, plate.thickness / 2)) for s in (-1, 1))
    return _parts(shed, number, shape=replace(plate, holes=tuple(pair)))


@pytest.mark.parametrize(
    ("rule", "spoil"),
    [
        (fastened.tables_of_joints_are_sound, _a_fitting_twice),
        (fastened.joints_are_closed, _a_weld_left_out),
        (fastened.holes_are_in_walls, _a_hole_beside_its_wall),
        (fastened.bolts_pass_through_holes, _a_moved_plate),
        (fastened.bolts_pass_through_holes, _a_plate_off_the_face),
        (fastened.bolts_pass_through_holes, _a_hole_left_out),
        (fastened.bolts_pass_through_holes, _a_tight_hole),
        (fastened.bolts_pass_through_holes, _a_wrong_grip),
        (fastened.holes_have_bolts, _a_hole_too_many),
        (fastened.fittings_are_fastened, _a_cleat_not_fastened),
        (fastened.packs_lie_under_plates, _a_sunken_pack),
        (fastened.assemblies_are_welded, _a_weld_of_the_site),
        (fastened.assemblies_are_welded, _an_assembly_mixed_up),
        (fastened.pitches_and_edges_are_held, _a_hole_near_the_edge),
        (fastened.pitches_and_edges_are_held, _holes_near_each_other),
    ],
    ids=lambda f: f.__name__,
)
def test_each_rule_can_fail(rule, spoil):
    shed = cast.shed_of(SPECIMEN)
    assert list(rule(shed)) == []
    assert list(rule(spoil(shed))) != []


def test_no_rule_is_without_a_spoiled_shed():
    marks = test_each_rule_can_fail.pytestmark[0].args[1]
    assert {rule for rule, _ in marks} == set(FASTENING_RULES)


# What the whole building holds, counted in two ways.


@pytest.mark.parametrize("name", cast.CAST)
def test_holes_of_members_come_to_the_bolts_that_pass_them(name):
    """Layers times bolts of all clamps are the holes of all pieces, vents of galvanized tubes left out."""
    shed = cast.shed_of(name)
    passed: Counter[Sort] = Counter()
    for run in shed.joints:
        columns = fastened.columns_of(run)
        for clamp in run.clamps:
            for column, _ in clamp.layers:
                for group, layer in columns[:, [clamp.group, column]].tolist():
                    bolts = shed.parts[shed.pieces.part[group]].shape
                    assert isinstance(bolts, BoltGroup)
                    passed[shed.parts[shed.pieces.part[layer]].role.sort] += bolts.count
    drilled: Counter[Sort] = Counter()
    for part, count in zip(shed.parts, shed.quantities.tolist(), strict=True):
        if not isinstance(part.shape, BoltGroup):
            hollow = isinstance(part.shape, Bar) and isinstance(part.shape.section.profile, Hollow | Pipe)
            drilled[part.role.sort] += 0 if hollow else len(part.shape.holes) * count
    assert drilled[Sort.FITTING] == passed[Sort.FITTING]
    assert drilled[Sort.MEMBER] <= passed[Sort.MEMBER]


@pytest.mark.parametrize("name", [n for n in cast.CAST if n != "distribution-hall"])
def test_a_joint_is_worked_out_once_for_each_configuration(name):
    """Runs are configurations: far fewer than joints, and no two of them add the same in the same way."""
    shed = cast.shed_of(name)
    joints = sum(len(run.pieces) for run in shed.joints)
    assert len(shed.joints) < joints
    for run in shed.joints:
        if run.fittings.size:
            kinds = shed.pieces.part[run.fittings]
            assert (kinds == kinds[0]).all(), run.kind
            turns = shed.pieces.placement[run.fittings]
            away = turns[:, :, :, 3] - run.points[:, None]
            # Parts stand for things up to half a millimetre apart in length.
            assert np.abs(away - away[0]).max() < fastened.NEAR
