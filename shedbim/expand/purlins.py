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
    course_bar,
    line_joint,
    next_bar,
    sag_bar,
    sag_bar_places,
    web_faces,
)
from shedbim.expand.end_gaps import end_gap
from shedbim.expand.frame import Frame
from shedbim.expand.impossible import impossible
from shedbim.expand.kits import FIRST_LINE, SECOND_LINE, Kit, Meeting, Meets, Member, Run
from shedbim.expand.layout import Layout, Surface
from shedbim.expand.set_out import NEAREST, even_places, places_over, sag_bar_rows
from shedbim.model.joints import At, JointKind
from shedbim.model.roles import Role

__all__ = ["carrier_of", "purlin_courses", "purlins", "under_ridge_bars"]

_LENGTHWISE = np.array([0.0, 1.0, 0.0])
#: Least distance in plan between the purlins on either side of a ridge or a valley, mm.
_BESIDE = 5.0
#: From the end of a sleeve to the row of sag bars beside it: their stagger, a nut and air, mm.
_BESIDE_SLEEVE = 60.0


def purlins(
    description: Description, layout: Layout, inner: Frame, gables: tuple[Frame, Frame], verge: float
) -> list[Run]:
    """Give the purlins of all bays; they overhang the end frames by ``verge`` mm."""
    courses = purlin_courses(description, layout, inner)
    _check_clear(description, courses)

    def kit(bay: Bay) -> Kit:
        frames = (gables[0] if bay.first else inner, gables[1] if bay.last else inner)
        return _bay_kit(description, layout, frames, courses, bay, verge)

    return runs_of_bays(layout, kit)


def purlin_courses(
    description: Description, layout: Layout, frame: Frame
) -> list[tuple[Surface, list[Course]]]:
    """Give the purlin lines of every surface, left to right, at y = 0."""
    options = description.purlins
    found = []
    for surface in layout.surfaces:
        courses = []
        for number, x in enumerate(_places(description, layout, frame, surface), start=1):
            pitched = surface.at(x)
            above = options.lift + options.section.height / 2
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
    low_y, low_z, high_y, high_z = description.purlins.section.outline.bounds
    corners = [(y, z) for y in (low_y, high_y) for z in (low_z, high_z)]
    for (left, a), (right, b) in pairwise(courses):
        last, first = a[-1], b[0]
        end = max(float((last.point + last.open_to * y + last.outward * z)[0]) for y, z in corners)
        start = min(float((first.point + first.open_to * y + first.outward * z)[0]) for y, z in corners)
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
    face, levels = web_faces(options.section)[1], {}
    for (surface, left), (_, right) in pairwise(purlin_courses(description, layout, frame)):
        pitched = surface.slopes[-1]
        if pitched.right_column < 0:
            a, b = (course.point + course.open_to * face for course in (left[-1], right[0]))
            level = np.interp(pitched.slope.x1, [a[0], b[0]], [a[2], b[2]])
            levels[pitched.name] = float(level) - options.sag_bar.height
    return levels


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
    options, half = description.purlins, description.frames.columns.section.height / 2
    x = float(course.point[0] - course.outward[0] * (options.lift + options.section.height / 2))
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
    options = description.purlins
    finish = description.finish.secondary
    stretch = Stretch(
        -verge if bay.first else options.gap / 2,
        bay.length + verge if bay.last else bay.length - options.gap / 2,
    )
    members: list[Member] = []
    meetings: list[Meeting] = []
    for surface, lines in courses:
        for course in lines:
            members.append(course_bar(course, stretch, options.section, Role.PURLIN, options.grade, finish))
            carriers = [
                _carriers(frame, carrier_of(description, layout, frame, surface, course), line)
                for frame, line in zip(frames, (FIRST_LINE, SECOND_LINE), strict=True)
            ]
            meetings.extend(_held(course, carriers[0], carriers[1], bay, verge))
    places = sag_bar_places(
        bay.length, sag_bar_rows(options.sag_bars, bay.length, layout.slopes[0].slope.pitch)
    )
    _check_sleeves(description, bay, places)
    for name, lower, upper, number in _neighbours(layout, courses):
        for row, place in enumerate(places, start=1):
            member, joints = sag_bar(
                lower, upper, place, number, options.section, options.sag_bar, f"{name}/{row}",
                options.grade, finish,
            )  # fmt: skip
            members.append(member)
            meetings.extend(joints)
    return Kit(tuple(members), tuple(meetings))


def _check_sleeves(description: Description, bay: Bay, places: Sequence[float]) -> None:
    """Refuse sleeves that reach the sag bars of a bay, or each other."""
    cleats = description.connections.cleats
    if cleats.continuity != "sleeved":
        return
    room = [bay.length] if bay.first or bay.last else [bay.length / 2]
    room += [place for place in places if not bay.first] + [
        bay.length - place for place in places if not bay.last
    ]
    most = 2 * (min(room) - _BESIDE_SLEEVE)
    if cleats.sleeve > most:
        raise impossible(
            "connections.cleats.sleeve", "the sleeves reach the sag bars of a bay, or each other",
            given=f"{cleats.sleeve:.0f} mm", allowed=f"{most:.0f} mm at most, or fewer rows of sag bars",
        )  # fmt: skip


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
) -> list[Meeting]:
    """The joints of a purlin on the bay's two lines: butted inside, running through at an end frame."""
    kind = JointKind.PURLIN_CLEAT
    found: list[Meeting] = []
    if bay.first:
        found += line_joint(kind, course, first[0], 0.0, near=True, overhang=verge, beside=first[1])
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
