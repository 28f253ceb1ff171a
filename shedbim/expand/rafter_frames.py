"""Frames whose roof is carried by solid rafters."""

from __future__ import annotations

from collections.abc import Sequence
from itertools import pairwise
from math import cos

from shedbim.description.models import Description
from shedbim.expand.end_gaps import end_gap
from shedbim.expand.frame import Frame, columns, frame_kit
from shedbim.expand.kits import Meeting, Meets, Member
from shedbim.expand.layout import Layout
from shedbim.expand.sticks import along, stick
from shedbim.model.joints import At, JointKind
from shedbim.model.roles import Role
from shedbim.roofs.slope import Slope
from shedbim.sections.section import Section

__all__ = ["rafter_frame", "rafter_lifts"]

_UP = (0.0, 0.0, 1.0)
_ACROSS = (1.0, 0.0, 0.0)


def rafter_lifts(section: Section, slopes: Sequence[Slope]) -> list[float]:
    """Give the height of the rafters' upper face above each slope's own line, mm."""
    return [section.height / cos(slope.pitch) for slope in slopes]


def rafter_frame(description: Description, layout: Layout, section: Section, grade: str, role: Role) -> Frame:
    """Columns with a rafter on each slope, from column face to column face or ridge."""
    members, meetings = columns(description, layout)
    half, names = description.frames.columns.section.height / 2, []
    finish, at_ridge = description.finish.frames, description.connections.apex.thickness
    at_column = half + end_gap(description, trussed=False)
    for pitched in layout.slopes:
        s = pitched.slope
        x0 = s.x0 + (at_column if pitched.left_column >= 0 else at_ridge)
        x1 = s.x1 - (at_column if pitched.right_column >= 0 else at_ridge)
        bar, place = stick(
            section, pitched.point(x0, section.height / 2), pitched.point(x1, section.height / 2), _UP,
            start_planes=along(_ACROSS), end_planes=along(_ACROSS),
        )  # fmt: skip
        name = f"rafter/{pitched.name}"
        names.append(name)
        members.append(Member(name, role, bar, place, grade, finish))
        for column, at, x in ((pitched.left_column, At.START, s.x0), (pitched.right_column, At.END, s.x1)):
            if column >= 0:
                carrier = Meets(f"column/{layout.grid.letters[column]}", At.ALONG)
                point = pitched.point(x, section.height / 2)
                meetings.append(Meeting(JointKind.RAFTER_COLUMN, (carrier, Meets(name, at)), point))
    for (left, _), (a, b) in zip(pairwise(layout.slopes), pairwise(names), strict=True):
        if left.right_column < 0:
            point = left.point(left.slope.x1, section.height / 2)
            meetings.append(Meeting(JointKind.APEX, (Meets(a, At.END), Meets(b, At.START)), point))
    return Frame(frame_kit(members, meetings, layout), tuple(names), section)
