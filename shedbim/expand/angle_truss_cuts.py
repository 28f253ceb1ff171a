"""Where a truss of pairs of angles is divided for the road: clear of gussets, purlins, roof braces and gable posts."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from math import cos

from shedbim.description.models import Description, SameGable
from shedbim.description.roof_systems import AngleTrussRoof
from shedbim.expand.angle_truss_lines import AngleLines
from shedbim.expand.frame import Frame
from shedbim.expand.impossible import impossible
from shedbim.expand.joints.angle_splice import cover_splice
from shedbim.expand.layout import Layout
from shedbim.expand.pairs import size_of_pair
from shedbim.expand.purlins import purlin_courses
from shedbim.expand.roof_places import brace_lengths, post_places
from shedbim.expand.truss_chords import BOTTOM, CHORD_ROLES, TOP
from shedbim.expand.truss_splits import Cut, Outline, cuts
from shedbim.roofs.slope import Slope
from shedbim.units import format_length

__all__ = ["Busy", "busy_places", "divided", "is_too_long"]

#: Between a gusset and the plate of a splice, and beside a cover: paint, and a wrench, mm (common practice).
_AIR = 20.0
#: From the side of a gable post to the end of what its head is fastened with, mm (value from memory).
_HEAD = 100.0


@dataclass(frozen=True)
class Busy:
    """(low, high) x of the lengths of the bottom and of the top chord that covers must keep off, mm."""

    bottom: Sequence[tuple[float, float]] = ()
    top: Sequence[tuple[float, float]] = ()

    def beside(
        self, half: tuple[float, float]
    ) -> tuple[list[tuple[float, float]], list[tuple[float, float]]]:
        """Where the middles of splices with these half lengths may not be."""
        low, high = (
            [(a - reach, b + reach) for a, b in each]
            for each, reach in zip((self.bottom, self.top), half, strict=True)
        )
        return low, high


def busy_places(description: Description, layout: Layout, roof: AngleTrussRoof, frame: Frame) -> Busy:
    """Give what stands on the chords of a frame: purlins and roof braces at the top, gable posts below the bottom."""
    gables = description.frames.gables
    reach = description.purlins.section.width + _AIR
    places = [float(c.point[0]) for _, courses in purlin_courses(description, layout, frame) for c in courses]
    top = [(x - reach, x + reach) for x in places]
    for pitched in layout.slopes:
        top += brace_lengths(description, layout, pitched, size_of_pair(roof.top_chord, roof.gusset))
    bottom = []
    if isinstance(gables, SameGable):
        aside = gables.posts.height / 2 + _HEAD
        bottom = [(x - aside, x + aside) for x in post_places(description, layout)]
    return Busy(bottom, top)


def is_too_long(roof: AngleTrussRoof, slopes: Sequence[Slope], ends: tuple[float, float]) -> bool:
    """Whether a truss under the slopes of a span must be divided; ``ends`` are x of its end plates, mm."""
    return not isinstance(roof.longest, str) and (ends[1] - ends[0]) * _stretch(slopes) > roof.longest


def _stretch(slopes: Sequence[Slope]) -> float:
    """Length of a chord over its plan length, the greatest there is."""
    return max(1 / cos(slope.pitch) for slope in slopes)


def divided(lines: AngleLines, busy: Busy) -> list[Cut]:
    """Give where a truss is cut, left to right; nothing where it is short enough.

    Raises:
        DescriptionError: when there is no place for splices, or no room for their bolts.
    """
    longest, own = lines.options.longest, lines.connections.splices
    if isinstance(longest, str) or not is_too_long(lines.options, lines.slopes, lines.ends):
        return []
    splices = [cover_splice(lines.section_of(w), CHORD_ROLES[w], own) for w in (BOTTOM, TOP)]
    webs = lines.topology.webs
    nodes = tuple(
        [lines.x(c) for c in coordinates] for coordinates in (lines.topology.bottom, lines.topology.top)
    )
    toes = tuple(_covered(lines, which) for which in (BOTTOM, TOP))
    plates, covers = ([s.half_plate for s in splices], [s.half_cover for s in splices])
    outline = Outline(
        [(web.bottom, web.top) for web in webs], [web.kind == "diagonal" for web in webs],
        (nodes[0], nodes[1]), (toes[0], toes[1]),
        lines.ends, _stretch(lines.slopes), None, busy.beside((covers[0], covers[1])),
        (plates[0] + _AIR, plates[1] + _AIR), (_at_columns(lines, BOTTOM), _at_columns(lines, TOP)),
    )  # fmt: skip
    found = cuts(outline, longest)
    if found is None:
        raise impossible(
            "frames.roof.longest", "no place for site splices that leave no longer parts of a truss",
            given=format_length(longest), allowed="a greater length, none, longer panels or fewer bolts in a splice",
        )  # fmt: skip
    return found


def _at_columns(lines: AngleLines, which: int) -> frozenset[int]:
    """The nodes of a chord at columns: their gussets are bolted on site already, webs are welded to them."""
    webs = lines.topology.webs
    at_ends = [webs[i] for node in lines.nodes_of[which] if node.end is not None for i in node.webs]
    return frozenset(web.bottom if which == BOTTOM else web.top for web in at_ends)


def _covered(lines: AngleLines, which: int) -> list[tuple[float, float]]:
    """(low, high) x of what each gusset covers of a chord, diagonals that may be bolted on site either way."""
    webs = lines.topology.webs
    bolted = {
        (i, which)
        for node in lines.nodes_of[which]
        for i in node.webs
        if node.end is None and webs[i].kind == "diagonal"
    }
    found = []
    for on_site in (set(), bolted):
        for node, area in lines.areas(which, on_site):
            for slope in node.slopes:
                leg = lines.chord_leg(which, slope, lines.lengths[which][slope][0])
                low, high = leg.covered(area)
                found.append((float(leg.point(low, 0.0)[0]), float(leg.point(high, 0.0)[0])))
    return found
