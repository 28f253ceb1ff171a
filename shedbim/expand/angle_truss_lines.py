"""Where the axes of a truss of pairs of angles run: its nodes, where webs begin, and what gussets cover.

System lines are the axes of centroids, and meet at every node. Chords have their outstanding legs outside, on top of
the top chord and under the bottom chord. Diagonals have their heels on the upper side, posts towards the nearer
column; the ends of webs are square and stop clear of the chords' legs and of each other on the gussets.
"""

from __future__ import annotations

from collections.abc import Collection, Iterator, Sequence
from dataclasses import dataclass

import numpy as np
from manifold3d import CrossSection
from numpy.typing import NDArray

from shedbim.description.connections import Connections
from shedbim.description.roof_systems import AngleTrussRoof
from shedbim.expand.joints.angle_column import BEFORE_CHORD, web_room
from shedbim.expand.joints.angle_gusset import chord_patch, web_patch
from shedbim.expand.joints.gusset_legs import CLEAR, Leg, Web, starts
from shedbim.expand.truss_chords import BOTTOM, TOP, to_back, to_webs
from shedbim.expand.truss_layout import TrussLayout, has_end_posts
from shedbim.expand.web_ends import ChordFace
from shedbim.model.joints import At
from shedbim.roofs.slope import Slope
from shedbim.sections.section import Section

__all__ = ["AngleLines", "AngleNode", "on_axis"]

Array = NDArray[np.float64]
_SAME = 1e-6
#: From the ridge to the end of each length of chord that the gusset joins there, mm (common practice).
_RIDGE_GAP = 5.0


@dataclass(frozen=True, eq=False)
class AngleNode:
    """A node of a chord.

    Attributes:
        point: (2,) in x and z.
        webs: the webs there, left to right.
        slopes: the slope of the length of chord there, or both where they meet at the ridge.
        end: which end of the truss it is at, if any.
    """

    point: Array
    webs: list[int]
    slopes: list[int]
    end: At | None

    @property
    def x(self) -> float:
        """Where it is across the building, mm."""
        return float(self.point[0])


def on_axis(face: ChordFace, x: float) -> Array:
    """Give the point (2,) of a chord's axis at x."""
    return np.array([x, face.axis(x)])


class AngleLines(TrussLayout):
    """The lines of one truss.

    Attributes:
        ends: x of the faces of its end plates, mm.
        lengths: for each chord (from, to) x of its lengths, short of the end plates and of the ridge.
        nodes_of: the nodes of each chord, left to right.
        begin: where the axis of each web begins at each chord, by (web, chord).
    """

    options: AngleTrussRoof

    def __init__(
        self,
        options: AngleTrussRoof,
        slopes: Sequence[Slope],
        eaves: float,
        span: str,
        ends: tuple[float, float],
        connections: Connections,
    ) -> None:
        self.ends, self.connections = ends, connections
        inset = web_room(connections.chords)
        if has_end_posts(options.pattern):
            inset += to_back(options.post_section)
        super().__init__(options, slopes, eaves, span, (ends[0] + inset, ends[1] - inset))
        self.lengths = (self._lengths(BOTTOM), self._lengths(TOP))
        self.nodes_of = (self._nodes(BOTTOM), self._nodes(TOP))
        self.begin = self._begin()

    def section_of(self, which: int) -> Section:
        """One angle of a chord."""
        return self.options.bottom_chord if which == BOTTOM else self.options.top_chord

    def _lengths(self, which: int) -> list[tuple[float, float]]:
        first, last = self.ends[0] + BEFORE_CHORD, self.ends[1] - BEFORE_CHORD
        if len(self.chords[which]) == 1:
            return [(first, last)]
        ridge = self.chords[which][0].x_to
        return [(first, ridge - _RIDGE_GAP), (ridge + _RIDGE_GAP, last)]

    def chord_leg(self, which: int, slope: int, x: float, *, back: bool = False) -> Leg:
        """The leg of a length of chord from x on, or ``back`` from there."""
        section, face = self.section_of(which), self.chords[which][slope]
        run = np.array([1.0, face.slope]) * face.run
        return Leg(on_axis(face, x), -run if back else run, -face.normal, to_back(section), to_webs(section))

    def web_leg(self, web: int, which: int, point: Array) -> Leg:
        """A web's leg from a point of its axis, away from a chord."""
        here = self.topology.webs[web]
        bottom, top = self.nodes(here)
        a, b = on_axis(self.over(BOTTOM, bottom), bottom), on_axis(self.over(TOP, top), top)
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

    def areas(
        self, which: int, on_site: Collection[tuple[int, int]] = ()
    ) -> Iterator[tuple[AngleNode, CrossSection]]:
        """The gussets of a chord, about: the hull of what each must reach.

        Args:
            on_site: (web, chord) of the webs that are bolted there on site.
        """
        for node in self.nodes_of[which]:
            patches = []
            for slope in node.slopes:
                low, high = self.lengths[which][slope]
                ends = node.end is not None or len(node.slopes) == 2
                back = node.end == At.END or (node.end is None and slope == 0)
                x = (high if back else low) if ends else node.x
                leg = self.chord_leg(which, slope, x, back=ends and back)
                patches.append(chord_patch(leg, self.connections, ends=ends, before=BEFORE_CHORD))
            for i in node.webs:
                leg = self.web_leg(i, which, self.begin[i, which])
                section = self.section(self.topology.webs[i])
                patches.append(web_patch(leg, section, self.connections, on_site=(i, which) in on_site))
            yield node, CrossSection.batch_hull(patches)

    def _nodes(self, which: int) -> list[AngleNode]:
        """The nodes of a chord: at both columns, at a ridge, and wherever webs meet."""
        found = []
        groups = self.groups(which)
        at = {round(self.nodes(self.topology.webs[group[0]])[which], 6): group for group in groups}
        first, last = (round(x, 6) for x in self.line_ends)
        lengths = self.lengths[which]
        places = {first, last, *at}
        if len(lengths) == 2 and self.ridge_x is not None:
            places.add(round(self.ridge_x, 6))
        for x in sorted(places):
            end = At.START if x == first else At.END if x == last else None
            ridge = len(lengths) == 2 and self.ridge_x is not None and abs(x - self.ridge_x) < 1e-3
            over = [0, 1] if ridge else [0 if len(lengths) == 1 or x < lengths[1][0] else 1]
            found.append(AngleNode(on_axis(self.over(which, x), x), at.get(x, []), over, end))
        return found

    def _begin(self) -> dict[tuple[int, int], Array]:
        """Where the axis of each web begins at each chord, by (web, chord)."""
        begin = {}
        for which in (BOTTOM, TOP):
            for node in self.nodes_of[which]:
                webs = [
                    Web(self.web_leg(i, which, node.point), self.topology.webs[i].kind == "post")
                    for i in node.webs
                ]
                limits = [self._limits(which, node, web) for web in webs]
                found = starts(node.point, webs, limits)
                for i, web, far in zip(node.webs, webs, found, strict=True):
                    begin[i, which] = web.leg.point(far, 0.0)
        return begin

    def _limits(self, which: int, node: AngleNode, web: Web) -> list[tuple[Array, Array]]:
        """The lines that a web stays behind at a node: the toes of the chord, and the bolts of an end plate.

        Over a peak of the bottom chord the far slope, drawn on, would push a diagonal away for nothing.
        """
        found = []
        slopes = node.slopes
        if which == BOTTOM and len(slopes) == 2 and not web.is_post:
            slopes = [1] if web.leg.along[0] > 0 else [0]
        for slope in slopes:
            face = self.chords[which][slope]
            found.append((node.point + face.normal * (to_webs(self.section_of(which)) + CLEAR), face.normal))
        if node.end is not None:
            room = web_room(self.connections.chords)
            wall, out = self.ends[node.end], 1.0 if node.end == At.START else -1.0
            found.append((np.array([wall + out * room, 0.0]), np.array([out, 0.0])))
        return found
