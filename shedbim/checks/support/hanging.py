"""Whether every piece hangs together with a base, and whether every bar is carried, bar by bar, down to one."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

from shedbim.checks.finding import Hit
from shedbim.checks.stability.holds import BASES, STIFF
from shedbim.checks.stability.places import a_or_an
from shedbim.checks.stability.skeleton import lots
from shedbim.checks.subject import Subject
from shedbim.checks.support.fastening import lots_of_columns
from shedbim.model.joints import JointKind

__all__ = ["hanging"]

Ints = NDArray[np.int64]
Bools = NDArray[np.bool_]

#: Joints through which none of their members carries another: a post's head slides, sag bars and stays line up.
_CARRY_NOTHING = frozenset(
    {JointKind.FREE, JointKind.POST_HEAD, JointKind.PACKED_PAIR, JointKind.FLANGE_STAY}
)
#: Joints whose members carry one another, whichever comes first.
_BOTH_WAYS = (STIFF - {JointKind.RAFTER_COLUMN}) | {
    JointKind.ANGLE_NODE,
    JointKind.ANGLE_SITE_NODE,
    JointKind.ANGLE_COLUMN,
    JointKind.NODE,
    JointKind.BRACE_CROSSING,
    JointKind.PURLIN_LAP,
}


def hanging(subject: Subject) -> Iterator[Hit]:
    """Give the pieces that nothing holds, and the bars whose load finds no way to a base.

    ``unsupported``: no chain of welds and bolts, whatever they join, leads from the piece to a base.
    ``no-load-path``: a chain there is, but it leads through pieces that do not carry the bar: bars that hang on it
    themselves, such as sag bars, or a head that slides.
    """
    held = _held(subject)
    for number in np.flatnonzero(~held):
        piece = int(number)
        yield Hit(
            "unsupported",
            (piece,),
            subject.point(piece),
            f"{a_or_an(subject.role[piece].word)} is held by nothing: no chain of bolts and welds joins it to a base.",
            "Look at what should carry it; where the description gives no reason for this, report it as a fault of the "
            "program.",
        )
    for number in np.flatnonzero(held & subject.is_member & ~_carried(subject)):
        piece = int(number)
        yield Hit(
            "no-load-path",
            (piece,),
            subject.point(piece),
            f"The load of {a_or_an(subject.role[piece].word).lower()} finds no way to a base: what it is joined to "
            "does not carry it.",
            "Look at what should carry it; where the description gives no reason for this, report it as a fault of the "
            "program.",
        )


def _held(subject: Subject) -> Bools:
    """Whether welds and bolts join each piece (n,) to a base."""
    count = len(subject.shed.pieces)
    ground = count
    pairs = []
    for run in subject.shed.joints:
        columns = np.hstack([run.pieces, run.fittings]) if run.fittings.size else run.pieces
        lot = lots_of_columns(subject.shed, run)
        for each in np.unique(lot).tolist():
            first, *others = np.flatnonzero(lot == each).tolist()
            pairs += [np.stack([columns[:, first], columns[:, other]], axis=1) for other in others]
        if run.kind in BASES:
            pairs.append(np.stack([run.pieces[:, 0], np.full(len(columns), ground)], axis=1))
    lot = lots(count + 1, np.concatenate(pairs) if pairs else np.zeros((0, 2), np.int64))
    return np.asarray(lot[:count] == lot[ground])


def _carried(subject: Subject) -> Bools:
    """Whether each piece (n,) is carried down to a base: by a base, or by a piece that is.

    The first member of a joint carries the others.
    """
    from scipy.sparse import coo_array  # noqa: PLC0415 - heavy, and only checks need it
    from scipy.sparse.csgraph import breadth_first_order  # noqa: PLC0415 - as above

    count = len(subject.shed.pieces)
    ground = count
    edges = []
    for run in subject.shed.joints:
        if run.kind in BASES:
            edges.append(np.stack([np.full(len(run.pieces), ground), run.pieces[:, 0]], axis=1))
        elif run.kind not in _CARRY_NOTHING:
            for column in range(1, run.pieces.shape[1]):
                edge = np.stack([run.pieces[:, 0], run.pieces[:, column]], axis=1)
                edges += [edge, edge[:, ::-1]] if run.kind in _BOTH_WAYS else [edge]
    found = np.zeros(count + 1, bool)
    if edges:
        carrier, other = np.concatenate(edges).T
        shape = (count + 1, count + 1)
        graph = coo_array((np.ones(len(carrier), np.int8), (carrier, other)), shape=shape).tocsr()
        found[breadth_first_order(graph, ground, return_predecessors=False)] = True
    return found[:count]
