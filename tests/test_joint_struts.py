"""Ends of struts and ties: fins that lie on each other, at columns, rafters, chords and ridges."""

from __future__ import annotations

from dataclasses import replace

import joint_bench
import joint_solids
import numpy as np
import pytest
from joint_panels import corners_of
from manifold3d import Manifold

from shedbim.description.connections import Connections
from shedbim.errors import DescriptionError
from shedbim.expand.joints.contract import Joint
from shedbim.expand.joints.strut_end import strut_end
from shedbim.expand.joints.tie_end import tie_end
from shedbim.expand.joints.tube_ends import slot_depth
from shedbim.expand.sticks import along, stick
from shedbim.fasteners.distances import wrench_wall
from shedbim.fasteners.holes import hole_diameter
from shedbim.model.bodies import notch_body
from shedbim.model.joints import At, JointKind
from shedbim.model.roles import Role
from shedbim.sections.catalogue import section
from shedbim.sections.profiles import IShape

NOWHERE = np.zeros(3)
CAPPED = Connections()
SLOTTED = Connections.model_validate({"tube_ends": {"struts": "slotted"}})
STRUTS = ["CHS 88.9x4", "SHS 100x100x5", "SHS 60x60x4", "RHS 120x60x5", "CHS 48.3x3", "CHS 168.3x6"]


def _column(name):
    bar, place = stick(section(name), (0, 0, -3000), (0, 0, 420), (1, 0, 0))
    return joint_solids.met(Role.COLUMN, bar, place, At.ALONG, NOWHERE)


def _roof_steel(name, pitch, start=-4000.0, end=4700.0):
    """A rafter or chord through the origin, its ends cut upright."""
    rise = np.array([1.0, 0.0, np.tan(pitch)])
    upright = along((1, 0, 0))
    bar, place = stick(
        section(name), rise * start, rise * end, (0, 0, 1), start_planes=upright, end_planes=upright
    )
    return joint_solids.met(Role.RAFTER, bar, place, At.ALONG, NOWHERE)


CARRIERS = {
    "between flanges": _column("HEB 300"),
    "slim column": _column("IPE 200"),
    "square column": _column("SHS 250x250x10"),
    "round column": _column("CHS 273x10"),
    "rafter": _roof_steel("IPE 300", 0.1),
    "chord": _roof_steel("SHS 150x150x8", -0.2),
    "left of an apex": _roof_steel("IPE 300", 0.12, end=-20.0),
    "right of an apex": _roof_steel("IPE 300", -0.12, start=20.0),
    "left of a mitre": _roof_steel("SHS 150x150x8", 0.12, end=0.0),
}


def _strut(carrier, name, sense=1.0, drop=0.0, length=5200.0, role=Role.STRUT):
    """A strut that begins or ends at a carrier, where the layout stops it."""
    profile, size = carrier.section.profile, section(name)
    stop = carrier.section.width / 2 + 10.0
    between = carrier.role is Role.COLUMN and isinstance(profile, IShape)
    if between and size.width <= profile.h - 2 * profile.tf - 2 * profile.r:
        stop = profile.tw / 2 + 10.0
    near, far = np.array([0.0, sense * stop, -drop]), np.array([0.0, sense * (stop + length), -drop])
    ends = (near, far) if sense > 0 else (far, near)
    bar, place = stick(size, *ends, (0, 0, 1))
    return joint_solids.met(role, bar, place, At.START if sense > 0 else At.END, NOWHERE)


def _joint(where, name, options=CAPPED, **strut):
    carrier = CARRIERS[where]
    joint = Joint(JointKind.STRUT_END, (carrier, _strut(carrier, name, **strut)))
    return joint, strut_end(joint, options)


def _solids(joint, made):
    """As ``joint_bench`` has them, the slot of a tube cut too."""
    bench = joint_bench.bench(joint, made)
    bodies = dict(bench.drilled)
    for work in made.works:
        for notch in work.notches:
            bodies[work.of] -= notch_body(notch).transform(joint.members[work.of].frame)
    return bodies, bench.bolts


@pytest.mark.parametrize("options", [CAPPED, SLOTTED], ids=["capped", "slotted"])
@pytest.mark.parametrize("name", STRUTS)
@pytest.mark.parametrize("where", CARRIERS)
def test_an_end_is_sound(where, name, options):
    """No overlap, welds that touch, holes in every layer, edges of 1.2 d0, room for wrenches, all held."""
    joint, made = _joint(where, name, options)
    bodies, bolts = _solids(joint, made)
    everything = {**bodies, **bolts}
    keys = list(everything)
    for i, a in enumerate(keys):
        for b in keys[i + 1 :]:
            assert (everything[a] ^ everything[b]).volume() < 100.0, (a, b)
    for weld in made.welds:
        assert bodies[weld.between[0]].min_gap(bodies[weld.between[1]], 20.0) < 0.5
    assert list(joint_bench.bolt_faults(joint, made, joint_bench.bench(joint, made))) == []
    held = {ref for weld in made.welds for ref in weld.between} | {
        layer.of for bolting in made.boltings for layer in bolting.layers
    }
    assert held >= set(bodies)
    (bolting,) = made.boltings
    d = bolting.fastener.diameter
    for point in bolting.points:
        for start, length in ((-0.7 * d, 0.7 * d - 0.2), (bolting.fastener.grip + 0.2, 1.2 * d)):
            at = point + bolting.axis * start
            wrench = joint_bench.cylinder(at, bolting.axis, 2 * wrench_wall(d), length)
            assert all((wrench ^ body).volume() < 100.0 for body in bodies.values())


@pytest.mark.parametrize("where", CARRIERS)
def test_fins_stay_within_the_height_of_their_strut(where):
    for name in STRUTS:
        joint, made = _joint(where, name)
        half = joint.members[1].section.height / 2
        for fin in ("fin", "carrier fin"):
            assert np.abs(corners_of(made, fin)[:, 2]).max() <= half + 1e-6


def test_struts_of_both_bays_meet_on_one_web():
    """Mirror images about the frame's plane, and a clear web between them."""
    _, here = _joint("between flanges", "CHS 88.9x4")
    _, there = _joint("between flanges", "CHS 88.9x4", sense=-1.0)
    a, b = (corners_of(made, "carrier fin") for made in (here, there))
    assert a[:, 1].min() == pytest.approx(5.5)
    assert b[:, 1].max() == pytest.approx(-5.5)
    assert np.allclose(np.sort(a[:, 1]), np.sort(-b[:, 1]))
    assert here.works[0].set_back == pytest.approx(there.works[0].set_back)


def test_the_strut_moves_back_by_lap_air_and_cap():
    """CHS 88.9, M20: 40 + 70 + 40 mm of lap (common practice), 10 mm of air, a cap of 10 mm."""
    _, made = _joint("rafter", "CHS 88.9x4")
    assert made.boltings[0].fastener.designation == "M20x45 8.8"
    assert made.works[0].set_back == pytest.approx(170.0)
    _, slotted = _joint("rafter", "CHS 88.9x4", SLOTTED)
    assert slotted.works[0].set_back == pytest.approx(160.0)


def test_the_slot_holds_the_fin():
    """The fin goes 110 mm in, 1.2 diameters up to a whole ten; the slot is 10.8 mm wide and takes that of two walls."""
    joint, made = _joint("rafter", "CHS 88.9x4", SLOTTED)
    assert slot_depth(section("CHS 88.9x4")) == 110.0
    bodies, _ = _solids(joint, made)
    plain = joint_bench.member_solid(joint.members[1], made.works[0].set_back)
    wall = float(
        np.mean([np.sqrt(44.45**2 - x * x) - np.sqrt(40.45**2 - x * x) for x in np.linspace(-5.4, 5.4, 99)])
    )
    assert plain.volume() - bodies[1].volume() == pytest.approx(2 * wall * 10.8 * 115.0, rel=0.01)
    assert isinstance(bodies[1], Manifold)


def test_bolts_that_cannot_be_put_in_between_flanges_come_out_past_them():
    """HEB 160 is 160 mm wide and 160 deep: 62 mm from its middle to a flange."""
    slim, wide = _column("HEB 160"), CARRIERS["between flanges"]
    for column, outside in ((slim, True), (wide, False)):
        joint = Joint(JointKind.STRUT_END, (column, _strut(column, "CHS 76.1x4")))
        made = strut_end(joint, Connections())
        past_tips = made.boltings[0].points[0][1] - column.section.width / 2
        assert (past_tips > hole_diameter(16.0)) == outside


def test_beside_an_apex_the_fin_stands_clear_of_the_end_plate():
    """The rafter ends 20 mm from the ridge: its fin is 12 mm or more farther in, on the side where the rafter is."""
    for where, side in (("left of an apex", -1.0), ("right of an apex", 1.0)):
        _, made = _joint(where, "CHS 88.9x4")
        x = corners_of(made, "carrier fin")[:, 0] * side
        assert x.min() - 5.0 >= 32.0


def test_a_strut_that_hangs_lower_than_its_carrier_is_drawn_up_or_refused():
    joint, made = _joint("chord", "SHS 60x60x4", drop=45.0)
    bodies, bolts = _solids(joint, made)
    assert (bodies["carrier fin"] ^ bodies[0]).volume() < 100.0
    assert bodies["carrier fin"].min_gap(bodies[0], 5.0) < 0.5
    assert bolts
    with pytest.raises(DescriptionError) as refused:
        _joint("chord", "SHS 60x60x4", drop=90.0)
    assert refused.value.faults[0].field == "bracing.struts.section"


def test_what_is_too_small_or_too_short_is_refused_by_its_field():
    with pytest.raises(DescriptionError) as refused:
        _joint("rafter", "CHS 26.9x3.2", role=Role.EAVES_STRUT)
    assert refused.value.faults[0].field == "bracing.eaves_strut.section"
    with pytest.raises(DescriptionError) as refused:
        _joint("rafter", "CHS 88.9x4", length=400.0)
    assert refused.value.faults[0].field == "building.bays"


def test_ties_end_as_struts_do():
    carrier = CARRIERS["chord"]
    tie = _strut(carrier, "CHS 76.1x4", role=Role.TIE)
    made = tie_end(Joint(JointKind.TIE_END, (carrier, tie)), Connections())
    same = strut_end(Joint(JointKind.STRUT_END, (carrier, replace(tie, role=Role.STRUT))), Connections())
    assert [each.name for each in made.fittings] == ["carrier fin", "fin", "cap"]
    assert np.allclose(corners_of(made, "carrier fin"), corners_of(same, "carrier fin"))


def test_equal_struts_need_few_plates():
    """Between flanges, on rafters of two pitches and on columns of two webs: the strut's own fin is always one."""
    fins = [
        _joint(where, "CHS 88.9x4")[1].fittings[1].shape for where in ("between flanges", "rafter", "chord")
    ]
    assert {fin.corners for fin in fins} == {fins[0].corners}


def test_options_are_heard():
    options = Connections.model_validate({"struts": {"bolts": "3", "size": "M16", "thickness": "12 mm"}})
    _, made = _joint("rafter", "CHS 88.9x4", options)
    (bolting,) = made.boltings
    assert len(bolting.points) == 3
    assert bolting.fastener.diameter == 16.0
    assert bolting.fastener.grip == 24.0
