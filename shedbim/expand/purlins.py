"""Purlins on the roof surfaces, and the sag bars between them."""

from __future__ import annotations

from collections.abc import Sequence
from itertools import pairwise

import numpy as np

from shedbim.description.models import Description
from shedbim.expand.bays import Bay, runs_of_bays
from shedbim.expand.cold_formed import (
    Course,
    Stretch,
    box_corners,
    course_bar,
    faces_on_line,
    lap_joints,
    line_joint,
    next_bar,
    sag_bar,
    sag_bar_places,
)
from shedbim.expand.end_gaps import end_gap
from shedbim.expand.frame import Frame
from shedbim.expand.impossible import impossible
from shedbim.expand.kits import FIRST_LINE, SECOND_LINE, Kit, Meeting, Meets, Member, Run
from shedbim.expand.laps import are_lapped, check_room_beside, laid, lies, line_over_steel
from shedbim.expand.layout import Layout, Surface
from shedbim.expand.set_out import NEAREST, even_places, places_over, sag_bar_rows
from shedbim.model.joints import At, JointKind
from shedbim.model.roles import Role
from shedbim.sections.section import Section

__all__ = ["carrier_of", "purlin_courses", "purlins", "under_ridge_bars"]

_LENGTHWISE = np.array([0.0, 1.0, 0.0])
#: Least distance in plan between the purlins on either side of a ridge or a valley, mm.
_BESIDE = 5.0


def purlins(
    description: Description, layout: Layout, inner: Frame, gables: tuple[Frame, Frame], verge: float
) -> list[Run]:
    """Give the purlins of all bays; they overhang the end frames by ``verge`` mm."""
    courses = purlin_courses(description, layout, inner)
    _check_clear(description, courses)

    def kit(bay: Bay) -> Kit:
        frames = (gables[0] if bay.first else inner, gables[1] if bay.last else inner)
        return _bay_kit(description, layout, frames, courses, bay, verge)

    return runs_of_bays(layout, kit, in_turns=are_lapped(description))


def purlin_courses(
    description: Description, layout: Layout, frame: Frame
) -> list[tuple[Surface, list[Course]]]:
    """Give the purlin lines of every surface, left to right, at y = 0."""
    above = line_over_steel(description)
    found = []
    for surface in layout.surfaces:
        courses = []
        for number, x in enumerate(_places(description, layout, frame, surface), start=1):
            pitched = surface.at(x)
            courses.append(
                Course(
                    f"purlin/{surface.name}/{number}",
                    pitched.point(x, 0.0) + pitched.normal * above,
                    surface.uphill,
                    pitched.normal,
                    _LENGTHWISE,
                )
            )
        found.append((surface, courses))
    return found


def _check_clear(description: Description, courses: Sequence[tuple[Surface, list[Course]]]) -> None:
    """Refuse purlins that meet over a ridge or in a valley."""
    section = description.purlins.section
    for (left, a), (right, b) in pairwise(courses):
        end = max(float(box_corners(each, section)[:, 0].max()) for each in lies(description, a[-1]))
        start = min(float(box_corners(each, section)[:, 0].min()) for each in lies(description, b[0]))
        if start < end + _BESIDE:
            field = "ridge_offset" if left.slopes[-1].right_column < 0 else "valley_offset"
            raise impossible(
                f"purlins.{field}", f"the purlins of {left.name} and {right.name} meet",
                allowed=f"a greater offset, by {end + _BESIDE - start:.0f} mm or more in plan",
            )  # fmt: skip


def under_ridge_bars(description: Description, layout: Layout, frame: Frame, bay: float) -> dict[str, float]:
    """Give for the slope left of each ridge the level that keeps clear of the sag bars over it in a bay, mm."""
    options = description.purlins
    if not sag_bar_rows(options.sag_bars, bay, layout.slopes[0].slope.pitch):
        return {}
    levels = {}
    for (surface, left), (_, right) in pairwise(purlin_courses(description, layout, frame)):
        pitched = surface.slopes[-1]
        if pitched.right_column < 0:
            level = min(
                _level_between(a, b, pitched.slope.x1, options.section)
                for a, b in zip(lies(description, left[-1]), lies(description, right[0]), strict=True)
            )
            levels[pitched.name] = level - options.sag_bar.height
    return levels


def _level_between(left: Course, right: Course, x: float, section: Section) -> float:
    """The level at ``x`` of the line from web to web over a ridge, mm."""
    a, b = (course.point + course.open_to * faces_on_line(course, section)[1] for course in (left, right))
    return float(np.interp(x, [a[0], b[0]], [a[2], b[2]]))


def _places(description: Description, layout: Layout, frame: Frame, surface: Surface) -> list[float]:
    """x of the purlins of a surface, left to right."""
    options = description.purlins
    first, last = surface.slopes[0], surface.slopes[-1]
    to_plan = float(first.direction[0])
    start = first.slope.x0 + _offset(description, layout, first.left_column) * to_plan
    end = last.slope.x1 - _offset(description, layout, last.right_column) * to_plan
    spacing = options.spacing * to_plan
    if options.set_out == "nodes":
        # Where a surface runs on over a column, one purlin there serves the end nodes of both trusses.
        lines = layout.grid.x
        beside = description.frames.columns.section.height / 2 + end_gap(description, trussed=True) + NEAREST
        nodes = [x for made in frame.trusses for x in made.top_nodes]
        nodes = [x for x in nodes if min(abs(x - line) for line in lines) > beside]
        return places_over([*nodes, *lines], start, end, spacing)
    return even_places(start, end, spacing)


def _offset(description: Description, layout: Layout, column: int) -> float:
    options = description.purlins
    if column < 0:
        return options.ridge_offset
    return options.valley_offset if layout.is_valley(column) else description.purlin_eaves_offset


def carrier_of(
    description: Description, layout: Layout, frame: Frame, surface: Surface, course: Course
) -> str:
    """Give the piece of a frame that a purlin stands on: the column top next to a column line.

    Over the gap for the end plates it is the nearer one.
    """
    half = description.frames.columns.section.height / 2
    x = float(course.point[0] - course.outward[0] * line_over_steel(description))
    pitched = surface.at(x)
    gap = end_gap(description, trussed=bool(frame.trusses))
    for column in (pitched.left_column, pitched.right_column):
        if column >= 0 and abs(x - layout.grid.x[column]) < half + gap / 2:
            return f"column/{layout.grid.letters[column]}"
    return frame.carrier_at(layout.slopes.index(pitched), x)


def _bay_kit(
    description: Description,
    layout: Layout,
    frames: tuple[Frame, Frame],
    courses: Sequence[tuple[Surface, list[Course]]],
    bay: Bay,
    verge: float,
) -> Kit:
    options, finish = description.purlins, description.finish.secondary
    half = description.connections.cleats.lap / 2 if are_lapped(description) else 0.0
    beyond = half or -options.gap / 2
    stretch = Stretch(-verge if bay.first else -beyond, bay.length + (verge if bay.last else beyond))
    courses = [
        (surface, [laid(description, course, odd=bay.odd) for course in lines]) for surface, lines in courses
    ]
    members: list[Member] = []
    meetings: list[Meeting] = []
    for surface, lines in courses:
        for course in lines:
            members.append(course_bar(course, stretch, options.section, Role.PURLIN, options.grade, finish))
            carriers = [
                _carriers(frame, carrier_of(description, layout, frame, surface, course), line)
                for frame, line in zip(frames, (FIRST_LINE, SECOND_LINE), strict=True)
            ]
            meetings.extend(_held(course, carriers[0], carriers[1], bay, verge, half))
    places = sag_bar_places(
        bay.length, sag_bar_rows(options.sag_bars, bay.length, layout.slopes[0].slope.pitch)
    )
    check_room_beside(description, bay, places)
    for name, lower, upper, number in _neighbours(layout, courses):
        for row, place in enumerate(places, start=1):
            member, joints = sag_bar(
                lower, upper, place, number, options.section, options.sag_bar, f"{name}/{row}",
                options.sag_bar_grade, finish,
            )  # fmt: skip
            members.append(member)
            meetings.extend(joints)
    return Kit(tuple(members), tuple(meetings))


def _carriers(frame: Frame, name: str, line: int) -> tuple[Meets, Meets | None]:
    """What a course stands on: the piece of a frame, and of a pair of angles the other one."""
    other = frame.other_of(name)
    return Meets(name, At.ALONG, line), None if other is None else Meets(other, At.ALONG, line)


def _held(
    course: Course,
    first: tuple[Meets, Meets | None],
    second: tuple[Meets, Meets | None],
    bay: Bay,
    verge: float,
    half: float,
) -> list[Meeting]:
    """The joints of a purlin on the bay's two lines: running through at an end frame, inside butted or lapped.

    ``half`` is half the lap, 0 where there is none.
    """
    kind = JointKind.PURLIN_CLEAT
    found: list[Meeting] = []
    if bay.first:
        found += line_joint(kind, course, first[0], 0.0, near=True, overhang=verge, beside=first[1])
    if half and not bay.last:
        return found + lap_joints(course, second[0], bay.length, half, beside=second[1])
    found += line_joint(
        kind, course, second[0], bay.length, near=False, overhang=verge if bay.last else 0.0,
        following=None if bay.last else next_bar(course), beside=second[1],
    )  # fmt: skip
    return found


def _neighbours(
    layout: Layout, courses: Sequence[tuple[Surface, list[Course]]]
) -> list[tuple[str, Course, Course, int]]:
    """Each pair of courses that sag bars join, with the bar's name: down each slope, and over a ridge.

    The numbers run on over a ridge, so that bars of odd and even numbers take turns at every web.
    """
    down, over = [], []
    count = 0
    for place, (surface, lines) in enumerate(courses, start=1):
        for number, (a, b) in enumerate(pairwise(lines), start=1):
            count += 1
            down.append((f"sag bar/{surface.name}/{number}", a, b, count))
        if place < len(courses) and surface.slopes[-1].right_column < 0:
            count += 1
            over.append((f"sag bar/{surface.name}/ridge", lines[-1], courses[place][1][0], count))
    return down + over
