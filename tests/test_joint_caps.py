"""Caps: the head stays where it was, the plate keeps within the column's faces and lies on the cut."""

from __future__ import annotations

from math import cos, radians, sin, tan

import joint_solids
import numpy as np
import pytest

from shedbim.description.connections import Connections
from shedbim.errors import DescriptionError
from shedbim.expand.joints.cap import column_cap
from shedbim.expand.joints.contract import Joint
from shedbim.expand.sticks import along, stick
from shedbim.model.joints import At, JointKind
from shedbim.model.roles import Role
from shedbim.sections.catalogue import section
from shedbim.sections.profiles import IShape

COLUMNS = ["HEB 300", "IPE 450", "W 310x60", "SHS 250x250x10", "RHS 300x200x10", "CHS 273x10"]
PITCHES = [-32.0, -6.0, 0.0, 4.5, 18.0]
HEAD = 6210.0


def _made(name, pitch, options=()):
    normal = (-sin(radians(pitch)), 0.0, cos(radians(pitch)))
    bar, place = stick(section(name), (0, 0, 0), (0, 0, HEAD), (1, 0, 0), end_planes=along(normal))
    column = joint_solids.met(Role.COLUMN, bar, place, At.END, np.array([0.0, 0.0, HEAD]))
    joint = Joint(JointKind.COLUMN_CAP, (column,))
    return joint, column_cap(joint, Connections.model_validate(dict(options)))


@pytest.mark.parametrize("name", COLUMNS)
@pytest.mark.parametrize("pitch", PITCHES)
def test_the_cap_lies_on_the_column(name, pitch):
    joint, made = _made(name, pitch)
    solids = joint_solids.scene(joint, made)
    assert joint_solids.overlapping(solids) == []
    for weld in made.welds:
        assert joint_solids.apart(*(solids[ref] for ref in weld.between)) < 1e-3
    below = solids["cap plate"].translate((0, 0, -0.5))
    # It covers the whole wall but the strip that its inset and the steps of its size leave free.
    assert (below ^ solids[0]).volume() > 0.2 * 0.5 * section(name).area


@pytest.mark.parametrize("name", COLUMNS)
@pytest.mark.parametrize("pitch", PITCHES)
def test_the_cap_keeps_within_the_faces_and_under_the_old_head(name, pitch):
    joint, made = _made(name, pitch)
    cap = joint_solids.scene(joint, made)["cap plate"]
    box = np.array(cap.bounding_box())
    half = np.array([section(name).height, section(name).width]) / 2
    assert (box[:2] >= -half - 1e-6).all()
    assert (box[3:5] <= half + 1e-6).all()
    # Not more than a step and the inset of a tube's wall short of them.
    assert (box[3:5] >= half - 5.0 - section(name).profile.thickness).all()
    if isinstance(section(name).profile, IShape):
        # End plates are drawn up to the faces of flanges: 2 mm of air at least (common practice).
        assert min(half[0] - box[3], half[0] + box[0]) >= 2.0 - 1e-6
    # Upper face in the plane that the column ended with.
    heights = np.array([p[2] - p[0] * tan(radians(pitch)) for p in cap.to_mesh().vert_properties])
    assert heights.max() == pytest.approx(0.0, abs=1e-3)


def test_thickness_by_rule_and_by_option():
    """Half of the flange of HEB 1000 (36 mm), at least 10 mm."""
    for name, options, thickness in (
        ("HEB 1000", {}, 20),
        ("IPE 450", {}, 10),
        ("IPE 450", {"caps": {"thickness": "8 mm"}}, 8),
    ):
        assert _made(name, 5.0, options)[1].fittings[0].shape.thickness == thickness


def test_a_cap_too_thick_for_its_slope_is_refused():
    with pytest.raises(DescriptionError) as caught:
        _made("SHS 40x40x4", 60.0, {"caps": {"thickness": "40 mm"}})
    assert caught.value.faults[0].field == "connections.caps.thickness"
