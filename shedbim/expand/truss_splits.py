"""Where a truss that is too long for the road is divided: chord splices off the nodes, one web joined on site.

A cut goes through one panel of each chord and across one web. That web leaves the shop with the piece that it is
welded to; at its other end it is bolted. Each chord is cut about a third of its panel away from the node that this
web stands at (common practice), clear of the webs, of the ridge, and of what else is fastened to it.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from itertools import pairwise
from math import ceil

from shedbim.expand.truss_chords import BOTTOM, TOP

__all__ = ["Cut", "Outline", "cuts"]

#: Shares of a panel, the first that is clear is taken.
_SHARES = (1 / 3, 0.4, 0.28, 0.46, 0.23, 0.52, 0.6, 0.31, 0.37, 0.43, 0.49, 0.55, 0.57, 0.63, 0.66, 0.7, 0.75)
#: From the middle of a splice to the toe of a web, and to the ridge: plates, bolts and a wrench, mm.
_FROM_TOES, _FROM_RIDGE = 160.0, 260.0
#: Pieces more than this many times as many as would do help nothing.
_MOST = 3


@dataclass(frozen=True)
class Outline:
    """What is known of a truss when it is divided; pairs are (bottom, top).

    Attributes:
        webs: (bottom, top) node of each web.
        diagonal: whether each web is one; posts are not cut across.
        nodes: x of the nodes of each chord, ascending.
        toes: for each chord (low, high) x of each web's footprint, or of each gusset.
        ends: x of the sawn ends.
        stretch: length of a chord over its plan length.
        ridge: its x, if no splice may be near it.
        busy: for each chord (low, high) x where the middle of a splice may not be: beside roof braces and their
            gussets, and so on.
        room: for each chord from the middle of a splice to the toe of a web.
        welded: the nodes of each chord where no web may be bolted on site.
    """

    webs: Sequence[tuple[int, int]]
    diagonal: Sequence[bool]
    nodes: tuple[Sequence[float], Sequence[float]]
    toes: tuple[Sequence[tuple[float, float]], Sequence[tuple[float, float]]]
    ends: tuple[float, float]
    stretch: float
    ridge: float | None
    busy: tuple[Sequence[tuple[float, float]], Sequence[tuple[float, float]]]
    room: tuple[float, float] = (_FROM_TOES, _FROM_TOES)
    welded: tuple[frozenset[int], frozenset[int]] = (frozenset(), frozenset())


@dataclass(frozen=True)
class Cut:
    """One cut: the web across it, the chord that this is bolted to, and x of the splices (bottom, top)."""

    web: int
    bolted: int
    x: tuple[float, float]

    @property
    def middle(self) -> float:
        """Half way between the splices."""
        return (self.x[0] + self.x[1]) / 2


def cuts(outline: Outline, longest: float) -> list[Cut] | None:
    """Give the cuts that leave no piece longer than ``longest`` mm, left to right, as few as will do.

    None where no cuts do.
    """
    first, last = outline.ends
    length = (last - first) * outline.stretch
    if length <= longest:
        return []
    candidates = list(_candidates(outline))
    least = ceil(length / longest)
    for count in range(least, _MOST * least + 1):
        chosen = []
        for k in range(1, count):
            target = first + (last - first) * k / count
            if candidates:
                chosen.append(min(candidates, key=lambda cut: (round(abs(cut.middle - target), 3), cut.web)))
        apart = all(max(a.x) < min(b.x) for a, b in pairwise(chosen))
        if chosen and apart and max(_lengths(outline, chosen)) <= longest:
            return chosen
    return None


def _lengths(outline: Outline, chosen: Sequence[Cut]) -> Iterator[float]:
    """Lengths of the pieces, the web that stands out of one of them included."""
    left = outline.ends[0]
    for cut in chosen:
        welded = 1 - cut.bolted
        foot = outline.nodes[welded][outline.webs[cut.web][welded]]
        tip = outline.nodes[cut.bolted][outline.webs[cut.web][cut.bolted]]
        goes_left = foot < tip
        yield (max(*cut.x, *((tip,) if goes_left else ())) - left) * outline.stretch
        left = min(*cut.x, *(() if goes_left else (tip,)))
    yield (outline.ends[1] - left) * outline.stretch


def _candidates(outline: Outline) -> Iterator[Cut]:
    """Every cut across a single web, a diagonal."""
    for number, (bottom, top) in enumerate(outline.webs):
        bolted = _bolted(outline, number)
        if bolted is None or not outline.diagonal[number]:
            continue
        for gaps in ((bottom, top - 1), (bottom - 1, top)):
            crossing = [w for w, (b, t) in enumerate(outline.webs) if (b <= gaps[0]) != (t <= gaps[1])]
            if crossing != [number]:
                continue
            places = []
            for chord, gap in enumerate(gaps):
                nodes = outline.nodes[chord]
                node = (bottom, top)[chord]
                if not 0 <= gap < len(nodes) - 1:
                    break
                other = gap + 1 if gap == node else gap
                place = _place(outline, chord, nodes[node], nodes[other])
                if place is None:
                    break
                places.append(place)
            if len(places) == 2:
                yield Cut(number, bolted, (places[BOTTOM], places[TOP]))


def _bolted(outline: Outline, number: int) -> int | None:
    """The chord that a web is bolted to: where fewer webs meet, else the bottom chord; None where it may be neither."""
    own = outline.webs[number]
    counts = {
        chord: sum(web[chord] == own[chord] for web in outline.webs)
        for chord in (BOTTOM, TOP)
        if own[chord] not in outline.welded[chord]
    }
    return min(counts, key=lambda chord: counts[chord], default=None)


def _place(outline: Outline, chord: int, node: float, other: float) -> float | None:
    """x of the splice of a chord between a node and another; None where there is no room."""
    room = outline.room[chord]
    clear = [
        x
        for x in (node + (other - node) * share for share in _SHARES)
        if all(x < low - room or x > high + room for low, high in outline.toes[chord])
        and (outline.ridge is None or abs(x - outline.ridge) > _FROM_RIDGE)
        and not any(low < x < high for low, high in outline.busy[chord])
    ]
    return next(iter(clear), None)
