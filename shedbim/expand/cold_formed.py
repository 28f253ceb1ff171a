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
from shedbim.sections.profiles import LippedC
from shedbim.sections.section import Section

__all__ = ["Course", "Stretch", "course_bar", "line_joint", "sag_bar", "web_faces"]

Array = NDArray[np.float64]

#: Sag bars of neighbouring courses pass each other at the web they share: this far off their row, to
#: either side (common practice: hole lines 50 mm apart).
_STAGGER = 25.0


@dataclass(frozen=True, eq=False)
class Course:
    """One line of purlins or rails: a point (3,) of its centroid line, the way its flanges point, its outward face.

    Attributes:
        name: for example ``purlin/A-B/1/4``.
        open_to: unit vector (3,) that the section's y axis takes: up the slope, or down the wall.
        outward: unit vector (3,) that the section's z axis takes: away from the steel that carries it.
        run: unit vector (3,) along the line, towards growing y or x.
    """

    name: str
    point: Array
    open_to: Array
    outward: Array
    run: Array

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
    a, b = course.point + course.run * stretch.start, course.point + course.run * stretch.end
    bar, place = (
        stick(section, a, b, course.outward) if course.forwards else stick(section, b, a, course.outward)
    )
    return Member(course.name, role, bar, place, grade, finish)


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
) -> list[Meeting]:
    """Give the joint of a course with what carries it at ``place`` along the line, and a free end beyond it.

    Args:
        near: whether it is the end where the bar begins along its line.
        overhang: how far the bar runs on beyond the carrier, mm.
        following: the next bar of the course, butted here.
    """
    own_end = _near_end(course) if near else _far_end(course)
    point = course.point + course.run * place
    if overhang:
        held = Meeting(kind, (carrier, Meets(course.name, At.ALONG)), point)
        beyond = point + course.run * (-overhang if near else overhang)
        return [held, Meeting(JointKind.FREE, (Meets(course.name, own_end),), beyond)]
    pieces = (carrier, Meets(course.name, own_end))
    return [Meeting(kind, pieces if following is None else (*pieces, following), point)]


def next_bar(course: Course) -> Meets:
    """Give the piece that continues a course in the next bay, by the end that is butted."""
    return Meets(course.name, _near_end(course), NEXT_BAY)


def web_faces(section: Section) -> tuple[float, float]:
    """Give the two faces of the web along the section's y axis from its centroid, mm."""
    thickness = section.profile.thickness
    if isinstance(section.profile, LippedC):
        low = section.outline.bounds[0]
        return low, low + thickness
    return -thickness / 2, thickness / 2


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
    shift = place + (_STAGGER if number % 2 else -_STAGGER)
    start = lower.point + lower.run * shift
    end = upper.point + upper.run * shift
    low, high = web_faces(section)
    start = start + lower.open_to * _facing(lower, end - start, low, high)
    end = end + upper.open_to * _facing(upper, start - end, low, high)
    bar, where = stick(
        bar_section, start, end, lower.outward,
        start_planes=along(lower.open_to), end_planes=along(upper.open_to),
    )  # fmt: skip
    joints = [
        Meeting(JointKind.SAG_BAR_END, (Meets(course.name, At.ALONG, HERE), Meets(name, at)), point)
        for course, at, point in ((lower, At.START, start), (upper, At.END, end))
    ]
    return Member(name, Role.SAG_BAR, bar, where, grade, finish), joints


def _facing(course: Course, towards: ArrayLike, low: float, high: float) -> float:
    """The web face of a course that looks ``towards`` (3,), along its open_to direction."""
    return high if float(course.open_to @ np.asarray(towards)) > 0 else low


def sag_bar_places(bay: float, rows: int) -> Sequence[float]:
    """Give the places of ``rows`` rows of sag bars in equal parts of a bay, mm."""
    return [bay * (k + 1) / (rows + 1) for k in range(rows)]
