"""One truss of hollow sections over one span: chords, webs cut to the chord faces, and their joints."""

from __future__ import annotations

import itertools
from collections.abc import Sequence
from dataclasses import dataclass
from math import atan, cos, tan

import numpy as np
from numpy.typing import NDArray

from shedbim.description.roof_systems import TrussRoof
from shedbim.expand.clearances import END_PLATE, WEB_TO_CHORD_END
from shedbim.expand.impossible import impossible
from shedbim.expand.kits import Kit, Meeting, Meets, Member
from shedbim.expand.sticks import Planes, along, stick
from shedbim.expand.web_ends import ChordFace, LandedWeb, WebAim, axes_miss, fits, land
from shedbim.geometry.placements import translation
from shedbim.model.joints import At, JointKind
from shedbim.model.roles import Role
from shedbim.roofs.slope import Slope
from shedbim.sections.section import Section
from shedbim.webs import PATTERNS
from shedbim.webs.topology import Topology, TrussLine, Web

__all__ = ["Truss", "truss", "truss_lifts"]

Array = NDArray[np.float64]
_BOTTOM, _TOP = 0, 1
_UP = (0.0, 0.0, 1.0)
_ACROSS = (1.0, 0.0, 0.0)


@dataclass(frozen=True, eq=False)
class Truss:
    """A truss as a kit, with what others fasten to.

    Attributes:
        top_chords, bottom_chords: names of the chord pieces, one for each slope.
        top_nodes, bottom_nodes: x of the nodes on each chord, ascending, mm.
        bottom_levels: levels of the bottom chord's axis at those bottom nodes, mm.
        bottom_chord: its section.
    """

    kit: Kit
    top_chords: tuple[str, ...]
    bottom_chords: tuple[str, ...]
    top_nodes: tuple[float, ...]
    bottom_nodes: tuple[float, ...]
    bottom_levels: tuple[float, ...]
    bottom_chord: Section


def _bottom_pitches(options: TrussRoof, slopes: Sequence[Slope]) -> list[float]:
    """Signed pitch of the bottom chord under each slope of a span.

    Under unequal slopes it is everywhere the same share of the roof's, so that both lengths meet at the ridge.
    """
    if options.shape == "parallel":
        return [s.pitch for s in slopes]
    share = tan(options.bottom_pitch) / tan(abs(slopes[0].pitch))
    return [atan(share * tan(s.pitch)) for s in slopes]


def _bottom_rise(options: TrussRoof, slopes: Sequence[Slope]) -> float:
    """Axis of the bottom chord above the underside at the column line: its half depth on the steepest slope."""
    return options.bottom_chord.height / 2 / min(cos(pitch) for pitch in _bottom_pitches(options, slopes))


def truss_lifts(options: TrussRoof, slopes: Sequence[Slope]) -> list[float]:
    """Give the height of the top chord's upper face above each slope's own line, mm."""
    axis = _bottom_rise(options, slopes) + options.depth
    return [axis + options.top_chord.height / 2 / cos(s.pitch) for s in slopes]


def truss(
    options: TrussRoof,
    slopes: Sequence[Slope],
    eaves: float,
    span_name: str,
    faces: tuple[float, float],
    finish: str,
) -> Truss:
    """Give the truss under the slopes of one span, between the column faces at x = ``faces``.

    ``eaves`` is the level of the underside where the slopes' own z is 0, mm.
    """
    return _Maker(options, slopes, eaves, span_name, faces, finish).truss()


class _Maker:
    """The steps of one truss; every step reads what the steps before it set."""

    def __init__(
        self,
        options: TrussRoof,
        slopes: Sequence[Slope],
        eaves: float,
        span_name: str,
        faces: tuple[float, float],
        finish: str,
    ) -> None:
        self.options, self.eaves, self.span, self.finish = options, eaves, span_name, finish
        self.ends = (faces[0] + END_PLATE, faces[1] - END_PLATE)
        self.slopes = slopes
        self.ridge_x = self.slopes[0].x1 if len(self.slopes) == 2 else None
        self.chords = (self._chord(_BOTTOM), self._chord(_TOP))
        self.kinks = tuple(
            len(faces) == 2 and abs(faces[0].slope - faces[1].slope) > 1e-9 for faces in self.chords
        )
        self.line_ends = self._end_nodes()
        self.topology = self._topology()

    def _chord(self, which: int) -> list[ChordFace]:
        """The straight lengths of one chord, left to right."""
        rise = _bottom_rise(self.options, self.slopes)
        faces = []
        for s, bottom_pitch in zip(self.slopes, _bottom_pitches(self.options, self.slopes), strict=True):
            low_x, low_z = (s.x0, s.z0) if s.rises else (s.x1, s.z1)
            axis = self.eaves + low_z + rise
            if which == _BOTTOM:
                faces.append(
                    ChordFace(
                        s.x0, s.x1, low_x, axis, tan(bottom_pitch),
                        self.options.bottom_chord.height / 2, 1,
                    )
                )  # fmt: skip
            else:
                faces.append(
                    ChordFace(
                        s.x0, s.x1, low_x, axis + self.options.depth, tan(s.pitch),
                        self.options.top_chord.height / 2, -1,
                    )
                )  # fmt: skip
        return faces

    def _over(self, which: int, x: float) -> ChordFace:
        """The length of a chord over x; at the ridge the left one."""
        faces = self.chords[which]
        return faces[0] if len(faces) == 1 or x <= faces[0].x_to else faces[1]

    def _end_nodes(self) -> tuple[float, float]:
        """x of the first and last panel point: the first web's toe stands clear of the sawn chord end."""
        if self._has_end_posts():
            inset = self._posts().height / 2 + WEB_TO_CHORD_END
        else:
            diagonal = self.options.end_section
            panel = (self.ends[1] - self.ends[0]) / self.options.panels
            angle = float(np.arctan2(self.options.depth, panel / 2))
            footprint = diagonal.height / 2 / np.sin(angle)
            inset = footprint + WEB_TO_CHORD_END - self.options.bottom_chord.height / 2 / np.tan(angle)
            inset = max(0.0, float(inset))
        return self.ends[0] + inset, self.ends[1] - inset

    def _posts(self) -> Section:
        return self.options.post_section

    def _has_end_posts(self) -> bool:
        """Whether the pattern stands a post on the first panel point, whatever the leverages are."""
        smallest = TrussLine(2, None, False, False, (0.0, 1.0, 0.0))
        return PATTERNS[self.options.pattern].topology(smallest).webs[0].kind == "post"

    def _ridge_panel(self) -> int | None:
        """Panels left of the ridge: in proportion to the plan lengths of the slopes."""
        if self.ridge_x is None:
            return None
        share = (self.ridge_x - self.slopes[0].x0) / (self.slopes[1].x1 - self.slopes[0].x0)
        return min(max(round(self.options.panels * share), 1), self.options.panels - 1)

    def _x(self, coordinate: float) -> float:
        """x of a panel coordinate."""
        first, last = self.line_ends
        ridge, panels = self._ridge_panel(), self.options.panels
        if ridge is None or self.ridge_x is None:
            return first + (last - first) * coordinate / panels
        if coordinate <= ridge:
            return first + (self.ridge_x - first) * coordinate / ridge
        return self.ridge_x + (last - self.ridge_x) * (coordinate - ridge) / (panels - ridge)

    def _topology(self) -> Topology:
        panels = self.options.panels
        first, last = self.line_ends
        points = [self._x(float(i)) for i in range(panels + 1)]
        leverage = tuple(
            (x - first) * (last - x) / (self._over(_TOP, x).axis(x) - self._over(_BOTTOM, x).axis(x))
            for x in points
        )
        line = TrussLine(panels, self._ridge_panel(), self.kinks[_TOP], self.kinks[_BOTTOM], leverage)
        return PATTERNS[self.options.pattern].topology(line)

    def _section(self, web: Web) -> Section:
        if web.kind == "post":
            return self._posts()
        panels = self.options.panels
        middle = (self.topology.bottom[web.bottom] + self.topology.top[web.top]) / 2
        at_end = middle < 1 or middle > panels - 1
        return (self.options.end_section) if at_end else self.options.diagonals

    def _aim(self, web: Web) -> WebAim:
        nodes = (self._x(self.topology.bottom[web.bottom]), self._x(self.topology.top[web.top]))
        middle = sum(nodes) / 2
        is_post = web.kind == "post"
        ridge = self.ridge_x
        kinked = tuple(
            is_post and ridge is not None and abs(nodes[c] - ridge) < 1e-6 and self.kinks[c]
            for c in (_BOTTOM, _TOP)
        )
        # A diagonal that ends at the ridge lands on the side that it comes from.
        faces = tuple(
            self._over(c, nodes[c] if ridge is None or abs(nodes[c] - ridge) > 1e-6 else middle)
            for c in (_BOTTOM, _TOP)
        )
        return WebAim(self._section(web), nodes, (faces[0], faces[1]), (kinked[0], kinked[1]), is_post)

    def _groups(self, aims: Sequence[WebAim], which: int) -> list[list[int]]:
        """The webs at each node of a chord, left to right."""
        webs = self.topology.webs
        count = len(self.topology.bottom if which == _BOTTOM else self.topology.top)
        at: list[list[int]] = [[] for _ in range(count)]
        for i, web in enumerate(webs):
            at[web.bottom if which == _BOTTOM else web.top].append(i)
        return [sorted(group, key=lambda i: aims[i].nodes[1 - which]) for group in at if group]

    def truss(self) -> Truss:
        """Chords first, then webs, then their meetings."""
        aims = [self._aim(web) for web in self.topology.webs]
        groups = (self._groups(aims, _BOTTOM), self._groups(aims, _TOP))
        room = (self.ends[0] + WEB_TO_CHORD_END, self.ends[1] - WEB_TO_CHORD_END)
        landed = land(aims, groups, (room, room), self.ridge_x)
        if not fits(aims, landed, groups, (room, room)):
            raise impossible(
                "frames.roof.panels", "webs lie too flat, or leave no gap for their welds at a node of the truss",
                given=str(self.options.panels), allowed="another number of panels, more depth or slimmer webs",
            )  # fmt: skip
        members, names = self._chord_members()
        web_names = self._web_names()
        for aim, at, (role, name) in zip(aims, landed, web_names, strict=True):
            members.append(self._web_member(aim, at, role, name))
        meetings = [
            self._node(which, group, aims, landed, names[which], [n for _, n in web_names])
            for which in (_BOTTOM, _TOP)
            for group in groups[which]
        ]
        if self.ridge_x is not None:
            for which in (_BOTTOM, _TOP):
                point = np.array([self.ridge_x, 0.0, self._over(which, self.ridge_x).axis(self.ridge_x)])
                left, right = names[which]
                pair = (Meets(left, At.END), Meets(right, At.START))
                meetings.append(Meeting(JointKind.CHORD_RIDGE, pair, point))
        start = self.line_ends[0]
        origin = translation([start, 0.0, self._over(_BOTTOM, start).axis(start)])
        kit = Kit(tuple(members), tuple(meetings), (f"truss/{self.span}", "truss", "shop"), origin)
        bottom = tuple(self._x(c) for c in self.topology.bottom)
        return Truss(
            kit,
            tuple(names[_TOP]),
            tuple(names[_BOTTOM]),
            tuple(self._x(c) for c in self.topology.top),
            bottom,
            tuple(self._over(_BOTTOM, x).axis(x) for x in bottom),
            self.options.bottom_chord,
        )

    def _chord_members(self) -> tuple[list[Member], tuple[list[str], list[str]]]:
        members = []
        names: tuple[list[str], list[str]] = ([], [])
        kinds = (
            (Role.BOTTOM_CHORD, self.options.bottom_chord),
            (Role.TOP_CHORD, self.options.top_chord),
        )
        for which, (role, section) in enumerate(kinds):
            for number, face in enumerate(self.chords[which]):
                x0, x1 = max(face.x_from, self.ends[0]), min(face.x_to, self.ends[1])
                bar, place = stick(
                    section, (x0, 0.0, face.axis(x0)), (x1, 0.0, face.axis(x1)), _UP,
                    start_planes=along(_ACROSS), end_planes=along(_ACROSS),
                )  # fmt: skip
                name = f"truss/{role.word}/{self.span}/{number + 1}"
                names[which].append(name)
                members.append(Member(name, role, bar, place, self.options.grade, self.finish))
        return members, names

    def _web_names(self) -> list[tuple[Role, str]]:
        named = []
        counts = {Role.DIAGONAL: 0, Role.POST: 0}
        for web in self.topology.webs:
            role = Role.POST if web.kind == "post" else Role.DIAGONAL
            counts[role] += 1
            named.append((role, f"truss/{role.word}/{self.span}/{counts[role]}"))
        return named

    def _web_member(self, aim: WebAim, at: LandedWeb, role: Role, name: str) -> Member:
        d = at.direction
        bar, place = stick(
            aim.section,
            self._landing(aim, at, _BOTTOM),
            self._landing(aim, at, _TOP),
            (-d[1], 0.0, d[0]),
            start_planes=self._end_planes(aim, _BOTTOM),
            end_planes=self._end_planes(aim, _TOP),
        )
        return Member(name, role, bar, place, self.options.grade, self.finish)

    def _landing(self, aim: WebAim, at: LandedWeb, which: int) -> tuple[float, float, float]:
        """Where the axis of a web ends.

        Faces of unequal slopes miss each other at a kink: there the post keeps clear of both.
        """
        x, z = (at.bottom, at.top)[which]
        if aim.at_kink[which]:
            levels = [face.face(x) for face in self.chords[which]]
            z = max(levels) if which == _BOTTOM else min(levels)
        return x, 0.0, z

    def _end_planes(self, aim: WebAim, which: int) -> Planes:
        """The chord face or, at a kink, both: a bird's mouth over a peak, a point into a hollow."""
        lengths = self.chords[which] if aim.at_kink[which] else [aim.faces[which]]
        normals = [(face.normal[0], 0.0, face.normal[1]) for face in lengths]
        peak = len(lengths) == 2 and (lengths[0].slope > lengths[1].slope) == (which == _BOTTOM)
        return along(*normals, notched=peak)

    def _node(
        self,
        which: int,
        group: Sequence[int],
        aims: Sequence[WebAim],
        landed: Sequence[LandedWeb],
        chord_names: Sequence[str],
        web_names: Sequence[str],
    ) -> Meeting:
        """The joint of one node: the chord, and the end of each web that lands there."""
        x = aims[group[0]].nodes[which]
        face = self._over(which, x)
        number = self.chords[which].index(face)
        misses = [
            axes_miss(landed[i], landed[j], lambda v: self._over(which, v).axis(v))
            for i, j in itertools.pairwise(group)
        ]
        worst = max(misses, key=abs, default=0.0)
        end = At.START if which == _BOTTOM else At.END
        pieces = (Meets(chord_names[number], At.ALONG), *(Meets(web_names[i], end) for i in group))
        return Meeting(JointKind.NODE, pieces, np.array([x, 0.0, face.axis(x)]), worst)
