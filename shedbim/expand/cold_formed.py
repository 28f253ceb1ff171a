"""What purlins and rails share: bars that run from line to line in a row, and sag bars between them."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import ArrayLike, NDArray

from shedbim.expand.kits import HERE, NEXT_BAY, Meeting, Meets, Member
from shedbim.expand.sticks import along, stick
from shedbim.geometry.placements import cross
from shedbim.model.joints import At, JointKind
from shedbim.model.roles import Role
from shedbim.sections.profiles import LippedC, LippedZ
from shedbim.sections.section import Section

__all__ = [
    "STAGGER",
    "Course",
    "Stretch",
    "box_corners",
    "course_bar",
    "faces_on_line",
    "lap_joints",
    "line_joint",
    "next_bar",
    "sag_bar",
    "sag_bar_places",
    "web_faces",
    "web_middle",
]

Array = NDArray[np.float64]

#: Sag bars of neighbouring courses pass each other at the web they share: this far off their row, to
#: either side (common practice: hole lines 50 mm apart).
STAGGER = 25.0


@dataclass(frozen=True, eq=False)
class Course:
    """One line of purlins or rails: a point (3,) of it, the way its upper flanges point, its outward face.

    A C has its centroid on the line, a Z the middle of its web at half its depth.

    Attributes:
        name: for example ``purlin/A-B/1/4``.
        open_to: unit vector (3,) that the section's y axis takes: up the slope, or down the wall.
        outward: unit vector (3,) that the section's z axis takes: away from the steel that carries it.
        run: unit vector (3,) along the line, towards growing y or x.
        aside: how far bars lie off the line along ``open_to``, and against ``outward``, mm: see ``laps``.
        turned: whether bars are turned half round their axis, the lower flange up.
    """

    name: str
    point: Array
    open_to: Array
    outward: Array
    run: Array
    aside: float = 0.0
    turned: bool = False

    @cached_property
    def forwards(self) -> bool:
        """Whether the bar's own x axis runs with the line."""
        return bool(cross(self.open_to, self.outward) @ self.run > 0)


@dataclass(frozen=True)
class Stretch:
    """From where to where a bar runs along its line, mm."""

    start: float
    end: float


def course_bar(
    course: Course, stretch: Stretch, section: Section, role: Role, grade: str, finish: str
) -> Member:
    """Give the bar of one stretch of a course."""
    axis = course.point + _off_line(course, section)
    a, b = axis + course.run * stretch.start, axis + course.run * stretch.end
    up = -course.outward if course.turned else course.outward
    bar, place = stick(section, a, b, up) if course.forwards else stick(section, b, a, up)
    return Member(course.name, role, bar, place, grade, finish)


def _off_line(course: Course, section: Section) -> Array:
    """Where the centroid of a bar is, from the line of its course (3,)."""
    y, z = web_middle(section)
    side = -1.0 if course.turned else 1.0
    off: Array = course.open_to * (course.aside - side * y) - course.outward * (course.aside + side * z)
    return off


def box_corners(course: Course, section: Section) -> Array:
    """Give the corners (4, 3) of a bar's section where its course begins."""
    low_y, low_z, high_y, high_z = section.outline.bounds
    side = -1.0 if course.turned else 1.0
    axis = course.point + _off_line(course, section)
    return np.array([
        axis + course.open_to * (y * side) + course.outward * (z * side)
        for y in (low_y, high_y)
        for z in (low_z, high_z)
    ])  # fmt: skip


def _near_end(course: Course) -> At:
    return At.START if course.forwards else At.END


def _far_end(course: Course) -> At:
    return At.END if course.forwards else At.START


def line_joint(
    kind: JointKind,
    course: Course,
    carrier: Meets,
    place: float,
    *,
    near: bool,
    overhang: float = 0.0,
    following: Meets | None = None,
    beside: Meets | None = None,
) -> list[Meeting]:
    """Give the joint of a course with what carries it at ``place`` along the line, and a free end beyond it.

    Args:
        near: whether it is the end where the bar begins along its line.
        overhang: how far the bar runs on beyond the carrier, mm.
        following: the next bar of the course, butted here.
        beside: of a pair of angles that carries the course, the other one.
    """
    own_end = _near_end(course) if near else _far_end(course)
    more = () if beside is None else (beside,)
    point = course.point + course.run * place
    if overhang:
        held = Meeting(kind, (carrier, Meets(course.name, At.ALONG), *more), point)
        beyond = point + course.run * (-overhang if near else overhang)
        return [held, Meeting(JointKind.FREE, (Meets(course.name, own_end),), beyond)]
    butted = () if following is None else (following,)
    return [Meeting(kind, (carrier, Meets(course.name, own_end), *butted, *more), point)]


def lap_joints(
    course: Course, carrier: Meets, place: float, half: float, beside: Meets | None = None
) -> list[Meeting]:
    """Give the joints where a course is lapped at ``place`` along the line, ``half`` mm to either side.

    The bar here and the one in the next bay run on over the carrier, and over what carries ``beside`` it; each
    ends on the other's web.
    """
    here, beyond = Meets(course.name, At.ALONG), Meets(course.name, At.ALONG, NEXT_BAY)
    ends = Meets(course.name, _far_end(course)), next_bar(course)
    middle = course.point + course.run * place
    return [
        Meeting(JointKind.PURLIN_CLEAT, (carrier, here, beyond, *([beside] if beside else [])), middle),
        Meeting(JointKind.PURLIN_LAP, (here, ends[1]), middle - course.run * half),
        Meeting(JointKind.PURLIN_LAP, (beyond, ends[0]), middle + course.run * half),
    ]


def next_bar(course: Course, where: int = NEXT_BAY) -> Meets:
    """Give the piece that continues a line beyond this one, by the end that is butted; in the next bay."""
    return Meets(course.name, _near_end(course), where)


def web_faces(section: Section) -> tuple[float, float]:
    """Give the two faces of the web along the section's y axis from its centroid, mm."""
    thickness = section.profile.thickness
    if isinstance(section.profile, LippedC):
        low = section.outline.bounds[0]
        return low, low + thickness
    middle, _ = web_middle(section)
    return middle - thickness / 2, middle + thickness / 2


def web_middle(section: Section) -> tuple[float, float]:
    """Give the point of a section that lies on the line of its course, from its centroid (y, z), mm."""
    profile = section.profile
    if isinstance(profile, LippedZ) and profile.narrow != profile.b:
        y, z = profile.outline.centroid
        return -y, -z
    return 0.0, 0.0


def faces_on_line(course: Course, section: Section) -> tuple[float, float]:
    """Give the two faces of the web along ``open_to`` from the line of a course, mm."""
    low, high = web_faces(section)
    off = course.aside - web_middle(section)[0]
    return low + off, high + off


def sag_bar(
    lower: Course,
    upper: Course,
    place: float,
    number: int,
    section: Section,
    bar_section: Section,
    name: str,
    grade: str,
    finish: str,
) -> tuple[Member, list[Meeting]]:
    """Give the sag bar between the webs of two courses at ``place`` along them, and its two joints.

    ``number`` is the lower course's own: bars of odd and even courses stand on either side of their row.
    Where the courses lie in different planes the bar's ends are cut to the webs.
    """
    shift = place + (STAGGER if number % 2 else -STAGGER)
    start = lower.point + lower.run * shift
    end = upper.point + upper.run * shift
    start = start + lower.open_to * _facing(lower, end - start, section)
    end = end + upper.open_to * _facing(upper, start - end, section)
    bar, where = stick(
        bar_section, start, end, lower.outward,
        start_planes=along(lower.open_to), end_planes=along(upper.open_to),
    )  # fmt: skip
    joints = [
        Meeting(JointKind.SAG_BAR_END, (Meets(course.name, At.ALONG, HERE), Meets(name, at)), point)
        for course, at, point in ((lower, At.START, start), (upper, At.END, end))
    ]
    return Member(name, Role.SAG_BAR, bar, where, grade, finish), joints


def _facing(course: Course, towards: ArrayLike, section: Section) -> float:
    """The web face of a course that looks ``towards`` (3,), along its open_to direction."""
    low, high = faces_on_line(course, section)
    return high if float(course.open_to @ np.asarray(towards)) > 0 else low


def sag_bar_places(bay: float, rows: int) -> Sequence[float]:
    """Give the places of ``rows`` rows of sag bars in equal parts of a bay, mm."""
    return [bay * (k + 1) / (rows + 1) for k in range(rows)]
