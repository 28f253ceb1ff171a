"""One truss of hollow sections over one span: chords, webs cut to the chord faces, and their joints."""

from __future__ import annotations

import itertools
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.description.roof_systems import TrussRoof
from shedbim.expand.clearances import WEB_TO_CHORD_END
from shedbim.expand.impossible import impossible
from shedbim.expand.kits import Kit, Meeting, Meets, Member
from shedbim.expand.pairs import Steel
from shedbim.expand.sticks import Planes, along, stick
from shedbim.expand.truss_chords import (
    BOTTOM,
    CHORD_ROLES,
    TOP,
    ChordBar,
    bar_over,
    chord_bars,
    chord_member,
    truss_lifts,
)
from shedbim.expand.truss_layout import TrussLayout, has_end_posts
from shedbim.expand.truss_site_joints import Shipping, lap_length, site_meetings
from shedbim.expand.truss_splits import Cut, Outline, cuts
from shedbim.expand.web_ends import LandedWeb, WebAim, axes_miss, fits, footprint, land
from shedbim.geometry.placements import translation
from shedbim.model.joints import At, JointKind
from shedbim.model.roles import Role
from shedbim.roofs.slope import Slope
from shedbim.units import format_length
from shedbim.webs.topology import Web

__all__ = ["Truss", "truss", "truss_lifts"]

Array = NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class Truss:
    """A truss as a kit, with what others fasten to.

    Attributes:
        top_chords, bottom_chords: the chord bars, left to right.
        top_nodes, bottom_nodes: x of the nodes on each chord, ascending, mm.
        bottom_levels: levels of the bottom chord's axis at those bottom nodes, mm.
        bottom_chord: its section, or the size of its pairs.
    """

    kit: Kit
    top_chords: tuple[ChordBar, ...]
    bottom_chords: tuple[ChordBar, ...]
    top_nodes: tuple[float, ...]
    bottom_nodes: tuple[float, ...]
    bottom_levels: tuple[float, ...]
    bottom_chord: Steel


def truss(
    options: TrussRoof,
    slopes: Sequence[Slope],
    eaves: float,
    span_name: str,
    ends: tuple[float, float],
    finish: str,
    shipping: Shipping,
) -> Truss:
    """Give the truss under the slopes of one span, its chords sawn off at x = ``ends``.

    ``eaves`` is the level of the underside where the slopes' own z is 0, mm.
    """
    return _Maker(options, slopes, eaves, span_name, ends, finish, shipping).truss()


class _Maker(TrussLayout):
    """The steps of one truss; every step reads what the steps before it set."""

    options: TrussRoof

    def __init__(
        self,
        options: TrussRoof,
        slopes: Sequence[Slope],
        eaves: float,
        span_name: str,
        ends: tuple[float, float],
        finish: str,
        shipping: Shipping,
    ) -> None:
        self.finish, self.shipping, self.ends = finish, shipping, ends
        super().__init__(options, slopes, eaves, span_name, self._end_nodes(options))

    def _end_nodes(self, options: TrussRoof) -> tuple[float, float]:
        """x of the first and last panel point: the first web's toe stands clear of the sawn chord end."""
        if has_end_posts(options.pattern):
            inset = options.post_section.height / 2 + WEB_TO_CHORD_END
        else:
            diagonal = options.end_section
            panel = (self.ends[1] - self.ends[0]) / options.panels
            angle = float(np.arctan2(options.depth, panel / 2))
            footprint = diagonal.height / 2 / np.sin(angle)
            inset = footprint + WEB_TO_CHORD_END - options.bottom_chord.height / 2 / np.tan(angle)
            inset = max(0.0, float(inset))
        return self.ends[0] + inset, self.ends[1] - inset

    def _aim(self, web: Web) -> WebAim:
        nodes = (self.x(self.topology.bottom[web.bottom]), self.x(self.topology.top[web.top]))
        middle = sum(nodes) / 2
        is_post = web.kind == "post"
        ridge = self.ridge_x
        kinked = tuple(
            is_post and ridge is not None and abs(nodes[c] - ridge) < 1e-6 and self.kinks[c]
            for c in (BOTTOM, TOP)
        )
        # A diagonal that ends at the ridge lands on the side that it comes from.
        faces = tuple(
            self.over(c, nodes[c] if ridge is None or abs(nodes[c] - ridge) > 1e-6 else middle)
            for c in (BOTTOM, TOP)
        )
        return WebAim(self.section(web), nodes, (faces[0], faces[1]), (kinked[0], kinked[1]), is_post)

    def truss(self) -> Truss:
        """Chords first, then webs, then their meetings."""
        aims = [self._aim(web) for web in self.topology.webs]
        groups = (self.groups(BOTTOM), self.groups(TOP))
        room = (self.ends[0] + WEB_TO_CHORD_END, self.ends[1] - WEB_TO_CHORD_END)
        landed = land(aims, groups, (room, room), self.ridge_x)
        if not fits(aims, landed, groups, (room, room)):
            raise impossible(
                "frames.roof.panels", "webs lie too flat, or leave no gap for their welds at a node of the truss",
                given=str(self.options.panels), allowed="another number of panels, more depth or slimmer webs",
            )  # fmt: skip
        divided = self._cuts(aims, landed)
        bars = (self._bars(BOTTOM, divided), self._bars(TOP, divided))
        members = [self._chord_member(which, bar) for which in (BOTTOM, TOP) for bar in bars[which]]
        sited = {(cut.web, cut.bolted) for cut in divided}
        web_names, splices = self.web_names(), self.shipping.splices

        def group_of(web: int, which: int) -> Sequence[int]:
            return next(group for group in groups[which] if web in group)

        for number, (aim, at, (role, name)) in enumerate(zip(aims, landed, web_names, strict=True)):
            laps = tuple(
                lap_length(aims, landed, group_of(number, which), number, which, splices)
                if (number, which) in sited
                else 0.0
                for which in (BOTTOM, TOP)
            )
            members.append(self._web_member(aim, at, role, name, (laps[0], laps[1])))
        names = [name for _, name in web_names]
        meetings = [
            self._node(which, welded, aims, landed, bars[which], names)
            for which in (BOTTOM, TOP)
            for group in groups[which]
            if (welded := [i for i in group if (i, which) not in sited])
        ]
        meetings += site_meetings(divided, aims, bars, names, lambda which, x: self.over(which, x).axis(x))
        if self.ridge_x is not None:
            for which in (BOTTOM, TOP):
                point = np.array([self.ridge_x, 0.0, self.over(which, self.ridge_x).axis(self.ridge_x)])
                left = [bar for bar in bars[which] if bar.slope == 0][-1]
                right = next(bar for bar in bars[which] if bar.slope == 1)
                pair = (Meets(left.name, At.END), Meets(right.name, At.START))
                meetings.append(Meeting(JointKind.CHORD_RIDGE, pair, point))
        start = self.line_ends[0]
        origin = translation([start, 0.0, self.over(BOTTOM, start).axis(start)])
        kit = Kit(tuple(members), tuple(meetings), (f"truss/{self.span}", "truss", "shop"), origin)
        bottom = tuple(self.x(c) for c in self.topology.bottom)
        return Truss(
            kit,
            tuple(bars[TOP]),
            tuple(bars[BOTTOM]),
            tuple(self.x(c) for c in self.topology.top),
            bottom,
            tuple(self.over(BOTTOM, x).axis(x) for x in bottom),
            self.options.bottom_chord,
        )

    # Site splices

    def _cuts(self, aims: Sequence[WebAim], landed: Sequence[LandedWeb]) -> list[Cut]:
        """Where the truss is divided for the road."""
        longest = self.options.longest
        if isinstance(longest, str):
            return []
        toes = tuple(
            [footprint(aim, at, which) for aim, at in zip(aims, landed, strict=True)]
            for which in (BOTTOM, TOP)
        )
        nodes = tuple(
            [self.x(c) for c in coordinates] for coordinates in (self.topology.bottom, self.topology.top)
        )
        stretch = max(1 / face.run for faces in self.chords for face in faces)
        outline = Outline(
            [(web.bottom, web.top) for web in self.topology.webs],
            [web.kind == "diagonal" for web in self.topology.webs],
            (nodes[0], nodes[1]), (toes[0], toes[1]), self.ends, stretch, self.ridge_x, ((), self.shipping.busy),
        )  # fmt: skip
        found = cuts(outline, longest)
        if found is None:
            raise impossible(
                "frames.roof.longest", "no place for site splices that leave no longer parts of a truss",
                given=format_length(longest), allowed="a greater length, none, or more panels",
            )  # fmt: skip
        return found

    def _bars(self, which: int, divided: Sequence[Cut]) -> list[ChordBar]:
        """The bars of a chord."""
        places = [cut.x[which] for cut in divided]
        return chord_bars(self.chords[which], self.ends, places, CHORD_ROLES[which], self.span)

    def _chord_member(self, which: int, bar: ChordBar) -> Member:
        face = self.chords[which][bar.slope]
        back = self.shipping.splices.thickness
        return chord_member(bar, face, self.options, CHORD_ROLES[which], self.finish, back)

    def _web_member(
        self, aim: WebAim, at: LandedWeb, role: Role, name: str, laps: tuple[float, float]
    ) -> Member:
        """A web; where it is bolted on site it ends square, ``laps`` before the chord's face."""
        d = at.direction
        run = np.array([d[0], 0.0, d[1]])
        bar, place = stick(
            aim.section,
            self._landing(aim, at, BOTTOM) + run * laps[BOTTOM],
            self._landing(aim, at, TOP) - run * laps[TOP],
            (-d[1], 0.0, d[0]),
            start_planes=None if laps[BOTTOM] else self._end_planes(aim, BOTTOM),
            end_planes=None if laps[TOP] else self._end_planes(aim, TOP),
        )
        return Member(name, role, bar, place, self.options.grade, self.finish)

    def _landing(self, aim: WebAim, at: LandedWeb, which: int) -> Array:
        """Where the axis of a web ends.

        Faces of unequal slopes miss each other at a kink: there the post keeps clear of both.
        """
        x, z = (at.bottom, at.top)[which]
        if aim.at_kink[which]:
            levels = [face.face(x) for face in self.chords[which]]
            z = max(levels) if which == BOTTOM else min(levels)
        return np.array([x, 0.0, z])

    def _end_planes(self, aim: WebAim, which: int) -> Planes:
        """The chord face or, at a kink, both: a bird's mouth over a peak, a point into a hollow."""
        lengths = self.chords[which] if aim.at_kink[which] else [aim.faces[which]]
        normals = [(face.normal[0], 0.0, face.normal[1]) for face in lengths]
        peak = len(lengths) == 2 and (lengths[0].slope > lengths[1].slope) == (which == BOTTOM)
        return along(*normals, notched=peak)

    def _node(
        self,
        which: int,
        group: Sequence[int],
        aims: Sequence[WebAim],
        landed: Sequence[LandedWeb],
        bars: Sequence[ChordBar],
        web_names: Sequence[str],
    ) -> Meeting:
        """The joint of one node: the chord, and the end of each web that is welded there."""
        x = aims[group[0]].nodes[which]
        face = self.over(which, x)
        misses = [
            axes_miss(landed[i], landed[j], lambda v: self.over(which, v).axis(v))
            for i, j in itertools.pairwise(group)
        ]
        worst = max(misses, key=abs, default=0.0)
        end = At.START if which == BOTTOM else At.END
        pieces = (Meets(bar_over(bars, x).name, At.ALONG), *(Meets(web_names[i], end) for i in group))
        return Meeting(JointKind.NODE, pieces, np.array([x, 0.0, face.axis(x)]), worst)
