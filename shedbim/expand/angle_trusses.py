"""One truss of pairs of angles over one span: system lines are the axes of centroids, and meet at every node.

Chords have their outstanding legs outside, on top of the top chord and under the bottom chord. Diagonals have their
heels on the upper side, posts towards the nearer column; the ends of webs are square and stop clear of the chords'
legs and of each other on the gussets.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace
from itertools import pairwise
from math import ceil

import numpy as np
from manifold3d import CrossSection
from numpy.typing import NDArray

from shedbim.description.connections import Connections
from shedbim.description.roof_systems import AngleTrussRoof
from shedbim.expand.impossible import impossible
from shedbim.expand.joints.angle_column import BEFORE_CHORD, web_room
from shedbim.expand.joints.angle_gusset import chord_patch, web_patch
from shedbim.expand.joints.gusset_legs import CLEAR, Leg, Web, starts
from shedbim.expand.joints.packed_pair import PACK
from shedbim.expand.kits import Kit, Meeting, Meets
from shedbim.expand.pairs import Pair, pair_of, size_of_pair
from shedbim.expand.sticks import along
from shedbim.expand.truss_chords import BOTTOM, TOP, ChordBar, chord_bars, to_back, to_webs
from shedbim.expand.truss_layout import TrussLayout, has_end_posts
from shedbim.expand.trusses import Truss
from shedbim.expand.web_ends import ChordFace
from shedbim.geometry.placements import translation
from shedbim.model.joints import At, JointKind
from shedbim.model.roles import Role
from shedbim.roofs.slope import Slope
from shedbim.sections.section import Section

__all__ = ["Between", "angle_truss"]

Array = NDArray[np.float64]
_ROLES = (Role.BOTTOM_CHORD, Role.TOP_CHORD)
_ACROSS = (1.0, 0.0, 0.0)
_SAME = 1e-6
#: From the ridge to the end of each length of chord that the gusset joins there, mm (common practice).
_RIDGE_GAP = 5.0
#: Air between a pack and a gusset, mm; packs in a web, at least: at its third points (common practice).
_BESIDE_PACK, _IN_WEB = 40.0, 2


@dataclass(frozen=True)
class Between:
    """What a truss stands between: the faces of its end plates, x in mm, and the names of the columns."""

    faces: tuple[float, float]
    columns: tuple[str, str]


@dataclass(frozen=True, eq=False)
class _Node:
    """A node of a chord: its point in x and z, the webs there, left to right, and the chord bars."""

    point: Array
    webs: list[int]
    bars: list[int]
    end: At | None


def angle_truss(
    options: AngleTrussRoof,
    slopes: Sequence[Slope],
    eaves: float,
    span: str,
    between: Between,
    finish: str,
    connections: Connections,
) -> Truss:
    """Give the truss under the slopes of one span, with its joints to the columns.

    ``eaves`` is the level of the underside where the slopes' own z is 0, mm.

    Raises:
        DescriptionError: when webs find no room between the chords.
    """
    return _Maker(options, slopes, eaves, span, between, finish, connections).truss()


class _Maker(TrussLayout):
    """The steps of one truss; every step reads what the steps before it set."""

    options: AngleTrussRoof

    def __init__(
        self,
        options: AngleTrussRoof,
        slopes: Sequence[Slope],
        eaves: float,
        span: str,
        between: Between,
        finish: str,
        connections: Connections,
    ) -> None:
        self.between, self.finish, self.connections = between, finish, connections
        inset = web_room(connections.chords)
        if has_end_posts(options.pattern):
            inset += to_back(options.post_section)
        first, last = between.faces
        super().__init__(options, slopes, eaves, span, (first + inset, last - inset))
        self.gap = options.gusset
        self.bars = (self._bars(BOTTOM), self._bars(TOP))
        self.chord_pairs = (self._chord_pairs(BOTTOM), self._chord_pairs(TOP))
        self.nodes_of = (self._nodes(BOTTOM), self._nodes(TOP))
        self.begin = self._begin()
        self.web_pairs = self._web_pairs()

    def truss(self) -> Truss:
        """All bars, then their joints."""
        pairs = [*self.chord_pairs[BOTTOM], *self.chord_pairs[TOP], *self.web_pairs]
        members = tuple(member for pair in pairs for member in (pair.near, pair.far))
        meetings = [self._joint(which, node) for which in (BOTTOM, TOP) for node in self.nodes_of[which]]
        meetings += self._packs()
        start = self.line_ends[0]
        origin = translation([start, 0.0, self.over(BOTTOM, start).axis(start)])
        kit = Kit(members, tuple(meetings), (f"truss/{self.span}", "truss", "shop"), origin)
        bottom = tuple(self.x(c) for c in self.topology.bottom)
        named = tuple(
            tuple(replace(bar, name=f"{bar.name}/near", far=f"{bar.name}/far") for bar in bars)
            for bars in self.bars
        )
        return Truss(
            kit,
            named[TOP],
            named[BOTTOM],
            tuple(self.x(c) for c in self.topology.top),
            bottom,
            tuple(self.over(BOTTOM, x).axis(x) for x in bottom),
            size_of_pair(self.options.bottom_chord, self.gap),
        )

    # Chords

    def _bars(self, which: int) -> list[ChordBar]:
        """The bars of a chord: one under each slope, short of the end plates and of the ridge."""
        first, last = self.between.faces
        bars = chord_bars(
            self.chords[which], (first + BEFORE_CHORD, last - BEFORE_CHORD), [], _ROLES[which], self.span
        )
        if len(bars) == 2:
            ridge = bars[0].x_to
            bars = [replace(bars[0], x_to=ridge - _RIDGE_GAP), replace(bars[1], x_from=ridge + _RIDGE_GAP)]
        return bars

    def _section(self, which: int) -> Section:
        return self.options.bottom_chord if which == BOTTOM else self.options.top_chord

    def _chord_pairs(self, which: int) -> list[Pair]:
        made = []
        for bar in self.bars[which]:
            face = self.chords[which][bar.slope]
            line = (_on(face, bar.x_from), _on(face, bar.x_to))
            made.append(
                pair_of(
                    bar.name, _ROLES[which], self._section(which), line, -face.normal, self.gap,
                    along(_ACROSS), self.options.grade, self.finish,
                )
            )  # fmt: skip
        return made

    def _chord_leg(self, which: int, bar: int, x: float) -> Leg:
        """A chord bar's leg from x on, or back from there where it ends."""
        section, face = self._section(which), self.chords[which][bar]
        run = np.array([1.0, face.slope]) * face.run
        if abs(x - self.bars[which][bar].x_to) < _SAME:
            run = -run
        return Leg(_on(face, x), run, -face.normal, to_back(section), to_webs(section))

    # Nodes

    def _nodes(self, which: int) -> list[_Node]:
        """The nodes of a chord, left to right: at both columns, at a ridge, and wherever webs meet."""
        found = []
        groups = self.groups(which)
        at = {round(self.nodes(self.topology.webs[group[0]])[which], 6): group for group in groups}
        first, last = (round(x, 6) for x in self.line_ends)
        bars = self.bars[which]
        places = {first, last, *at}
        if len(bars) == 2 and self.ridge_x is not None:
            places.add(round(self.ridge_x, 6))
        for x in sorted(places):
            end = At.START if x == first else At.END if x == last else None
            ridge = len(bars) == 2 and self.ridge_x is not None and abs(x - self.ridge_x) < 1e-3
            over = [0, 1] if ridge else [0 if len(bars) == 1 or x < bars[1].x_from else 1]
            point = _on(self.over(which, x), x)
            found.append(_Node(point, at.get(x, []), over, end))
        return found

    def _web_leg(self, web: int, which: int, point: Array) -> Leg:
        """A web's leg from a point of its axis, away from a chord."""
        here = self.topology.webs[web]
        bottom, top = self.nodes(here)
        a, b = _on(self.over(BOTTOM, bottom), bottom), _on(self.over(TOP, top), top)
        run = (b - a) / float(np.linalg.norm(b - a))
        heel = np.array([-run[1], run[0]])
        if here.kind == "post":
            middle = sum(self.line_ends) / 2
            upward = -heel[0] * (bottom - middle - _SAME) < 0
        else:
            upward = heel[1] > 0
        section = self.section(here)
        return Leg(
            point,
            run if which == BOTTOM else -run,
            heel if upward else -heel,
            to_back(section),
            to_webs(section),
        )

    def _begin(self) -> dict[tuple[int, int], Array]:
        """Where the axis of each web begins at each chord, by (web, chord)."""
        begin = {}
        for which in (BOTTOM, TOP):
            for node in self.nodes_of[which]:
                webs = [
                    Web(self._web_leg(i, which, node.point), self.topology.webs[i].kind == "post")
                    for i in node.webs
                ]
                limits = [self._limits(which, node, web) for web in webs]
                found = starts(node.point, webs, limits)
                for i, web, far in zip(node.webs, webs, found, strict=True):
                    begin[i, which] = web.leg.point(far, 0.0)
        return begin

    def _limits(self, which: int, node: _Node, web: Web) -> list[tuple[Array, Array]]:
        """The lines that a web stays behind at a node: the toes of the chord, and the bolts of an end plate.

        Over a peak of the bottom chord the far slope, drawn on, would push a diagonal away for nothing.
        """
        found = []
        bars = node.bars
        if which == BOTTOM and len(bars) == 2 and not web.is_post:
            bars = [1] if web.leg.along[0] > 0 else [0]
        for bar in bars:
            face = self.chords[which][bar]
            found.append((node.point + face.normal * (to_webs(self._section(which)) + CLEAR), face.normal))
        if node.end is not None:
            room = web_room(self.connections.chords)
            wall, out = self.between.faces[node.end], 1.0 if node.end == At.START else -1.0
            found.append((np.array([wall + out * room, 0.0]), np.array([out, 0.0])))
        return found

    def _web_pairs(self) -> list[Pair]:
        made = []
        for i, (role, name) in enumerate(self.web_names()):
            a, b = self.begin[i, BOTTOM], self.begin[i, TOP]
            leg = self._web_leg(i, BOTTOM, a)
            if float((b - a) @ leg.along) < 4 * leg.width:
                raise impossible(
                    "frames.roof.depth", "no room for a web of the truss between its gussets",
                    given=name, allowed="more depth, fewer panels or slimmer angles",
                )  # fmt: skip
            section = self.section(self.topology.webs[i])
            made.append(
                pair_of(
                    name, role, section, (a, b), leg.heel, self.gap, None, self.options.grade, self.finish
                )
            )
        return made

    # Joints

    def _joint(self, which: int, node: _Node) -> Meeting:
        """The joint at a node; the near chord is first, webs follow it, and the far angles of chords are last."""
        if node.end is not None:
            chords = [self.chord_pairs[which][node.bars[0]].meets(node.end)]
        elif len(node.bars) == 2:
            left, right = self.chord_pairs[which]
            chords = [left.meets(At.END), right.meets(At.START)]
        else:
            chords = [self.chord_pairs[which][node.bars[0]].meets(At.ALONG)]
        at = At.START if which == BOTTOM else At.END
        webs = [meets for i in node.webs for meets in self.web_pairs[i].meets(at)]
        near, far = [near for near, _ in chords], [far for _, far in chords]
        point = np.array([node.point[0], 0.0, node.point[1]])
        if node.end is None:
            return Meeting(JointKind.ANGLE_NODE, (near[0], *webs, *near[1:], *far), point)
        column = Meets(self.between.columns[node.end], At.ALONG)
        return Meeting(JointKind.ANGLE_COLUMN, (column, *near, *far, *webs), point)

    # Packs

    def _areas(self, which: int) -> Iterator[tuple[_Node, CrossSection]]:
        """The gussets of a chord, about: the hull of what each must reach."""
        for node in self.nodes_of[which]:
            patches = []
            for bar in node.bars:
                ends = node.end is not None or len(node.bars) == 2
                x = float(node.point[0])
                if ends:
                    own = self.bars[which][bar]
                    x = own.x_from if node.end == At.START or (bar == 1 and node.end is None) else own.x_to
                leg = self._chord_leg(which, bar, x)
                patches.append(chord_patch(leg, self.connections, ends=ends, before=BEFORE_CHORD))
            for i in node.webs:
                leg = self._web_leg(i, which, self.begin[i, which])
                patches.append(web_patch(leg, self.section(self.topology.webs[i]), self.connections))
            yield node, CrossSection.batch_hull(patches)

    def _packs(self) -> list[Meeting]:
        """The packs of all pairs, in what is free of gussets."""
        areas = (list(self._areas(BOTTOM)), list(self._areas(TOP)))
        made = []
        for which in (BOTTOM, TOP):
            for number, (bar, pair) in enumerate(zip(self.bars[which], self.chord_pairs[which], strict=True)):
                leg = self._chord_leg(which, number, bar.x_from)
                covered = [leg.covered(area) for node, area in areas[which] if number in node.bars]
                for (_, low), (high, _) in pairwise(sorted(covered)):
                    made += self._packs_in(pair, leg, low, high, 0)
        for i, pair in enumerate(self.web_pairs):
            leg = self._web_leg(i, BOTTOM, self.begin[i, BOTTOM])
            at_low, at_high = (
                next(leg.covered(area) for node, area in areas[which] if i in node.webs)
                for which in (BOTTOM, TOP)
            )
            made += self._packs_in(pair, leg, at_low[1], at_high[0], _IN_WEB)
        return made

    def _packs_in(self, pair: Pair, leg: Leg, low: float, high: float, least: int) -> list[Meeting]:
        """Packs in equal parts of a free length of a pair, fewer where they would stand too close."""
        free = high - low
        count = max(ceil(free / self.connections.truss_gussets.packs - 1e-9) - 1, least)
        count = min(count, max(int(free / (PACK + _BESIDE_PACK)) - 1, 0))
        points = [leg.point(low + free * k / (count + 1), 0.0) for k in range(1, count + 1)]
        return [
            Meeting(JointKind.PACKED_PAIR, pair.meets(At.ALONG), np.array([x, 0.0, z])) for x, z in points
        ]


def _on(face: ChordFace, x: float) -> Array:
    """The point (2,) of a chord's axis at x."""
    return np.array([x, face.axis(x)])
