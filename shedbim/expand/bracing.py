"""The bracing of a building: roof panels, wall tiers, the struts between them, and bottom chord ties."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from itertools import pairwise
from math import ceil, hypot

import numpy as np
from numpy.typing import NDArray

from shedbim.description.models import Description
from shedbim.expand.bays import Bay, braced_bays, runs_of_bays
from shedbim.expand.braces import BraceEnd, Panel, brace_reach, braces, strut_reach
from shedbim.expand.clearances import BASE_NODE, BRACE_SET_BACK, POST_HEAD_GAP, STRUT_END_GAP
from shedbim.expand.frame import Frame
from shedbim.expand.impossible import impossible
from shedbim.expand.joints.cap import cap_thickness
from shedbim.expand.joints.flattened import end_reach
from shedbim.expand.kits import FIRST_LINE, SECOND_LINE, Kit, Meeting, Meets, Member, Run
from shedbim.expand.layout import Layout, Pitched
from shedbim.expand.purlins import under_ridge_bars
from shedbim.expand.roof_places import brace_places
from shedbim.expand.set_out import even_places
from shedbim.expand.sticks import stick
from shedbim.expand.truss_chords import bar_over
from shedbim.model.joints import At, JointKind
from shedbim.model.roles import Role
from shedbim.sections.profiles import IShape
from shedbim.sections.section import Section

__all__ = ["bracing"]

Array = NDArray[np.float64]
_UP = np.array([0.0, 0.0, 1.0])
_ACROSS = np.array([1.0, 0.0, 0.0])
_LENGTHWISE = np.array([0.0, 1.0, 0.0])

#: Greatest rise of a tier of wall bracing over its bay: keeps diagonals at 55 degrees or flatter.
_STEEPEST_TIER = 1.43


@dataclass(frozen=True, eq=False)
class _Frames:
    """The frames at the two lines of a bay."""

    first: Frame
    second: Frame

    def at(self, line: int) -> Frame:
        return self.first if line == FIRST_LINE else self.second


def bracing(description: Description, layout: Layout, inner: Frame, gables: tuple[Frame, Frame]) -> list[Run]:
    """Give all bracing, struts and ties, bay by bay."""
    braced = braced_bays(description, layout)

    def frames(bay: Bay) -> _Frames:
        return _Frames(gables[0] if bay.first else inner, gables[1] if bay.last else inner)

    def plain(bay: Bay) -> Kit:
        maker = _Maker(description, layout, frames(bay), bay.length)
        maker.eaves_struts()
        maker.ties()
        return maker.kit()

    def full(bay: Bay) -> Kit:
        maker = _Maker(description, layout, frames(bay), bay.length)
        maker.eaves_struts()
        maker.ties()
        maker.roof()
        maker.walls()
        return maker.kit()

    return [
        *runs_of_bays(layout, plain, lambda i: i not in braced),
        *runs_of_bays(layout, full, lambda i: i in braced),
    ]


class _Maker:
    """Collects the bars and joints of one kind of bay; y runs from 0 to ``length``."""

    def __init__(self, description: Description, layout: Layout, frames: _Frames, length: float) -> None:
        self.description, self.layout, self.frames, self.length = description, layout, frames, length
        self.options = description.bracing
        self.finish = description.finish.frames
        self.columns = description.frames.columns.section
        self.ridge_levels = under_ridge_bars(description, layout, frames.first, length)
        self.members: list[Member] = []
        self.meetings: list[Meeting] = []

    def kit(self) -> Kit:
        """The kit of what was collected."""
        return Kit(tuple(self.members), tuple(self.meetings))

    def lines(self) -> Iterator[tuple[int, float, At]]:
        """The two lines of the bay: which, its y, and the end of a strut there."""
        yield FIRST_LINE, 0.0, At.START
        yield SECOND_LINE, self.length, At.END

    # Depth of the bracing plane

    def depth(self) -> float:
        """How far the plane of the roof bracing lies under the top line, mm.

        At half the depth of the shallower steel at the bay's lines, and no brace or strut above its top.
        """
        carriers = (self.frames.first.carrier, self.frames.second.carrier)
        return max(
            min(c.height for c in carriers) / 2,
            brace_reach(self.options.roof.section),
            self.options.struts.section.height / 2,
        )

    # Struts

    def strut(
        self,
        name: str,
        role: Role,
        section: Section,
        grade: str,
        at: Array,
        carriers: Sequence[tuple[str, float]],
    ) -> None:
        """A strut along the building through ``at`` (3,); for each line its carrier and where the strut stops."""
        (first, stop_first), (second, stop_second) = carriers
        a = at + _LENGTHWISE * stop_first
        b = at + _LENGTHWISE * (self.length - stop_second)
        if b[1] - a[1] < section.height:
            raise impossible("building.bays", f"no room for a {role.word} between two frames")
        bar, place = stick(section, a, b, _UP)
        self.members.append(Member(name, role, bar, place, grade, self.finish))
        kind = JointKind.TIE_END if role is Role.TIE else JointKind.STRUT_END
        for carrier, (line, y, end) in zip((first, second), self.lines(), strict=True):
            point = at + _LENGTHWISE * y
            self.meetings.append(Meeting(kind, (Meets(carrier, At.ALONG, line), Meets(name, end)), point))

    def column_stop(self, strut: Section) -> float:
        """Where a strut stops at a column: at its web between the flanges where it fits, else at their tips."""
        profile = self.columns.profile
        if isinstance(profile, IShape) and strut.width <= profile.h - 2 * profile.tf - 2 * profile.r:
            return profile.tw / 2 + STRUT_END_GAP
        return self.columns.width / 2 + STRUT_END_GAP

    def eaves_level(self, column: int) -> float:
        """Level of the strut at a column line: in the plane of the roof bracing, under the column's cap."""
        strut = self.options.eaves_strut.section
        pitched = self.layout.slopes_at_column(column)
        x = self.layout.grid.x[column]
        in_plane = min(float(p.point(x, self.depth())[2]) for p in pitched)
        steepest = max(abs(float(p.direction[2] / p.direction[0])) for p in pitched)
        cap = cap_thickness(self.columns, self.description.connections.caps) * hypot(1.0, steepest)
        half = end_reach(strut, self.description.connections.tube_ends.struts)
        under = self.layout.column_top(column) - cap - half - steepest * strut.width / 2
        return min(in_plane, under)

    def eaves_struts(self) -> None:
        """A strut at every column line: at the eaves, in valleys, and where a slope runs on over columns."""
        options = self.options.eaves_strut
        stop = self.column_stop(options.section)
        last = len(self.layout.grid.x) - 1
        for column, letter in enumerate(self.layout.grid.letters):
            role = Role.EAVES_STRUT if column in (0, last) else Role.STRUT
            if self.layout.is_valley(column):
                role = Role.VALLEY_STRUT
            at = np.array([self.layout.grid.x[column], 0.0, self.eaves_level(column)])
            carrier = (f"column/{letter}", stop)
            self.strut(f"{role.word}/{letter}", role, options.section, options.grade, at, (carrier, carrier))

    def ties(self) -> None:
        """Ties between the bottom chords of two trusses, at nodes no further apart than asked."""
        options = self.options.ties
        trusses = zip(self.frames.first.trusses, self.frames.second.trusses, strict=False)
        for span, (here, there) in zip(self.layout.span_names, trusses, strict=False):
            nodes = np.array(here.bottom_nodes)
            wanted = even_places(nodes[0], nodes[-1], options.spacing)[1:-1]
            # The end nodes are at the columns.
            inner = nodes[1:-1]
            chosen = sorted({1 + int(np.abs(inner - x).argmin()) for x in wanted if len(inner)})
            for node in chosen:
                x, z = here.bottom_nodes[node], here.bottom_levels[node]
                stop = here.bottom_chord.width / 2 + STRUT_END_GAP
                carriers = tuple(
                    (bar_over(made.bottom_chords, x).on_side(far=far), stop)
                    for made, far in ((here, True), (there, False))
                )
                self.strut(
                    f"bottom chord tie/{span}/{node}", Role.TIE, options.section, options.grade,
                    np.array([x, 0.0, z]), carriers,
                )  # fmt: skip

    # Roof

    def roof(self) -> None:
        """Braces over every slope, and struts at the nodes that no column line holds."""
        options = self.options.roof
        self.clear_of_posts()
        for number, pitched in enumerate(self.layout.slopes):
            places = brace_places(self.description, self.layout, pitched)
            for k, (x0, x1) in enumerate(pairwise(places), start=1):
                from_low = k if pitched.slope.rises else len(places) - k
                panel = self.roof_panel(number, pitched, k, from_low, x0, x1)
                members, meetings = braces(
                    panel, options.pattern, options.section, Role.ROOF_BRACE, options.grade, self.finish
                )
                self.members += members
                self.meetings += meetings
            for k, x in enumerate(places[1:], start=1):
                at_end = k == len(places) - 1
                if not (at_end and pitched.right_column >= 0):
                    self.roof_strut(number, pitched, k, x)

    def clear_of_posts(self) -> None:
        """Nothing of the roof bracing hangs below a rafter by more than the gap over the posts that stand there."""
        reach = max(brace_reach(self.options.roof.section), self.options.struts.section.height / 2)
        for frame in (self.frames.first, self.frames.second):
            room = frame.carrier.height + POST_HEAD_GAP - self.depth()
            if frame.posts and not frame.trusses and reach > room:
                raise impossible(
                    "bracing.roof", f"the roof bracing hangs below the gable rafters {frame.carrier.designation}",
                    given=f"{self.options.roof.section.designation}, struts {self.options.struts.section.designation}",
                    allowed="smaller braces and struts, or deeper rafters",
                )  # fmt: skip

    def roof_strut(self, number: int, pitched: Pitched, k: int, x: float) -> None:
        """A strut between the frames at a bracing node; a ridge node belongs to the slope on its left."""
        options = self.options.struts
        _, at = self.strut_at_node(x, -1)
        carriers = tuple(
            (frame.carrier_at(number, x, far=far), frame.carrier.width / 2 + STRUT_END_GAP)
            for frame, far in ((self.frames.first, True), (self.frames.second, False))
        )
        self.strut(f"strut/{pitched.name}/{k}", Role.STRUT, options.section, options.grade, at, carriers)

    def roof_panel(self, number: int, pitched: Pitched, k: int, from_low: int, x0: float, x1: float) -> Panel:
        """The k-th panel of roof bracing of a slope; ``from_low`` counts from the slope's low end."""
        ends = {}
        for line, y, _ in self.lines():
            frame = self.frames.at(line)
            inwards = _LENGTHWISE if line == FIRST_LINE else -_LENGTHWISE
            for x, along_slope in ((x0, pitched.direction), (x1, -pitched.direction)):
                column = self.column_at(x)
                at = pitched.point(x, self.depth()) + _LENGTHWISE * y
                side = (
                    max(self.columns.width, frame.carrier.width) / 2
                    if column >= 0
                    else frame.carrier.width / 2
                )
                strut, middle = self.strut_at_node(x, column)
                planes = [
                    (at + inwards * (side + BRACE_SET_BACK), inwards),
                    (middle + along_slope * (strut_reach(strut, along_slope) + BRACE_SET_BACK), along_slope),
                ]
                if column in self.braced_lines():
                    across = _ACROSS * np.sign(along_slope[0])
                    beside = brace_reach(self.options.walls.section) + BRACE_SET_BACK
                    planes.append((middle + across * beside, across))
                carrier = (
                    f"column/{self.layout.grid.letters[column]}"
                    if column >= 0
                    else frame.carrier_at(number, x, far=line == FIRST_LINE)
                )
                ends[line, x] = BraceEnd(at, Meets(carrier, At.ALONG, line), tuple(planes))
        # A slope that falls to the right is braced as the mirror image of one that rises.
        near, far = (FIRST_LINE, SECOND_LINE) if pitched.slope.rises else (SECOND_LINE, FIRST_LINE)
        corners = (ends[near, x0], ends[far, x1], ends[near, x1], ends[far, x0])
        return Panel(f"roof brace/{pitched.name}/{k}", corners, pitched.normal, turned=from_low % 2 == 0)

    def strut_at_node(self, x: float, column: int) -> tuple[Section, Array]:
        """The strut at a bracing node, and where its axis crosses the frame's plane (3,).

        At a ridge it lies in the lower of the two planes that meet there.
        """
        if column >= 0:
            section = self.options.eaves_strut.section
            return section, np.array([x, 0.0, self.eaves_level(column)])
        section = self.options.struts.section
        over = [p for p in self.layout.slopes if p.slope.x0 - 1e-6 < x < p.slope.x1 + 1e-6]
        middle = min((p.point(x, self.depth()) for p in over), key=lambda point: float(point[2]))
        if over[0].name in self.ridge_levels and len(over) == 2:
            middle[2] = min(middle[2], self.ridge_levels[over[0].name] - section.height / 2)
        return section, middle

    def column_at(self, x: float) -> int:
        """The number of the column line at x, or -1."""
        return next((i for i, line in enumerate(self.layout.grid.x) if abs(line - x) < 1e-6), -1)

    # Walls

    def braced_lines(self) -> Sequence[int]:
        """Numbers of the column lines with wall braces."""
        every = range(len(self.layout.grid.x))
        return (every[0], every[-1]) if self.options.walls.lines == "outer" else every

    def walls(self) -> None:
        """Braces between the columns of every braced column line, and struts between tiers."""
        options = self.options.walls
        for column in self.braced_lines():
            letter, x = self.layout.grid.letters[column], self.layout.grid.x[column]
            low, high = self.layout.base + BASE_NODE, self.eaves_level(column)
            tiers = options.tiers or max(ceil((high - low) / self.length / _STEEPEST_TIER), 1)
            levels = even_places(low, high, (high - low) / tiers)
            for k, (z0, z1) in enumerate(pairwise(levels), start=1):
                panel = self.wall_panel(letter, x, k, z0, z1, at_base=k == 1, at_eaves=k == tiers)
                members, meetings = braces(
                    panel, options.pattern, options.section, Role.WALL_BRACE, options.grade, self.finish
                )
                self.members += members
                self.meetings += meetings
            for k, z in enumerate(levels[1:-1], start=1):
                struts = self.options.struts
                carrier = (f"column/{letter}", self.column_stop(struts.section))
                self.strut(
                    f"strut/{letter}/{k}", Role.STRUT, struts.section, struts.grade,
                    np.array([x, 0.0, z]), (carrier, carrier),
                )  # fmt: skip

    def wall_panel(
        self, letter: str, x: float, k: int, z0: float, z1: float, *, at_base: bool, at_eaves: bool
    ) -> Panel:
        """One tier of wall bracing between two columns."""
        ends = {}
        side = self.columns.width / 2 + BRACE_SET_BACK
        tier_half = self.options.struts.section.height / 2
        eaves_half = self.options.eaves_strut.section.height / 2
        for line, y, _ in self.lines():
            inwards = _LENGTHWISE if line == FIRST_LINE else -_LENGTHWISE
            for z, upwards in ((z0, _UP), (z1, -_UP)):
                strut = eaves_half if z == z1 and at_eaves else tier_half
                stand_off = 0.0 if z == z0 and at_base else strut + BRACE_SET_BACK
                at = np.array([x, y, z])
                planes = (
                    (at + inwards * side, inwards),
                    (at + upwards * stand_off, upwards),
                )
                ends[line, z] = BraceEnd(at, Meets(f"column/{letter}", At.ALONG, line), planes)
        corners = (ends[FIRST_LINE, z0], ends[SECOND_LINE, z1], ends[FIRST_LINE, z1], ends[SECOND_LINE, z0])
        return Panel(f"wall brace/{letter}/{k}", corners, _ACROSS, turned=k % 2 == 0)
