"""Rails on the side walls and on the gable walls, and the sag bars between them."""

from __future__ import annotations

from collections.abc import Sequence
from itertools import pairwise, zip_longest

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
)
from shedbim.expand.frame import Frame, Upright, end_wall_face
from shedbim.expand.kits import FIRST_LINE, HERE, SECOND_LINE, Kit, Meeting, Meets, Member, Run
from shedbim.expand.layout import Layout
from shedbim.expand.set_out import even_places, sag_bar_rows
from shedbim.model.joints import At, JointKind
from shedbim.model.roles import Role

__all__ = ["gable_rails", "rail_depth", "side_rails"]

_DOWN = np.array([0.0, 0.0, -1.0])
_ACROSS = np.array([1.0, 0.0, 0.0])
_LENGTHWISE = np.array([0.0, 1.0, 0.0])


def rail_depth(description: Description) -> float:
    """Give how far the rails stand out from the steel that carries them, mm."""
    return description.rails.lift + description.rails.section.height


def _levels(description: Description, layout: Layout, column: int) -> list[float]:
    """Levels of the rails on the side wall of a column line."""
    options = description.rails
    half = description.frames.columns.section.height / 2
    steepest = max(abs(float(s.direction[2] / s.direction[0])) for s in layout.slopes_at_column(column))
    top = layout.column_top(column) - half * steepest - options.eaves_offset
    return even_places(layout.base + options.base_offset, top, options.spacing)


def side_rails(description: Description, layout: Layout) -> list[Run]:
    """Give the rails of both side walls, bay by bay."""
    return runs_of_bays(layout, lambda bay: _side_kit(description, layout, bay))


def _side_kit(description: Description, layout: Layout, bay: Bay) -> Kit:
    options, columns = description.rails, description.frames.columns.section
    # At the corners a rail runs on to the edge of the column, so that its cleat has its full width.
    stretch = Stretch(
        -columns.width / 2 if bay.first else options.gap / 2,
        bay.length + columns.width / 2 if bay.last else bay.length - options.gap / 2,
    )
    members: list[Member] = []
    meetings: list[Meeting] = []
    for column in (0, len(layout.grid.x) - 1):
        outward = -_ACROSS if column == 0 else _ACROSS
        letter = layout.grid.letters[column]
        out = columns.height / 2 + options.lift + options.section.height / 2
        courses = [
            Course(
                f"side rail/{letter}/{number}",
                np.array([layout.grid.x[column], 0.0, level]) + outward * out,
                _DOWN,
                outward,
                _LENGTHWISE,
            )
            for number, level in enumerate(_levels(description, layout, column), start=1)
        ]
        carrier = f"column/{letter}"
        for course in courses:
            members.append(_rail(description, course, stretch, Role.SIDE_RAIL))
            if bay.first:
                held = Meets(carrier, At.ALONG, FIRST_LINE)
                meetings += line_joint(JointKind.RAIL_CLEAT, course, held, 0.0, near=True)
            meetings += line_joint(
                JointKind.RAIL_CLEAT, course, Meets(carrier, At.ALONG, SECOND_LINE), bay.length,
                near=False, following=None if bay.last else next_bar(course),
            )  # fmt: skip
        places = sag_bar_places(bay.length, sag_bar_rows(options.sag_bars, bay.length))
        bars, joints = _sag_bars(description, courses, places, f"rail sag bar/{letter}")
        members += bars
        meetings += joints
    return Kit(tuple(members), tuple(meetings))


def _rail(description: Description, course: Course, stretch: Stretch, role: Role) -> Member:
    options = description.rails
    return course_bar(course, stretch, options.section, role, options.grade, description.finish.secondary)


def _sag_bars(
    description: Description, courses: Sequence[Course], places: Sequence[float], name: str
) -> tuple[list[Member], list[Meeting]]:
    """Sag bars between each two neighbouring rails of a stretch."""
    options, members, meetings = description.rails, [], []
    for number, (lower, upper) in enumerate(pairwise(courses), start=1):
        for row, place in enumerate(places, start=1):
            member, joints = sag_bar(
                lower, upper, place, number, options.section, options.sag_bar, f"{name}/{number}/{row}",
                options.sag_bar_grade, description.finish.secondary,
            )  # fmt: skip
            members.append(member)
            meetings.extend(joints)
    return members, meetings


def gable_rails(description: Description, layout: Layout, frame: Frame, *, outward: int) -> Run:
    """Give the rails of one gable wall; ``outward`` is -1 on the first line and +1 on the last."""
    grid, columns, options = layout.grid, description.frames.columns.section, description.rails
    y = outward * (end_wall_face(description, frame) + options.lift + options.section.height / 2)
    corners = [Upright(x, layout.column_top(i), f"column/{grid.letters[i]}") for i, x in enumerate(grid.x)]
    uprights = sorted([*corners, *frame.posts], key=lambda upright: upright.x)
    members: list[Member] = []
    meetings: list[Meeting] = []
    levels = _gable_levels(description, layout)
    segments = [
        _segment_courses(description, layout, number, pair, levels, y, outward)
        for number, pair in enumerate(pairwise(uprights), start=1)
    ]
    for number, (left, right) in enumerate(pairwise(uprights)):
        courses, x0, x1 = segments[number], left.x, right.x
        stretch = Stretch(
            x0 - columns.height / 2 if number == 0 else x0 + options.gap / 2,
            x1 + columns.height / 2 if number == len(segments) - 1 else x1 - options.gap / 2,
        )
        members += [_rail(description, course, stretch, Role.GABLE_RAIL) for course in courses]
        rows = sag_bar_rows(options.sag_bars, x1 - x0)
        places = [x0 + place for place in sag_bar_places(x1 - x0, rows)]
        bars, joints = _sag_bars(description, courses, places, f"rail sag bar/{number + 1}")
        members += bars
        meetings += joints
    for number, upright in enumerate(uprights):
        held = Meets(upright.name, At.ALONG, FIRST_LINE)
        before = segments[number - 1] if number > 0 else []
        after = segments[number] if number < len(segments) else []
        for ending, beginning in zip_longest(before, after):
            if ending is None:
                meetings += line_joint(JointKind.RAIL_CLEAT, beginning, held, upright.x, near=True)
                continue
            following = None if beginning is None else next_bar(beginning, HERE)
            meetings += line_joint(
                JointKind.RAIL_CLEAT, ending, held, upright.x, near=False, following=following
            )
    number = 0 if outward < 0 else -1
    label = grid.numbers[number]
    return Run(Kit(tuple(members), tuple(meetings)), [label], np.array([grid.y[number]]), first_lines=[label])


def _segment_courses(
    description: Description,
    layout: Layout,
    number: int,
    ends: tuple[Upright, Upright],
    levels: Sequence[float],
    y: float,
    outward: int,
) -> list[Course]:
    """The rails between two uprights, as far up as roof and uprights let them."""
    options = description.rails
    # The cleat of a rail needs the upright behind the whole of its width.
    top = min(
        min(_top_over(layout, upright.x) for upright in ends) - options.eaves_offset,
        min(upright.head for upright in ends) - options.section.width,
    )
    return [
        Course(
            f"gable rail/{number}/{k}",
            np.array([0.0, y, level]),
            _DOWN,
            np.array([0.0, float(outward), 0.0]),
            _ACROSS,
        )
        for k, level in enumerate(levels, start=1)
        if level <= top + 1e-6
    ]


def _gable_levels(description: Description, layout: Layout) -> list[float]:
    """Levels as on the lower side wall, carried on in the same steps up to the ridge."""
    column = min((0, len(layout.grid.x) - 1), key=layout.column_top)
    levels = _levels(description, layout, column)
    step = levels[1] - levels[0] if len(levels) > 1 else description.rails.spacing
    highest = max(_top_over(layout, x) for s in layout.slopes for x in (s.slope.x0, s.slope.x1))
    while levels[-1] + step < highest:
        levels.append(levels[-1] + step)
    return levels


def _top_over(layout: Layout, x: float) -> float:
    """Level of the top line over x, the lower one where two slopes meet."""
    return min(s.top(x) for s in layout.slopes if s.slope.x0 - 1.0 <= x <= s.slope.x1 + 1.0)
