"""Bases: nothing overlaps, anchors stand free, plates are as the rules say, what cannot be built is refused."""

from __future__ import annotations

from dataclasses import replace
from functools import cache
from itertools import product

import joint_solids
import numpy as np
import pytest

from shedbim.description.connections import Connections
from shedbim.errors import DescriptionError
from shedbim.expand.joints.base import fixed_base, pinned_base, post_base
from shedbim.expand.joints.contract import Joint
from shedbim.expand.sticks import stick
from shedbim.fasteners.distances import edge, wrench_pitch, wrench_wall
from shedbim.fasteners.welds import leg
from shedbim.model.joints import At, JointKind
from shedbim.model.roles import Role
from shedbim.sections.catalogue import section

COLUMNS = ["HEB 300", "IPE 450", "HEA 320", "IPE 200", "UB 457x191x67", "W 310x60", "SHS 250x250x10", "RHS 300x200x10",
           "CHS 273x10", "HEB 1000"]  # fmt: skip
POSTS = ["IPE 120", "IPE 200", "IPE 330", "HEA 100", "HEA 180", "SHS 160x160x8", "RHS 200x120x8"]
MAKERS = {
    "pinned": (pinned_base, (1, 0, 0)),
    "fixed": (fixed_base, (1, 0, 0)),
    "post": (post_base, (0, 1, 0)),
}
CASES = [*product(COLUMNS, ["pinned", "fixed"]), *product(POSTS, ["post"])]
FULL = {"bases": {"stiffeners": "gussets", "shear_key": "HEB 100"}}


def _column(name, up=(1, 0, 0), finish="painted"):
    bar, place = stick(section(name), (0, 0, 0), (0, 0, 6400), up)
    return joint_solids.met(Role.COLUMN, bar, place, At.START, np.zeros(3), finish=finish)


def _made(name, how, options=(), neighbours=()):
    make, up = MAKERS[how]
    joint = Joint(JointKind.PINNED_BASE, (_column(name, up),), tuple(neighbours))
    return joint, make(joint, Connections.model_validate(dict(options)))


@cache
def _solid(name, how):
    """A base by rule, and its solids."""
    joint, made = _made(name, how)
    return joint, made, joint_solids.scene(joint, made)


def _rail(level, out, beside=0.0):
    """A rail along y past a column: its middle at ``level``, ``out`` mm from the column's axis against x."""
    bar, place = stick(section("C 200x75x20x2.0"), (-out, -6000, level), (-out, 5000, level), (-1, 0, 0))
    return joint_solids.met(Role.SIDE_RAIL, bar, place, At.ALONG, np.zeros(3))


@pytest.mark.parametrize(("name", "how"), CASES)
def test_nothing_shares_space(name, how):
    assert joint_solids.overlapping(_solid(name, how)[2]) == []


@pytest.mark.parametrize("name", ["HEB 300", "HEB 360", "SHS 250x250x10", "IPE 500"])
@pytest.mark.parametrize("anchors", ["4", "6", "8"])
def test_nothing_shares_space_with_stiffeners_and_key(name, anchors):
    joint, made = _made(name, "fixed", {"bases": FULL["bases"] | {"anchors": anchors}})
    solids = joint_solids.scene(joint, made)
    assert joint_solids.overlapping(solids) == []
    assert sum(str(ref).startswith("stiffener") for ref in solids) == int(anchors) - 2


@pytest.mark.parametrize(("name", "how"), CASES)
def test_welds_touch_what_they_join(name, how):
    _, made, solids = _solid(name, how)
    for weld in made.welds:
        assert joint_solids.apart(*(solids[ref] for ref in weld.between)) < 0.5


def test_welds_of_stiffeners_and_key_touch():
    joint, made = _made("HEB 340", "fixed", FULL)
    solids = joint_solids.scene(joint, made)
    assert {ref for weld in made.welds for ref in weld.between} >= {
        0,
        "stiffener/1",
        "stiffener/2",
        "shear key",
    }
    for weld in made.welds:
        assert joint_solids.apart(*(solids[ref] for ref in weld.between)) < 0.5


@pytest.mark.parametrize(("name", "how"), CASES)
def test_levels(name, how):
    """The plate stands on level 0, the column on the plate, packs fill the grout, anchors end in the concrete."""
    joint, made = _made(name, how, {"bases": {"grout": "35 mm"}, "post_bases": {"grout": "35 mm"}})
    box = {ref: solid.bounding_box() for ref, solid in joint_solids.scene(joint, made).items()}
    plate = made.fittings[0].shape.thickness
    assert box["base plate"][2] == pytest.approx(0)
    assert box["base plate"][5] == pytest.approx(plate)
    assert box[0][2] == pytest.approx(plate)
    for number in range(1, 5):
        assert box[f"pack/{number}"][2] == pytest.approx(-35)
        assert box[f"pack/{number}"][5] == pytest.approx(0)
    assert box["anchors"][2] < -35 - 20 * made.boltings[0].fastener.diameter
    assert made.boltings[0].fastener.grip == plate


@pytest.mark.parametrize(("name", "how"), CASES)
def test_anchors_stand_free(name, how):
    """Wrench room to the section's steel and between anchors, edges of the plate, washers on the plate."""
    joint, made, solids = _solid(name, how)
    column, plate, anchors = joint.members[0], made.fittings[0], made.boltings[0]
    d = anchors.fastener.diameter
    seen = np.array([column.local(point)[[2, 1]] for point in anchors.points])
    half = np.array(plate.shape.box[1][:2])[::-1]
    assert (half - np.abs(seen) >= edge(d)).all()
    gaps = [np.linalg.norm(a - b) for i, a in enumerate(seen) for b in seen[i + 1 :]]
    assert min(gaps) >= wrench_pitch(d)
    for point in anchors.points:
        rod = joint_solids.Manifold.cylinder(200, 0.01).translate((*point[:2], plate.shape.thickness + 1))
        assert joint_solids.apart(rod, solids[0]) >= wrench_wall(d) - 0.2
    # No plate washer lies on the weld round the column.
    assert joint_solids.apart(solids["anchors"], solids[0]) >= max(leg(weld.throat) for weld in made.welds)
    assert sorted(map(tuple, np.round(seen, 6))) == sorted(map(tuple, np.round(-seen, 6)))


@pytest.mark.parametrize(
    ("name", "how", "inside"),
    [
        ("HEB 300", "pinned", True),
        ("IPE 200", "pinned", True),
        ("SHS 250x250x10", "pinned", False),
        ("HEB 300", "fixed", False),
    ],
)
def test_where_anchors_stand(name, how, inside):
    """Pinned: between the flanges of an I; fixed: beyond them, where they hold it upright across the frame."""
    joint, made = _made(name, how)
    column = joint.members[0]
    for point in made.boltings[0].points:
        _, y, z = column.local(point)
        assert (abs(z) < column.section.height / 2 and abs(y) < column.section.width / 2) == inside
        if how == "fixed":
            assert abs(z) > column.section.height / 2


@pytest.mark.parametrize(
    ("name", "how", "count", "size", "thickness"),
    [
        ("HEB 300", "pinned", 4, 24, 20),
        ("HEB 300", "fixed", 4, 24, 25),
        ("HEB 360", "fixed", 6, 30, 30),
        ("IPE 200", "post", 4, 20, 15),
    ],
)
def test_rules_of_size(name, how, count, size, thickness):
    """The rules of this program; flange of HEB 360: 22.5 mm, times 1.25 is 28.1, stock 30."""
    _, made = _made(name, how)
    assert len(made.boltings[0].points) == count
    assert made.boltings[0].fastener.diameter == size
    assert made.fittings[0].shape.thickness == thickness


def test_options_are_taken():
    _, made = _made(
        "HEB 300", "pinned", {"bases": {"thickness": "32 mm", "anchors": 6, "size": "M30", "packs": "none"}}
    )
    assert [fitting.name for fitting in made.fittings] == ["base plate"]
    assert made.fittings[0].shape.thickness == 32
    assert (len(made.boltings[0].points), made.boltings[0].fastener.diameter) == (6, 30)


SPOILED = [
    ("HEB 300", "pinned", {"bases": {"thickness": "15 mm"}}, "connections.bases.thickness"),
    ("HEB 300", "pinned", {"bases": {"stiffeners": "gussets"}}, "connections.bases.stiffeners"),
    ("CHS 273x10", "fixed", {"bases": {"stiffeners": "gussets"}}, "connections.bases.stiffeners"),
    ("IPE 200", "pinned", {"bases": {"shear_key": "HEB 160"}}, "connections.bases.shear_key"),
    ("HEB 300", "pinned", {"bases": {"shear_key": "HEB 100", "shear_key_depth": "60 mm", "grout": "80 mm"}},
     "connections.bases.shear_key_depth"),
    ("HEB 300", "fixed", {"bases": {"shear_key": "HEB 280", "anchors": 8}}, "connections.bases.packs"),
    ("IPE 330", "post", {"post_bases": {"thickness": "10 mm"}}, "connections.post_bases.thickness"),
]  # fmt: skip


@pytest.mark.parametrize(("name", "how", "options", "field"), SPOILED)
def test_what_cannot_be_built_is_refused(name, how, options, field):
    with pytest.raises(DescriptionError) as caught:
        _made(name, how, options)
    assert caught.value.faults[0].field == field


def test_a_rail_in_the_anchors_is_refused():
    """Fixed HEB 300: plate 25 mm, anchors of M24 beyond the flange, under a rail 10 mm off the flange."""
    clear, low = _rail(300, 150 + 10 + 100), _rail(100, 150 + 10 + 100)
    _made("HEB 300", "fixed", neighbours=[clear])
    with pytest.raises(DescriptionError) as caught:
        _made("HEB 300", "fixed", neighbours=[low])
    assert caught.value.faults[0].field == "rails.base_offset"
    # Nothing of a pinned base lies there but its plate.
    _made("HEB 300", "pinned", neighbours=[low])


def test_the_base_turns_with_its_column():
    """A post is turned by a quarter: its plate is the same, turned with it."""
    joint, made = _made("IPE 200", "post")
    turned = Joint(joint.kind, (replace(joint.members[0], frame=_column("IPE 200").frame),))
    again = post_base(turned, Connections.model_validate({}))
    assert again.fittings[0].shape == made.fittings[0].shape
    assert not np.allclose(again.fittings[0].frame, made.fittings[0].frame)
