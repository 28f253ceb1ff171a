"""Sleeved purlins: a plain channel inside both, bolted through both webs and the cleat."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from joint_bench import bench, faults
from secondary_cast import purlin_joint, rail_joint

from shedbim.description.connections import Connections
from shedbim.errors import DescriptionError
from shedbim.expand.joints.cleat import cleat
from shedbim.expand.joints.sleeve import sleeve_section
from shedbim.model.roles import Role
from shedbim.sections import catalogue

OPTIONS = Connections(cleats={"continuity": "sleeved", "sleeve": "1.2 m"})
NAMES = ("Z 200x75x20x2.5", "C 200x75x20x2.0", "Z 120x50x18x1.6", "Z 300x90x25x3", "C 250x80x22x2.5")


@pytest.mark.parametrize("rises", [True, False])
@pytest.mark.parametrize("name", NAMES)
def test_a_sleeve_lies_inside_both_purlins(name, rises):
    joint = purlin_joint("IPE 330", name, pitch=7.0, rises=rises)
    made = cleat(joint, OPTIONS)
    assert list(faults(joint, made)) == []
    sleeve = next(each for each in made.fittings if each.name == "sleeve")
    assert sleeve.role is Role.SLEEVE
    assert sleeve.shape.length == 1200.0
    solids = bench(joint, made).drilled
    for number in (1, 2):
        assert solids[number].min_gap(solids["sleeve"], 10.0) == pytest.approx(0.0, abs=1e-3)
    # Within the depth and the flanges of the purlin.
    purlin = joint.members[1]
    box = solids["sleeve"].transform(
        np.column_stack([purlin.frame[:, :3].T, -purlin.frame[:, :3].T @ purlin.origin])
    )
    low, high = np.array(box.bounding_box()[:3]), np.array(box.bounding_box()[3:])
    bounds = purlin.section.outline.bounds
    assert low[1] >= bounds[0]
    assert high[1] <= bounds[2]
    assert (high - low)[2] <= purlin.section.height - 2 * purlin.section.profile.thickness


def test_bolts_of_a_sleeve():
    """Two on each side of the frame through sleeve, web and cleat, two at each end of the sleeve without cleat."""
    joint = purlin_joint("IPE 330", NAMES[0])
    made = cleat(joint, OPTIONS)
    layers = {bolting.name: tuple(layer.of for layer in bolting.layers) for bolting in made.boltings}
    assert layers == {
        "bolts 1": ("sleeve", 1, "cleat"),
        "bolts 2": ("sleeve", 2, "cleat"),
        "sleeve bolts 1": ("sleeve", 1),
        "sleeve bolts 2": ("sleeve", 2),
    }
    places = {
        name: {abs(round(float(p[1]), 6)) for p in b.points}
        for name, b in zip(layers, made.boltings, strict=True)
    }
    # 30 mm from the end of 1.2 m.
    assert places["sleeve bolts 1"] == places["sleeve bolts 2"] == {570.0}
    # 2.5 + 2.5 + 8 + 3 + 14.8 + 2 = 32.8: M16x35; 5 + 19.8 = 24.8: M16x30 (EN 1090-2 8.2.2).
    assert [b.fastener.designation for b in made.boltings] == ["M16x35 4.6", "M16x30 4.6"] * 2


def test_golden_sleeve():
    """By hand: 200 - 2 x 2.5 - 2 = 193, to 190; 75 - 5 - 3.75 - 1 = 65.25, to 65; the purlin's own wall."""
    assert sleeve_section(catalogue.section("Z 200x75x20x2.5")).designation == "U 190x65x2.5"


def test_rails_and_lone_ends_have_none():
    for joint in (purlin_joint("IPE 330", NAMES[0], "through"), rail_joint("HEB 300", NAMES[1])):
        assert [each.name for each in cleat(joint, OPTIONS).fittings] == ["cleat"]


def test_a_sleeve_longer_than_its_purlins_is_refused():
    joint = purlin_joint("IPE 330", NAMES[0])
    short = [joint.members[0], joint.members[1], joint.members[2]]
    short[1] = replace(
        short[1], to_start=600.0 if short[1].to_start else 0.0, to_end=600.0 if short[1].to_end else 0.0
    )
    with pytest.raises(DescriptionError) as error:
        cleat(replace(joint, members=tuple(short)), OPTIONS)
    assert error.value.faults[0].field == "connections.cleats.sleeve"
