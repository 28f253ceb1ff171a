"""The packs of a truss of pairs of angles: in equal parts of the lengths that gussets and splices leave free."""

from __future__ import annotations

from collections.abc import Collection, Sequence
from itertools import pairwise
from math import ceil

import numpy as np

from shedbim.expand.angle_truss_lines import AngleLines
from shedbim.expand.joints.gusset_legs import Leg
from shedbim.expand.joints.packed_pair import PACK
from shedbim.expand.kits import Meeting
from shedbim.expand.pairs import Pair
from shedbim.expand.truss_chords import BOTTOM, TOP, ChordBar, bar_over
from shedbim.model.joints import At, JointKind

__all__ = ["packs"]

#: Air between a pack and a gusset, mm; packs in a web, at least: at its third points (common practice).
_BESIDE_PACK, _IN_WEB = 40.0, 2

_Pairs = Sequence[Pair]


def packs(
    lines: AngleLines,
    bars: tuple[Sequence[ChordBar], Sequence[ChordBar]],
    chords: tuple[_Pairs, _Pairs],
    webs: _Pairs,
    on_site: Collection[tuple[int, int]],
    splices: tuple[Sequence[tuple[float, float]], Sequence[tuple[float, float]]],
) -> list[Meeting]:
    """Give the packs of all pairs.

    Args:
        bars, chords: the bars of the bottom and of the top chord, and the pair of each.
        on_site: (web, chord) of the webs that are bolted there on site.
        splices: for each chord (low, high) x of the plates of its splices.
    """
    areas = (list(lines.areas(BOTTOM, on_site)), list(lines.areas(TOP, on_site)))
    most = lines.connections.truss_gussets.packs
    made = []
    for which in (BOTTOM, TOP):
        for slope, (first, last) in enumerate(lines.lengths[which]):
            leg = lines.chord_leg(which, slope, first)
            taken = [leg.covered(area) for node, area in areas[which] if slope in node.slopes]
            taken += [
                ((low - first) / float(leg.along[0]), (high - first) / float(leg.along[0]))
                for low, high in splices[which]
                if first < low < last
            ]
            for (_, low), (high, _) in pairwise(sorted(taken)):
                bar = bar_over(bars[which], float(leg.point((low + high) / 2, 0.0)[0]))
                made += _packs_in(chords[which][bars[which].index(bar)], leg, (low, high), 0, most)
    for i, pair in enumerate(webs):
        leg = lines.web_leg(i, BOTTOM, lines.begin[i, BOTTOM])
        at_low, at_high = (
            next(leg.covered(area) for node, area in areas[which] if i in node.webs)
            for which in (BOTTOM, TOP)
        )
        made += _packs_in(pair, leg, (at_low[1], at_high[0]), _IN_WEB, most)
    return made


def _packs_in(pair: Pair, leg: Leg, between: tuple[float, float], least: int, most: float) -> list[Meeting]:
    """Packs in equal parts of a free length of a pair, ``most`` mm at most; fewer where they would stand too close."""
    low, high = between
    free = high - low
    count = max(ceil(free / most - 1e-9) - 1, least)
    count = min(count, max(int(free / (PACK + _BESIDE_PACK)) - 1, 0))
    points = [leg.point(low + free * k / (count + 1), 0.0) for k in range(1, count + 1)]
    return [Meeting(JointKind.PACKED_PAIR, pair.meets(At.ALONG), np.array([x, 0.0, z])) for x, z in points]
