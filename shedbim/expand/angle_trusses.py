"""One truss of pairs of angles over one span: its members, and the joints between them.

See ``angle_truss_lines`` for where they run, ``angle_truss_cuts`` for where it is divided for the road.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from shedbim.description.connections import Connections
from shedbim.description.roof_systems import AngleTrussRoof
from shedbim.expand.angle_truss_cuts import Busy, divided
from shedbim.expand.angle_truss_lines import AngleLines, AngleNode, on_axis
from shedbim.expand.angle_truss_packs import packs
from shedbim.expand.impossible import impossible
from shedbim.expand.joints.angle_splice import END_GAP, cover_splice
from shedbim.expand.kits import Kit, Meeting, Meets
from shedbim.expand.pairs import Pair, pair_of, size_of_pair
from shedbim.expand.sticks import along
from shedbim.expand.truss_chords import BOTTOM, CHORD_ROLES, TOP, ChordBar, bar_over, chord_bars
from shedbim.expand.trusses import Truss
from shedbim.geometry.placements import translation
from shedbim.model.joints import At, JointKind
from shedbim.roofs.slope import Slope

__all__ = ["Between", "angle_truss"]

Array = NDArray[np.float64]
_ACROSS = (1.0, 0.0, 0.0)


@dataclass(frozen=True)
class Between:
    """What a truss stands between: the faces of its end plates, x in mm, and the names of the columns."""

    faces: tuple[float, float]
    columns: tuple[str, str]


def angle_truss(
    options: AngleTrussRoof,
    slopes: Sequence[Slope],
    eaves: float,
    span: str,
    between: Between,
    finish: str,
    connections: Connections,
    busy: Busy | None = None,
) -> Truss:
    """Give the truss under the slopes of one span, with its joints to the columns.

    Args:
        eaves: the level of the underside where the slopes' own z is 0, mm.
        busy: what splices keep off; None for a truss that is not divided, however long.

    Raises:
        DescriptionError: when webs find no room between the chords, or splices none along them.
    """
    lines = AngleLines(options, slopes, eaves, span, between.faces, connections)
    return _Maker(lines, between, finish, busy).truss()


class _Maker:
    """The steps of one truss; every step reads what the steps before it set."""

    def __init__(self, lines: AngleLines, between: Between, finish: str, busy: Busy | None) -> None:
        self.lines, self.between, self.finish = lines, between, finish
        self.options, self.gap = lines.options, lines.options.gusset
        self.cuts = [] if busy is None else divided(lines, busy)
        #: (web, chord) of the webs that are bolted there on site.
        self.on_site = {(cut.web, cut.bolted) for cut in self.cuts}
        self.bars = (self._bars(BOTTOM), self._bars(TOP))
        self.chord_pairs = (self._chord_pairs(BOTTOM), self._chord_pairs(TOP))
        self.web_pairs = self._web_pairs()

    def truss(self) -> Truss:
        """All bars, then their joints."""
        lines = self.lines
        pairs = [*self.chord_pairs[BOTTOM], *self.chord_pairs[TOP], *self.web_pairs]
        members = tuple(member for pair in pairs for member in (pair.near, pair.far))
        meetings = [self._joint(which, node) for which in (BOTTOM, TOP) for node in lines.nodes_of[which]]
        meetings += [self._splice(which, cut.x[which]) for cut in self.cuts for which in (BOTTOM, TOP)]
        plates = (self._plates(BOTTOM), self._plates(TOP))
        meetings += packs(lines, self.bars, self.chord_pairs, self.web_pairs, self.on_site, plates)
        start = lines.line_ends[0]
        origin = translation([start, 0.0, lines.over(BOTTOM, start).axis(start)])
        kit = Kit(members, tuple(meetings), (f"truss/{lines.span}", "truss", "shop"), origin)
        bottom = tuple(lines.x(c) for c in lines.topology.bottom)
        named = tuple(
            tuple(replace(bar, name=f"{bar.name}/near", far=f"{bar.name}/far") for bar in bars)
            for bars in self.bars
        )
        return Truss(
            kit,
            named[TOP],
            named[BOTTOM],
            tuple(lines.x(c) for c in lines.topology.top),
            bottom,
            tuple(lines.over(BOTTOM, x).axis(x) for x in bottom),
            size_of_pair(self.options.bottom_chord, self.gap),
        )

    # Members

    def _bars(self, which: int) -> list[ChordBar]:
        """The bars of a chord: under each slope, short of the end plates and of the ridge, between the splices."""
        lengths = self.lines.lengths[which]
        bars = chord_bars(
            self.lines.chords[which], (lengths[0][0], lengths[-1][1]), [cut.x[which] for cut in self.cuts],
            CHORD_ROLES[which], self.lines.span,
        )  # fmt: skip
        within = [lengths[bar.slope] for bar in bars]
        return [
            replace(bar, x_from=max(bar.x_from, low), x_to=min(bar.x_to, high))
            for bar, (low, high) in zip(bars, within, strict=True)
        ]

    def _chord_pairs(self, which: int) -> list[Pair]:
        """Ends are sawn upright, or square before the middle of a splice."""
        made = []
        upright = along(_ACROSS)
        for bar in self.bars[which]:
            face = self.lines.chords[which][bar.slope]
            back = END_GAP / 2 * face.run
            x0, x1 = bar.x_from + back * bar.spliced[0], bar.x_to - back * bar.spliced[1]
            planes = (None if bar.spliced[0] else upright, None if bar.spliced[1] else upright)
            made.append(
                pair_of(
                    bar.name, CHORD_ROLES[which], self.lines.section_of(which),
                    (on_axis(face, x0), on_axis(face, x1)), -face.normal, self.gap, planes,
                    self.options.grade, self.finish,
                )
            )  # fmt: skip
        return made

    def _web_pairs(self) -> list[Pair]:
        made = []
        lines = self.lines
        for i, (role, name) in enumerate(lines.web_names()):
            a, b = lines.begin[i, BOTTOM], lines.begin[i, TOP]
            leg = lines.web_leg(i, BOTTOM, a)
            if float((b - a) @ leg.along) < 4 * leg.width:
                raise impossible(
                    "frames.roof.depth", "no room for a web of the truss between its gussets",
                    given=name, allowed="more depth, fewer panels or slimmer angles",
                )  # fmt: skip
            section = lines.section(lines.topology.webs[i])
            made.append(
                pair_of(
                    name, role, section, (a, b), leg.heel, self.gap, (None, None),
                    self.options.grade, self.finish,
                )
            )  # fmt: skip
        return made

    # Joints

    def _joint(self, which: int, node: AngleNode) -> Meeting:
        """The joint at a node.

        The near chord is first, webs follow it, and the far angles of chords are last; but webs joined on site alone
        stand between the near chord and what else there is of chords, and welded ones follow.
        """
        pairs, bars = self.chord_pairs[which], self.bars[which]
        if node.end is not None:
            chords = [pairs[0 if node.end == At.START else -1].meets(node.end)]
        elif len(node.slopes) == 2:
            right = next(i for i, bar in enumerate(bars) if bar.slope == 1)
            chords = [pairs[right - 1].meets(At.END), pairs[right].meets(At.START)]
        else:
            chords = [pairs[bars.index(bar_over(bars, node.x))].meets(At.ALONG)]
        at = At.START if which == BOTTOM else At.END
        webs = {i: self.web_pairs[i].meets(at) for i in node.webs}
        on_site = [meets for i in node.webs if (i, which) in self.on_site for meets in webs[i]]
        welded = [meets for i in node.webs if (i, which) not in self.on_site for meets in webs[i]]
        near, far = [near for near, _ in chords], [far for _, far in chords]
        point = np.array([node.x, 0.0, node.point[1]])
        if node.end is not None:
            column = Meets(self.between.columns[node.end], At.ALONG)
            return Meeting(JointKind.ANGLE_COLUMN, (column, *near, *far, *welded), point)
        if on_site:
            pieces = (near[0], *on_site, *near[1:], *far, *welded)
            return Meeting(JointKind.ANGLE_SITE_NODE, pieces, point)
        return Meeting(JointKind.ANGLE_NODE, (near[0], *welded, *near[1:], *far), point)

    def _splice(self, which: int, x: float) -> Meeting:
        """The splice of a chord: the near angles, left and right, then the far ones."""
        bars, pairs = self.bars[which], self.chord_pairs[which]
        right = next(i for i, bar in enumerate(bars) if bar.x_from == x)
        left, follows = pairs[right - 1].meets(At.END), pairs[right].meets(At.START)
        face = self.lines.chords[which][bars[right].slope]
        pieces = (left[0], follows[0], left[1], follows[1])
        return Meeting(JointKind.ANGLE_SPLICE, pieces, np.array([x, 0.0, face.axis(x)]))

    def _plates(self, which: int) -> list[tuple[float, float]]:
        """(low, high) x of the plates of the splices of a chord."""
        if not self.cuts:
            return []
        own = self.lines.connections.splices
        half = cover_splice(self.lines.section_of(which), CHORD_ROLES[which], own).half_plate
        return [(cut.x[which] - half, cut.x[which] + half) for cut in self.cuts]
