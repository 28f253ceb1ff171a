"""Each truss as pin-jointed bars in its plane: whether it keeps its shape, and which purlins miss its nodes."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.checks.finding import Hit
from shedbim.checks.stability.holds import CHORDS, NODES, STIFF, WEBS
from shedbim.checks.stability.plane import Figure, figure_of, weakest
from shedbim.checks.stability.skeleton import Skeleton, among, lots
from shedbim.checks.subject import Subject
from shedbim.model.joints import JointKind
from shedbim.model.roles import Role

__all__ = ["Truss", "purlins_between_nodes", "truss_mechanisms", "trusses"]

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]

#: A chord that turns by more than this between two pieces has a node there, rad.
_KINK = 1e-3


@dataclass(frozen=True, eq=False)
class Truss:
    """One truss.

    Attributes:
        pieces: its chords and webs.
        nodes: (j,) its nodes in the skeleton: where webs meet a chord, and where a chord kinks.
        bars: (b, 2) pairs of numbers into ``nodes``.
    """

    pieces: Ints
    nodes: Ints
    bars: Ints


def trusses(subject: Subject, bars: Skeleton) -> Iterator[Truss]:
    """Give the trusses: chords and webs that their own joints hold together."""
    inside = among(subject, CHORDS | WEBS)[bars.piece]
    rows = bars.rows_of(NODES | STIFF)
    owner = bars.bar[rows[:, 1]]
    rows, owner = rows[inside[owner]], owner[inside[owner]]
    order = np.argsort(rows[:, 0], kind="stable")
    same = np.flatnonzero(np.diff(rows[order, 0]) == 0)
    lot = lots(len(bars.piece), np.stack([owner[order[same]], owner[order[same + 1]]], axis=1))
    web = among(subject, WEBS)[bars.piece]
    bottom = among(subject, {Role.BOTTOM_CHORD})[bars.piece]
    slopes = _slopes(subject, bars)
    lot_of_spot = lot[bars.bar]
    by_lot = np.argsort(lot_of_spot, kind="stable")
    starts = np.searchsorted(lot_of_spot[by_lot], np.arange(int(lot.max(initial=-1)) + 2))
    for each in np.unique(lot[inside & web]).tolist():
        spots = by_lot[starts[each] : starts[each + 1]]
        of_web, low = web[bars.bar[spots]], bottom[bars.bar[spots]]
        yield _truss(bars, spots[of_web], (spots[low], spots[~of_web & ~low]), slopes)


def _slopes(subject: Subject, bars: Skeleton) -> Floats:
    """The slope of each bar (b,), rad; an upright one has none."""
    ends = subject.axes[bars.piece][:, :, [0, 2]]
    run = ends[:, 1] - ends[:, 0]
    leans = np.abs(run[:, 0]) > 1.0
    return np.asarray(np.arctan(run[:, 1] / np.where(leans, run[:, 0], np.inf)))


def _kinked(bars: Skeleton, chords: Ints, slopes: Floats) -> Ints:
    """The nodes of one chord's spots where pieces of it meet at an angle."""
    order = np.lexsort((slopes[bars.bar[chords]], bars.node[chords]))
    node, slope = bars.node[chords[order]], slopes[bars.bar[chords[order]]]
    places, first = np.unique(node, return_index=True)
    last = np.append(first[1:], len(node)) - 1
    return np.asarray(places[slope[last] - slope[first] > _KINK])


def _truss(bars: Skeleton, webs: Ints, chords: tuple[Ints, Ints], slopes: Floats) -> Truss:
    """The truss of the spots of webs and of each chord."""
    bent = [_kinked(bars, chord, slopes) for chord in chords]
    nodes = np.unique(np.concatenate([bars.node[webs], *bent]))
    pairs = [_chord_bars(bars, chord, nodes) for chord in chords]
    same = np.flatnonzero(bars.bar[webs[1:]] == bars.bar[webs[:-1]])
    pairs.append(np.stack([bars.node[webs[same]], bars.node[webs[same + 1]]], axis=1))
    ends = np.sort(np.concatenate(pairs), axis=1)
    ends = np.unique(ends[ends[:, 0] != ends[:, 1]], axis=0)
    used = np.unique(ends)
    pieces = bars.piece[np.unique(bars.bar[np.concatenate([webs, *chords])])]
    return Truss(pieces, used, np.searchsorted(used, ends))


def _chord_bars(bars: Skeleton, chords: Ints, nodes: Ints) -> Ints:
    """Pairs of neighbouring nodes along each chord (b, 2); pieces that share a node are one chord."""
    pieces, bar = np.unique(bars.bar[chords], return_inverse=True)
    places, place = np.unique(bars.node[chords], return_inverse=True)
    lot = lots(len(pieces) + len(places), np.stack([bar, len(pieces) + place], axis=1))[bar]
    found = []
    for each in np.unique(lot).tolist():
        along = np.unique(bars.node[chords[lot == each]])
        along = along[np.isin(along, nodes)]
        along = along[np.argsort(bars.points[along, 0], kind="stable")]
        found.append(np.stack([along[:-1], along[1:]], axis=1))
    return np.concatenate(found) if found else np.zeros((0, 2), np.int64)


def truss_mechanisms(subject: Subject, bars: Skeleton, found: list[Truss]) -> Iterator[Hit]:
    """Give the trusses that do not keep their shape when all their joints are pins."""
    known: dict[bytes, Figure] = {}
    for truss in found:
        points = bars.points[truss.nodes][:, [0, 2]]
        alike = (points - points[0]).round(1).tobytes() + truss.bars.tobytes()
        if alike not in known:
            known[alike] = figure_of(points, truss.bars)
        if known[alike].mechanisms:
            yield _hit(subject, bars, truss, known[alike])


def _hit(subject: Subject, bars: Skeleton, truss: Truss, figure: Figure) -> Hit:
    first, second = weakest(bars.points[truss.nodes][:, [0, 2]], figure)
    here = truss.nodes[[first, second]]
    near = np.unique(bars.piece[bars.bar[np.isin(bars.node, here)]])
    pieces = near[np.isin(near, truss.pieces)]
    x, y, z = bars.points[here].mean(axis=0).tolist()
    m = figure.mechanisms
    chord = truss.pieces[among(subject, CHORDS)[truss.pieces]]
    return Hit(
        "truss-mechanism",
        tuple(pieces.tolist()),
        (x, y, z),
        f"With pins at its nodes the truss changes its shape freely in {'one way' if m == 1 else f'{m} ways'}: "
        f"{figure.bars} bars join {figure.nodes} nodes, with {figure.self_stresses} states of self-stress.",
        "Choose a web pattern with a diagonal in every panel (frames.roof.pattern, frames.roof.panels); where a web of "
        "the pattern is missing, report it as a fault of the program.",
        about=f"truss {subject.about(tuple(chord.tolist())).split(' + ')[0]}",
    )


def purlins_between_nodes(subject: Subject, bars: Skeleton, found: list[Truss]) -> Iterator[Hit]:
    """Give the purlins that stand on a top chord away from its nodes: one of each place across the building."""
    limit, source = subject.criteria.limit("purlin_off_node")
    rows = bars.rows_of({JointKind.PURLIN_CLEAT})
    roles = subject.role[bars.piece[bars.bar[rows[:, 1]]]]
    chord_rows, purlin_rows = rows[roles == Role.TOP_CHORD], rows[roles == Role.PURLIN]
    purlin_of = dict(
        zip(purlin_rows[::-1, 0].tolist(), bars.piece[bars.bar[purlin_rows[::-1, 1]]].tolist(), strict=True)
    )
    by_piece: dict[int, list[tuple[int, int]]] = {}
    for joint, spot, _ in chord_rows.tolist():
        by_piece.setdefault(int(bars.piece[bars.bar[spot]]), []).append((joint, int(bars.node[spot])))
    seen: set[tuple[int, int]] = set()
    for truss in found:
        nodes = bars.points[truss.nodes]
        for piece in truss.pieces.tolist():
            for joint, node in by_piece.get(piece, ()):
                place = bars.points[node]
                at = int(place[0].round(-1)), int(place[2].round(-1))
                off = float(np.linalg.norm(nodes - place, axis=1).min())
                if off > limit and at not in seen and joint in purlin_of:
                    seen.add(at)
                    yield _off_node(subject, (piece, purlin_of[joint]), place, off, limit, source)


def _off_node(
    subject: Subject, pieces: tuple[int, int], place: Floats, off: float, limit: float, source: str
) -> Hit:
    x, y, z = place.tolist()
    return Hit(
        "purlin-off-node",
        pieces,
        (x, y, z),
        "Purlins stand on the top chord up to {value} from the nearest node (at most {limit} counts as on it): the "
        "chord is to be designed for bending between its nodes too.",
        "Set the purlins out by the nodes of the trusses (purlins.set_out: nodes).",
        off,
        limit,
        "mm",
        source,
        about="top chord",
    )
