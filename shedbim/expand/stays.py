"""Flange stays: bars from the webs of purlins down to the lower flanges of rafters, which they hold sideways."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from math import atan2, cos, sin

import numpy as np
from numpy.typing import NDArray

from shedbim.description.models import Description
from shedbim.expand.bays import braced_bays, is_odd
from shedbim.expand.cold_formed import STAGGER, Course, faces_on_line, sag_bar_places
from shedbim.expand.frame import Frame
from shedbim.expand.impossible import impossible
from shedbim.expand.joints.cold_formed_web import end_distance, hole_lines
from shedbim.expand.kits import FIRST_LINE, NEXT_BAY, Kit, Meeting, Meets, Member, Run
from shedbim.expand.laps import are_lapped, laid, line_over_steel, overlap
from shedbim.expand.layout import Layout, Surface
from shedbim.expand.purlins import carrier_of, purlin_courses
from shedbim.expand.set_out import sag_bar_rows
from shedbim.expand.sticks import stick
from shedbim.fasteners import gauges
from shedbim.fasteners.plate_stock import rounded_up
from shedbim.geometry.placements import cross
from shedbim.model.joints import At, JointKind
from shedbim.model.roles import Role
from shedbim.sections.profiles import IShape, LippedC
from shedbim.sections.section import Section

__all__ = ["STAY_BOLT", "STAY_END", "back_mark", "stays"]

Array = NDArray[np.float64]

#: Bolts of stays, and their distance to the ends of a stay, mm (common practice).
STAY_BOLT, STAY_END = 12.0, 25.0
#: By rule a stay at every second purlin (common practice).
_EVERY = 2
#: The lower bolt lies this far inside the edge of the flange; air round the lower end of a stay, mm.
_INSIDE, _AIR = 20.0, 4.0
#: From the foot of a stay to the end of its rafter: end plate, bolts and weld are there, mm.
_FROM_END = 150.0
#: Steps in which a stay is made flatter, mm.
_STEP = 10.0
#: Air between a stay's bolts and what else is fastened to the purlin's web, mm.
_CLEAR = 60.0


@dataclass(frozen=True)
class _Stay:
    """A stay in the plane of a purlin's web: u off the frame's plane, v up from the purlin's axis, mm.

    Attributes:
        foot, head: (u, v) of the bolts at the rafter and at the purlin.
    """

    foot: tuple[float, float]
    head: tuple[float, float]

    @property
    def angle(self) -> float:
        """Rise of the stay, rad."""
        return atan2(self.head[1] - self.foot[1], self.head[0] - self.foot[0])


def back_mark(section: Section) -> float:
    """Give the distance of the holes from the heel of a stay, mm.

    Raises:
        DescriptionError: where the leg of the angle takes no such bolt.
    """
    try:
        mark, largest = gauges.back_mark(section.height)
    except ValueError as error:
        raise impossible("connections.stays.section", str(error), given=section.designation) from None
    if largest < STAY_BOLT:
        raise impossible(
            "connections.stays.section", f"the leg takes no M{STAY_BOLT:g}", given=section.designation
        )
    return mark


def stays(description: Description, layout: Layout, inner: Frame) -> list[Run]:
    """Give the stays of all inner frames whose rafters are stayed; none over trusses.

    Stays stand in bays that are not braced. A frame between two braced bays has none: braces and struts
    would be in their way, and the description can ask for other bays.
    """
    asked = description.connections.stays.every
    every = _EVERY if asked == "by rule" else int(asked)
    if inner.trusses or every == 0:
        return []
    runs = []
    for side, numbers in _chosen_lines(description, layout).items():
        kinds = {line: _kind_of_bay(description, layout, _bay(line, side)) for line in numbers}
        for length, odd in sorted(set(kinds.values())):
            lines = [line for line, kind in kinds.items() if kind == (length, odd)]
            bays = [layout.bay_labels[_bay(line, side)] for line in lines]
            runs.append(
                Run(
                    _kit(description, layout, inner, side, length, every, odd=odd),
                    bays,
                    np.array([layout.grid.y[line] for line in lines]),
                    first_lines=[layout.grid.numbers[line] for line in lines],
                    next_bays=bays,
                )
            )
    return runs


def _kind_of_bay(description: Description, layout: Layout, bay: int) -> tuple[float, bool]:
    """What the stays in a bay depend on: its length, and whether it is odd where purlins lie in turns."""
    return round(layout.bay_lengths[bay], 6), not are_lapped(description) or is_odd(bay)


def _bay(line: int, side: int) -> int:
    """The number of the bay before (-1) or after (1) a line."""
    return line if side > 0 else line - 1


def _chosen_lines(description: Description, layout: Layout) -> dict[int, list[int]]:
    """The inner lines whose stays stand in the bay before (-1) and after (1) them."""
    braced = braced_bays(description, layout)
    chosen: dict[int, list[int]] = {-1: [], 1: []}
    for line in range(1, len(layout.grid.y) - 1):
        free = [side for side in (-1, 1) if _bay(line, side) not in braced]
        for side in free if description.connections.stays.sides == "both" else free[:1]:
            chosen[side].append(line)
    return chosen


def _kit(
    description: Description, layout: Layout, frame: Frame, side: int, length: float, every: int, *, odd: bool
) -> Kit:
    """The stays of a frame on one side of it, in an odd or even bay of ``length`` mm."""
    stay = _laid_out(description, frame, length, layout)
    members: list[Member] = []
    meetings: list[Meeting] = []
    for course, carrier in _stayed(description, layout, frame, stay, every):
        name = course.name.replace("purlin/", "stay/", 1) + ("/near" if side > 0 else "/far")
        member, ends = _placed(description, laid(description, course, odd=odd), stay, side, name)
        members.append(member)
        meetings += [
            Meeting(
                JointKind.FLANGE_STAY, (Meets(carrier, At.ALONG, FIRST_LINE), Meets(name, At.START)), ends[0]
            ),
            Meeting(
                JointKind.FLANGE_STAY, (Meets(course.name, At.ALONG, NEXT_BAY), Meets(name, At.END)), ends[1]
            ),
        ]
    return Kit(tuple(members), tuple(meetings))


def _stayed(
    description: Description, layout: Layout, frame: Frame, stay: _Stay, every: int
) -> Iterator[tuple[Course, str]]:
    """The courses with a stay, counted from the lower end of their surface, and the rafters under them.

    Where the foot would be at the end plate of its rafter, the course below takes the stay.
    """
    rafters = {m.name: m for m in frame.kit.all_members() if m.name in frame.carriers}
    for surface, lines in purlin_courses(description, layout, frame):
        open_courses = {}
        for number, course in enumerate(_from_below(surface, lines), start=1):
            carrier = carrier_of(description, layout, frame, surface, course)
            if carrier in rafters and _has_room(rafters[carrier], course, stay):
                open_courses[number] = (course, carrier)
        wanted = range(every, len(lines) + 1, every)
        for number in sorted({n if n in open_courses else n - 1 for n in wanted}):
            if number in open_courses:
                yield open_courses[number]


def _has_room(rafter: Member, course: Course, stay: _Stay) -> bool:
    """Whether the foot of a stay is clear of what is at the ends of its rafter."""
    foot = course.point + course.outward * stay.foot[1]
    place = float((foot - rafter.placement[:, 3]) @ rafter.placement[:, 0])
    bar = rafter.bar
    low = np.array([[0.0, -bar.section.height / 2]])
    first = bar.axis[0] + float(bar.start.offsets(low, at_end=False)[0])
    last = bar.axis[1] + float(bar.end.offsets(low, at_end=True)[0])
    return first + _FROM_END < place < last - _FROM_END


def _from_below(surface: Surface, lines: Sequence[Course]) -> Sequence[Course]:
    return lines if surface.slopes[0].slope.rises else lines[::-1]


def _laid_out(description: Description, frame: Frame, length: float, layout: Layout) -> _Stay:
    """Where the bolts of a stay are.

    Raises:
        DescriptionError: where the stay would hit a flange, a cleat or a sag bar.
    """
    rafter = frame.carrier.profile if isinstance(frame.carrier, Section) else None
    if not isinstance(rafter, IShape):
        raise impossible("connections.stays.every", "only rafters of I section can be stayed", allowed="0")
    mark = back_mark(description.connections.stays.section)
    widest = max(mark, description.connections.stays.section.height - mark)
    corner = (STAY_END + widest) / 2**0.5  # at 45 degrees, of the lower end
    foot_u = max(rafter.b / 2 - _INSIDE, rafter.tw / 2 + corner + _AIR)
    over = rounded_up(max(corner, rafter.r) + _AIR, 5.0)
    foot_v = -(line_over_steel(description) + rafter.h - rafter.tf - over)
    stay = _past_overlap(description, _Stay((foot_u, foot_v), (foot_u - foot_v, 0.0)), widest)
    _check_clear(description, stay, rafter, widest, length, layout)
    return stay


def _past_overlap(description: Description, stay: _Stay, widest: float) -> _Stay:
    """The stay with its head beyond the sleeve or lap where there is one.

    It is clear of the bolts at the end of a sleeve, and passes below the end of a purlin that laps.
    """
    _, length = overlap(description)
    if not length:
        return stay
    lines = hole_lines(description.purlins.section, description.connections.cleats, "purlins")
    room = widest + lines.diameter + _AIR  # a washer is less than twice its bolt
    beside = (length / 2 - end_distance(lines), lines.levels[0])
    if are_lapped(description):
        lowest = description.purlins.lift - line_over_steel(description)
        room, beside = widest + _AIR, (length / 2, lowest)
    head = max(stay.head[0], length / 2 + _CLEAR)
    while True:
        found = _Stay(stay.foot, (head, 0.0))
        if (beside[0] - head) * -sin(found.angle) + beside[1] * cos(found.angle) >= room:
            return found
        head += _STEP


def _check_clear(
    description: Description, stay: _Stay, rafter: IShape, widest: float, length: float, layout: Layout
) -> None:
    """Refuse a stay that touches the rafter's upper flange, or a sag bar at its head."""
    top = -line_over_steel(description) - rafter.tf
    u = stay.foot[0] + (top - stay.foot[1]) * cos(stay.angle) / sin(stay.angle) - widest / sin(stay.angle)
    if u < rafter.b / 2 + _AIR:
        raise impossible(
            "connections.stays.every", "a stay finds no way past the upper flange of the rafter", allowed="0"
        )
    rows = sag_bar_rows(description.purlins.sag_bars, length, layout.slopes[0].slope.pitch)
    places = sag_bar_places(length, rows)
    ends = [place + side * STAGGER for place in places for side in (-1, 1)]
    past = widest + 2 * _AIR + description.purlins.sag_bar.height  # a nut is less than twice its bar
    if stay.head[0] > length / 2 or any(
        stay.head[0] - _CLEAR < end < stay.head[0] + _CLEAR
        or 0 < (stay.head[0] - end) * sin(stay.angle) < past
        for end in ends
    ):
        raise impossible(
            "connections.stays.every", "the stays meet the sag bars of their bay",
            given=f"{stay.head[0]:.0f} mm from the frame", allowed="0, or fewer rows of sag bars",
        )  # fmt: skip


def _placed(
    description: Description, course: Course, stay: _Stay, side: int, name: str
) -> tuple[Member, tuple[Array, Array]]:
    """The stay of a course and where its axis begins and ends: one leg flat on the free side of the web."""
    options = description.connections.stays
    section = options.section
    low, high = faces_on_line(course, description.purlins.section)
    is_c = isinstance(description.purlins.section.profile, LippedC)
    out, face = (-course.open_to, -low) if is_c else (course.open_to, high)
    along = course.run * (side * cos(stay.angle)) + course.outward * sin(stay.angle)
    up = cross(along, out)
    low_y, low_z = section.outline.bounds[:2]
    # The line of holes is the given one; the centroid lies off it.
    aside = out * (face - low_y) - up * (low_z + back_mark(section))
    middle = course.point + aside

    def bolt(place: tuple[float, float]) -> Array:
        return middle + course.run * (side * place[0]) + course.outward * place[1]

    start, end = bolt(stay.foot) - along * STAY_END, bolt(stay.head) + along * STAY_END
    bar, where = stick(section, start, end, up)
    return Member(name, Role.STAY, bar, where, options.grade, description.finish.secondary), (start, end)
