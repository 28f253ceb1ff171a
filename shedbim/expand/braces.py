"""Braces in one flat panel between four nodes: crossed angles, crossed tubes or a single diagonal."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.expand.clearances import CROSSING_GAP, GUSSET
from shedbim.expand.impossible import impossible
from shedbim.expand.kits import Meeting, Meets, Member
from shedbim.expand.sticks import stick, stop_before
from shedbim.geometry.placements import cross
from shedbim.model.joints import At, JointKind
from shedbim.model.roles import Role
from shedbim.sections.profiles import Angle, Pipe
from shedbim.sections.section import Section

__all__ = ["BraceEnd", "Panel", "brace_reach", "braces", "strut_reach"]

Array = NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class BraceEnd:
    """A corner of a panel: its work point (3,), the piece that carries it, and the planes a brace stops before.

    ``planes`` are (point, normal into the panel).
    """

    point: Array
    carrier: Meets
    planes: tuple[tuple[Array, Array], ...]


@dataclass(frozen=True, eq=False)
class Panel:
    """A panel to be braced.

    Attributes:
        name: for example ``roof brace/A-B/1/2``.
        corners: near-left, far-right, near-right, far-left: the first two and the last two are the diagonals.
        normal: unit vector (3,) square to the panel.
        turned: of single diagonals, the second instead of the first.
    """

    name: str
    corners: tuple[BraceEnd, BraceEnd, BraceEnd, BraceEnd]
    normal: Array
    turned: bool = False


@dataclass(frozen=True)
class _Steel:
    section: Section
    role: Role
    grade: str
    finish: str


def brace_reach(section: Section) -> float:
    """Give how far a brace reaches from the plane of its gussets, mm."""
    return GUSSET / 2 + section.height if isinstance(section.profile, Angle) else section.height / 2


def strut_reach(strut: Section, direction: Array) -> float:
    """Give how far a strut reaches from its axis along a unit vector (3,) in the frame's plane, mm."""
    if isinstance(strut.profile, Pipe):
        return strut.width / 2
    return float(abs(direction[0]) * strut.width + abs(direction[2]) * strut.height) / 2


def braces(
    panel: Panel, pattern: str, section: Section, role: Role, grade: str, finish: str
) -> tuple[list[Member], list[Meeting]]:
    """Give the braces of a panel and their joints."""
    steel = _Steel(section, role, grade, finish)
    first, second = panel.corners[:2], panel.corners[2:]
    if pattern == "single":
        member, meetings = _brace(
            steel, f"{panel.name}/1", *(second if panel.turned else first), panel.normal, 0.0
        )
        return [member], meetings
    if isinstance(section.profile, Angle):
        return _crossed_angles(panel, steel)
    return _crossed_tubes(panel, steel)


def _crossed_angles(panel: Panel, steel: _Steel) -> tuple[list[Member], list[Meeting]]:
    """An angle on each face of the gussets, backs together, so that they pass."""
    lift = GUSSET / 2 - steel.section.outline.bounds[1]
    members, meetings = [], []
    for number, side in ((1, 1.0), (2, -1.0)):
        ends = panel.corners[:2] if number == 1 else panel.corners[2:]
        member, joints = _brace(steel, f"{panel.name}/{number}", *ends, panel.normal * side, lift)
        members.append(member)
        meetings += joints
    meetings.append(_crossing(panel, [Meets(m.name, At.ALONG) for m in members]))
    return members, meetings


def _crossed_tubes(panel: Panel, steel: _Steel) -> tuple[list[Member], list[Meeting]]:
    """One tube runs through, the other is in two halves that stop short of it."""
    through, meetings = _brace(steel, f"{panel.name}/1", *panel.corners[:2], panel.normal, 0.0)
    members = [through]
    middle = _middle(panel)
    line = through.placement[:, 0]
    joints = [Meets(through.name, At.ALONG)]
    for number, end in ((2, panel.corners[2]), (3, panel.corners[3])):
        towards = end.point - middle
        aside = cross(cross(line, towards), line)
        aside = aside / np.linalg.norm(aside)
        clear = (middle + aside * (steel.section.height / 2 + CROSSING_GAP), aside)
        stop = BraceEnd(middle, Meets(through.name, At.ALONG), (clear,))
        half, half_joints = _brace(steel, f"{panel.name}/{number}", end, stop, panel.normal, 0.0)
        members.append(half)
        meetings.append(half_joints[0])
        joints.append(Meets(half.name, At.END))
    meetings.append(_crossing(panel, joints))
    return members, meetings


def _crossing(panel: Panel, pieces: Sequence[Meets]) -> Meeting:
    return Meeting(JointKind.BRACE_CROSSING, tuple(pieces), _middle(panel))


def _middle(panel: Panel) -> Array:
    """Where the two diagonals cross (3,)."""
    a, b, c, d = (end.point for end in panel.corners)
    u, v = b - a, d - c
    w = cross(cross(u, v), v)
    crossing: Array = a + u * float((c - a) @ w) / float(u @ w)
    return crossing


def _brace(
    steel: _Steel, name: str, start: BraceEnd, end: BraceEnd, up: Array, lift: float
) -> tuple[Member, list[Meeting]]:
    """One brace between two ends, its axis ``lift`` off their plane along ``up``."""
    a, b = start.point + up * lift, end.point + up * lift
    p, q = stop_before(steel.section, a, b, up, start.planes, end.planes)
    if float((q - p) @ (b - a)) < steel.section.height * float(np.linalg.norm(b - a)):
        field = "bracing.roof" if steel.role is Role.ROOF_BRACE else "bracing.walls"
        raise impossible(
            field, f"no room for a {steel.role.word} in its panel", given=steel.section.designation,
            allowed="a smaller section, or fewer and larger panels",
        )  # fmt: skip
    bar, place = stick(steel.section, p, q, up)
    meetings = [
        Meeting(JointKind.BRACE_GUSSET, (corner.carrier, Meets(name, at)), corner.point)
        for corner, at in ((start, At.START), (end, At.END))
    ]
    return Member(name, steel.role, bar, place, steel.grade, steel.finish), meetings
