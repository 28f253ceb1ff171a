"""Where braces cross: the pack between angles, the gusset through a tube."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from joint_panels import PanelCase, corners_of, made_panel, mirrored, panel_solids

from shedbim.errors import DescriptionError
from shedbim.expand.joints.brace_crossing import brace_crossing
from shedbim.model.joints import JointKind
from shedbim.model.roles import Role

ANGLES = PanelCase(("IPE 300", "IPE 240"), "L 80x80x8", "CHS 88.9x4", 3900.0, 6100.0, 0.2)
TUBES = PanelCase(("HEB 300", "HEB 300"), "CHS 114.3x5", "CHS 88.9x4", 4900.0, 6300.0, None)


def _crossing(case):
    members, joints = made_panel(case)
    return members, joints, next(made for made in joints if made.joint.kind is JointKind.BRACE_CROSSING)


def test_angles_are_bolted_once_on_both_back_marks():
    """45 mm from both heels, through leg, pack and leg: 8 + 10 + 8 mm."""
    _, _, made = _crossing(ANGLES)
    (bolting,), (pack,) = made.connection.boltings, made.connection.fittings
    assert [layer.thickness for layer in bolting.layers] == pytest.approx([8.0, 10.0, 8.0])
    assert bolting.fastener.grip == pytest.approx(26.0)
    assert pack.role is Role.PACK
    (point,) = bolting.points
    for met in made.joint.members:
        assert met.local(point)[1] - met.section.outline.bounds[0] == pytest.approx(45.0)
    # The first layer's outer face is the inner face of the first leg.
    first = made.joint.members[0]
    assert first.local(point)[2] == pytest.approx(first.section.outline.bounds[1] + 8.0)


def test_packs_of_equal_angles_are_equal_squares():
    sizes = {
        _crossing(replace(ANGLES, width=width))[2].connection.fittings[0].shape.size
        for width in (3100.0, 4400.0)
    }
    assert sizes == {(80.0, 80.0)}


def test_the_slot_of_a_tube_takes_the_gusset_and_little_more():
    """Steel that the slot takes: two walls, as long as the plate is wide there, 0.8 mm wider than it is thick."""
    members, joints, made = _crossing(TUBES)
    name = made.names[0]
    work = next(work for work in made.connection.works if work.of == 0)
    whole = replace(
        made, connection=replace(made.connection, works=tuple(w for w in made.connection.works if w.of))
    )
    others = [each for each in joints if each is not made]
    taken = (
        panel_solids(members, [*others, whole])[name].volume()
        - panel_solids(members, [*others, made])[name].volume()
    )
    assert work.notches[0].depth == pytest.approx(10.8)
    through, half = (each.x for each in made.joint.members[:2])
    width = (80.0 + 0.8) / float(np.linalg.norm(np.cross(through, half)))
    # Off the middle of the tube its walls are thicker to go through: 57.15 and 52.15 mm radii, 4.6 to 15.4 mm off.
    off = np.linspace(4.6, 15.4, 200)
    wall = float(np.mean(np.sqrt(57.15**2 - off**2) - np.sqrt(52.15**2 - off**2)))
    assert taken == pytest.approx(2 * wall * 10.8 * width, rel=0.03)


def test_halves_have_their_fins_on_the_gusset_of_the_through_tube():
    _, _, made = _crossing(TUBES)
    assert [fitting.name for fitting in made.connection.fittings] == ["gusset", "fin 1", "fin 2"]
    for number, bolting in enumerate(made.connection.boltings, start=1):
        assert [layer.of for layer in bolting.layers] == [f"fin {number}", "gusset"]
        half = made.joint.members[number]
        for point in bolting.points:
            assert half.local(point)[1] == pytest.approx(0.0, abs=1e-9)
    assert [work.set_back > 150.0 for work in made.connection.works] == [False, True, True]


def test_a_tube_too_slim_for_the_slot_is_refused():
    with pytest.raises(DescriptionError) as refused:
        made_panel(replace(TUBES, brace="CHS 33.7x3.2"))
    assert refused.value.faults[0].field == "bracing.walls.section"


@pytest.mark.parametrize("axis", [0, 1, 2])
def test_the_mirror_image_of_a_crossing_has_a_mirrored_pack(axis):
    _, _, made = _crossing(ANGLES)
    image = brace_crossing(mirrored(made, axis), ANGLES.options)
    expected, found = corners_of(made.connection, "pack"), corners_of(image, "pack")
    expected[:, axis] *= -1
    assert all(np.linalg.norm(found - corner, axis=1).min() < 1e-6 for corner in expected)
