"""What models show at each level of detail: less is drawn, and nothing else changes."""

from __future__ import annotations

from dataclasses import replace

import drilled
import numpy as np
import pytest
from drilled import SECTIONS, bolt, drilled_hole

from shedbim.errors import ModelError
from shedbim.geometry.placements import IDENTITY, translation
from shedbim.model.bars import Bar
from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.holes import Notch
from shedbim.model.joints import At, Clamp, JointKind, JointRun
from shedbim.model.levels import LEVELS, at_level
from shedbim.model.plates import Plate, rectangle
from shedbim.model.roles import Role, Sort
from shedbim.model.shed import Assemblies, AssemblyType, Grid, Part, Pieces, ProjectInfo, Shed
from shedbim.model.solids import solid
from shedbim.model.welds import Weld
from shedbim.outputs import LEVEL_NAMES

SLOT = Notch(
    ((0.0, -5.5), (91.0, -5.5), (91.0, 5.5), (0.0, 5.5)), (-1.0, 0.0, -80.0), (1.0, 0.0, 0.0), (0.0, 1.0, 0.0), 160.0
)  # fmt: skip
COLUMN = Bar(SECTIONS["I"], 3000.0, holes=(drilled_hole("I", 0, 120.0, 13.0),))
BRACE = Bar(SECTIONS["SHS"], 2100.0, notches=(SLOT,), holes=(drilled_hole("SHS", 0, 1900.0, 18.0),))
BASE = Plate(rectangle(300.0, 250.0), 20.0, (drilled.plate_hole(70.0, 80.0, 26.0, 20.0),))
PLAIN = Plate(rectangle(100.0, 60.0), 8.0)
SHAPES = {
    "C1": COLUMN,
    "BP1": BASE,
    "WB1": BRACE,
    "SF1": PLAIN,
    "BG1": BoltGroup(bolt(), ((0.0, 0.0), (60.0, 0.0))),
}
ROLES = {role.prefix: role for role in Role}


def made() -> Shed:
    """Two columns on base plates, each with a stiffener, and a brace; fittings stand among the members."""
    parts = tuple(Part(m, ROLES[m.rstrip("1")], shape, "S355", "painted") for m, shape in SHAPES.items())
    kinds = {part.mark: i for i, part in enumerate(parts)}
    marks = ["C1", "BP1", "SF1", "C1", "BG1", "BP1", "SF1", "BG1", "WB1"]
    keys = tuple(f"{i}/{mark}" for i, mark in enumerate(marks))
    pieces = Pieces(
        keys,
        np.array([kinds[mark] for mark in marks]),
        translation(np.arange(27.0).reshape(9, 3) * 100),
        np.array([0, 0, 0, 1, -1, 1, 1, -1, -1]),
    )
    assemblies = Assemblies(
        ("a", "b"), np.zeros(2, np.int64), np.tile(IDENTITY, (2, 1, 1)), np.full(2, -1, np.int64)
    )
    base = JointRun(
        JointKind.PINNED_BASE,
        np.array([[0], [3]]),
        np.full((2, 1), At.START, np.int8),
        np.arange(6.0).reshape(2, 3),
        np.zeros(2),
        np.array([[1, 2, 4], [5, 6, 7]]),
        (Weld((0, 1), "fillet", 4.0, 700.0), Weld((0, 2), "fillet", 3.0, 90.0)),
        (Clamp(3, ((1, 20.0),)),),
    )
    brace = JointRun(
        JointKind.BRACE_GUSSET,
        np.array([[3, 8]]),
        np.array([[At.ALONG, At.START]], np.int8),
        np.ones((1, 3)),
        np.full(1, 7.0),
    )
    return Shed(
        ProjectInfo("id", "name", "number", "A"),
        None,
        Grid(("A",), (0.0,), ("1",), (0.0,)),
        parts,
        pieces,
        (AssemblyType("AC1", "column", "shop"),),
        assemblies,
        (base, brace),
    )


SHED = made()


def test_the_levels_are_those_of_the_command_line() -> None:
    assert sorted(LEVELS) == sorted(LEVEL_NAMES)
    with pytest.raises(ModelError, match="outline, coordination, fabrication"):
        at_level(SHED, "sketch")


def test_fabrication_shows_everything() -> None:
    shown = at_level(at_level(SHED, "coordination"), "fabrication")
    assert shown.parts == SHED.parts
    assert all(part.drawn is None and part.body is part.shape for part in shown.parts)
    assert shown.pieces is SHED.pieces


def test_coordination_leaves_holes_and_what_is_in_them_out() -> None:
    shown = at_level(SHED, "coordination")
    drawn = {part.mark: part.body for part in shown.parts}
    assert drawn["C1"] == replace(COLUMN, holes=())
    # The slot stays: without it the tube would stand in its gusset.
    assert drawn["WB1"] == replace(BRACE, holes=())
    assert drawn["BP1"] == replace(BASE, holes=())
    assert next(part for part in shown.parts if part.mark == "SF1").drawn is None
    outside, whole = solid(drawn["BG1"]), solid(SHAPES["BG1"])
    grip = solid(Plate(rectangle(500.0, 500.0), bolt().grip))
    assert (outside ^ grip).volume() == pytest.approx(0.0, abs=1e-6)
    assert outside.volume() == pytest.approx((whole - grip).volume(), rel=1e-9)
    assert shown.pieces is SHED.pieces
    assert shown.joints is SHED.joints


def test_outline_leaves_members_alone() -> None:
    shown = at_level(SHED, "outline")
    assert [part.mark for part in shown.parts] == ["C1", "WB1"]
    assert [part.body for part in shown.parts] == [
        replace(COLUMN, holes=()),
        replace(BRACE, holes=(), notches=()),
    ]
    assert all(part.role.sort is Sort.MEMBER for part in shown.parts)
    assert shown.pieces.keys == ("0/C1", "3/C1", "8/WB1")
    assert shown.pieces.part.tolist() == [0, 0, 1]
    assert shown.pieces.assembly.tolist() == [0, 1, -1]
    assert np.array_equal(shown.pieces.placement, SHED.pieces.placement[[0, 3, 8]])
    assert set(shown.pieces.assembly[shown.pieces.assembly >= 0].tolist()) == set(
        range(len(shown.assemblies))
    )
    base, brace = shown.joints
    assert base.pieces.tolist() == [[0], [1]]
    assert brace.pieces.tolist() == [[1, 2]]
    for run, before in zip(shown.joints, SHED.joints, strict=True):
        assert run.fittings.shape == (len(before.pieces), 0)
        assert (run.welds, run.clamps) == ((), ())
        assert np.array_equal(run.at, before.at)
        assert np.array_equal(run.points, before.points)
        assert np.array_equal(run.eccentricity, before.eccentricity)


@pytest.mark.parametrize("level", LEVELS)
def test_no_level_changes_what_is_made(level: str) -> None:
    shown = at_level(SHED, level)
    before = {part.mark: replace(part, drawn=None) for part in SHED.parts}
    placed = dict(zip(SHED.pieces.keys, SHED.pieces.part.tolist(), strict=True))
    for part in shown.parts:
        assert replace(part, drawn=None) == before[part.mark]
    for key, part in zip(shown.pieces.keys, shown.pieces.part.tolist(), strict=True):
        assert shown.parts[part].mark == SHED.parts[placed[key]].mark
    assert [key for key in SHED.pieces.keys if key in shown.pieces.keys] == list(shown.pieces.keys)
    # A level of a level is that level.
    assert at_level(shown, level).parts == shown.parts


def test_joints_of_fittings_go_with_them() -> None:
    brace = SHED.joints[1]
    stay = replace(
        brace,
        pieces=np.array([[3, 1], [0, 8], [3, 5]]),
        at=np.array([[At.ALONG, At.START], [At.END, At.START], [At.ALONG, At.END]], np.int8),
        points=np.arange(9.0).reshape(3, 3),
        eccentricity=np.array([1.0, 2.0, 3.0]),
    )
    plates = replace(brace, pieces=np.array([[1, 2]]))
    base, left = at_level(replace(SHED, joints=(SHED.joints[0], stay, plates)), "outline").joints
    assert len(base.pieces) == 2
    assert left.pieces.tolist() == [[0, 2]]
    assert left.at.tolist() == [[At.END, At.START]]
    assert left.points.tolist() == [[3.0, 4.0, 5.0]]
    assert left.eccentricity.tolist() == [2.0]
    assert left.fittings.shape == (1, 0)
