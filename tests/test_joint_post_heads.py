"""Post heads: the post is held across the wall and slides upright, under any slope and at a ridge."""

from __future__ import annotations

from functools import cache
from itertools import product
from math import cos, radians, sin, tan

import joint_solids
import numpy as np
import pytest

from shedbim.description.connections import Connections
from shedbim.errors import DescriptionError
from shedbim.expand.clearances import POST_HEAD_GAP
from shedbim.expand.joints.contract import Joint
from shedbim.expand.joints.post_head import head_room, post_head
from shedbim.expand.sticks import along, stick
from shedbim.fasteners.distances import edge, wrench_wall
from shedbim.fasteners.fit import Fit
from shedbim.fasteners.holes import slot_travel
from shedbim.model.joints import At, JointKind
from shedbim.model.roles import Role
from shedbim.sections.catalogue import section

#: Post, steel above, half the end frame: how far the outer face of the posts stands off the frame's plane.
PAIRS = [
    ("IPE 240", "IPE 300", 150.0), ("HEA 200", "IPE 270", 140.0), ("IPE 200", "IPE 400", 95.0),
    ("HEA 120", "IPE 300", 75.0), ("IPE 330", "IPE 160", 136.5), ("W 8x21", "W 10x22", 102.0),
    ("IPE 300", "SHS 150x150x8", 150.0), ("HEA 180", "RHS 160x80x6", 100.0),
    ("SHS 160x160x8", "IPE 300", 136.5), ("RHS 200x120x8", "SHS 120x120x6", 125.0),
]  # fmt: skip
PITCHES = [-38.0, 0.0, 6.5]


def _joint(post, steel, face, pitch, place="middle", other=None):
    """A post under steel that runs on either way, or ends 20 mm beside it, or at a mitre over it."""
    above, below = section(steel), section(post)
    rise = tan(radians(pitch))
    direction = np.array([cos(radians(pitch)), 0.0, sin(radians(pitch))])
    normal = np.array([-direction[2], 0.0, direction[0]])
    under = head_room(below, "M16", max(abs(rise), abs(rise if other is None else tan(radians(other)))))
    axis = np.array([0.0, 0.0, under]) + normal * above.height / 2
    axis = axis - direction * axis[0] / direction[0]
    low, high = (-5000.0, 5000.0)
    if place != "middle":
        short = 20.0 if place == "ridge" else 0.0
        low, high = (low, -short) if pitch >= 0 else (short, high)
    ends = [axis + direction * x / direction[0] for x in (low, high)]
    upright = along((1, 0, 0))
    bar, placed = stick(above, *ends, (0, 0, 1), start_planes=upright, end_planes=upright)
    carrier = joint_solids.met(Role.GABLE_RAFTER, bar, placed, At.ALONG, np.zeros(3))
    y = -(face - below.height / 2)
    slopes = [(-rise, 0, 1)] if place == "middle" else [(-rise, 0, 1), (rise, 0, 1)]
    planes = None if post.startswith(("SHS", "RHS")) else along(*slopes)
    bar, placed = stick(below, (0, y, -6000), (0, y, 0), (0, 1, 0), end_planes=planes)
    return Joint(
        JointKind.POST_HEAD, (carrier, joint_solids.met(Role.GABLE_POST, bar, placed, At.END, np.zeros(3)))
    )


def _made(*args, options=()):
    joint = _joint(*args)
    return joint, post_head(joint, Connections.model_validate(dict(options)))


@cache
def _solid(case):
    """The joint of a case, what was made for it, and its solids."""
    joint, made = _made(*case)
    return joint, made, joint_solids.scene(joint, made)


CASES = [
    *((*pair, pitch, "middle") for pair, pitch in product(PAIRS, PITCHES)),
    *((*pair, pitch, place) for pair, pitch, place in product(PAIRS[::3], [-7.0, 32.0], ["ridge", "mitre"])),
]


@pytest.mark.parametrize("case", CASES, ids=str)
def test_nothing_shares_space_and_welds_touch(case):
    _, made, solids = _solid(case)
    assert joint_solids.overlapping(solids) == []
    for weld in made.welds:
        assert joint_solids.apart(*(solids[ref] for ref in weld.between)) < 1e-3
    joined = {ref for weld in made.welds for ref in weld.between}
    assert {0, "hanger"} <= joined
    assert ("fin" in joined and 1 in joined) or 1 in {layer.of for layer in made.boltings[0].layers}


@pytest.mark.parametrize("case", CASES, ids=str)
def test_the_post_slides(case):
    """The steel above comes down by the travel of a slot, and by the gap in the room of all but the bolts."""
    _, made, solids = _solid(case)
    above = solids[0] + solids["hanger"]
    below = sum((solids[ref] for ref in solids if ref not in (0, "hanger", "bolts")), joint_solids.Manifold())
    assert (above.translate((0, 0, -POST_HEAD_GAP + 0.1)) ^ below).volume() < 1.0
    travel = slot_travel(made.boltings[0].fastener.diameter, Fit.LONG_SLOT) / 2
    for way in (-1, 1):
        assert (solids["bolts"].translate((0, 0, way * travel)) ^ solids["hanger"]).volume() < 1.0
        assert (solids["bolts"].translate((0, 0, way * (travel + 2.0))) ^ solids["hanger"]).volume() > 1.0


@pytest.mark.parametrize("case", CASES, ids=str)
def test_bolts_have_room(case):
    """Edges of hanger, fin and post, wrench to flanges and cap, slots upright, grip the sum of face to face layers."""
    joint, made, solids = _solid(case)
    (bolts,) = made.boltings
    d = bolts.fastener.diameter
    post = joint.members[1]
    assert len(bolts.points) == 2
    assert bolts.fastener.grip == pytest.approx(sum(layer.thickness for layer in bolts.layers))
    assert [layer.fit for layer in bolts.layers] == [Fit.LONG_SLOT, *[Fit.NORMAL] * (len(bolts.layers) - 1)]
    assert np.allclose(bolts.layers[0].along, (0, 0, 1))
    depth = 0.0
    for layer in bolts.layers:
        for point in bolts.points:
            middle = point + bolts.axis * (depth + layer.thickness / 2)
            turns = np.linspace(0, 2 * np.pi, 16, endpoint=False)
            out = np.column_stack([0 * turns, np.cos(turns), np.sin(turns)]) * (edge(d) - 0.1)
            ring = joint_solids.Manifold.compose(
                [joint_solids.Manifold.sphere(0.05, 8).translate(middle + each) for each in out]
            )
            if layer.fit is Fit.LONG_SLOT:
                # Upright the slot takes more of the plate: only the sides are as far as an edge.
                ring = ring.trim_by_plane((0, 0, 1), middle[2] - 10.0).trim_by_plane(
                    (0, 0, -1), -middle[2] - 10.0
                )
            assert (ring ^ solids[layer.of]).volume() > 0.99 * ring.volume()
        depth += layer.thickness
    for point in bolts.points:
        _, _, z = post.local(point)
        inner = post.section.height / 2 - getattr(post.section.profile, "tf", 0.0)
        assert abs(z) + wrench_wall(d) <= inner


def test_the_hanger_is_in_the_frame_where_the_post_reaches_it():
    _, made = _made("IPE 240", "IPE 300", 150.0, 6.0)
    assert made.boltings[0].points[:, 1].mean() == pytest.approx(0.0, abs=26.0)
    _, made = _made("IPE 330", "IPE 160", 136.5, 6.0)
    assert made.boltings[0].points[:, 1].mean() == pytest.approx(0.0, abs=1e-6)


def test_beside_a_ridge_a_spacer_brings_the_hanger_under_the_rafter():
    joint, made = _made("IPE 240", "IPE 300", 150.0, 6.0, "ridge")
    assert {fitting.name for fitting in made.fittings} == {"hanger", "spacer"}
    hanger = joint_solids.scene(joint, made)["hanger"].bounding_box()
    assert hanger[3] <= -20 - 12


@pytest.mark.parametrize(
    ("case", "options", "field"),
    [
        (("HEA 100", "IPE 300", 75.0, 5.0), {"post_heads": {"size": "M24"}}, "connections.post_heads.size"),
        (("SHS 90x90x5", "IPE 300", 75.0, 5.0), {}, "connections.post_heads.size"),
        (("HEA 120", "IPE 160", 212.0, 5.0), {}, "frames.gables.posts"),
    ],
)
def test_what_cannot_be_built_is_refused(case, options, field):
    with pytest.raises(DescriptionError) as caught:
        _made(*case, options=options)
    assert caught.value.faults[0].field == field
