"""Whether joints join: ends of bars in one, and everything in one fastened together."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from shedbim.checks.finding import Hit
from shedbim.checks.stability.holds import BASES
from shedbim.checks.stability.places import a_or_an
from shedbim.checks.subject import Subject
from shedbim.checks.support.fastening import lots_of_columns
from shedbim.model.joints import At, JointKind

__all__ = ["joints"]

#: Kinds of joints with one member.
_ALONE = BASES | {JointKind.COLUMN_CAP, JointKind.FREE}
_FAULT = "The description cannot cause this: report it as a fault of the program."


def joints(subject: Subject) -> Iterator[Hit]:
    """Give the ends of bars that are in no joint and not said to be free, and the joints that join nothing."""
    yield from _ends(subject)
    for run in subject.shed.joints:
        if run.kind is JointKind.FREE:
            continue
        alone = run.pieces.shape[1] == 1 and run.kind not in _ALONE
        apart = len(np.unique(lots_of_columns(subject.shed, run))) > 1
        if not alone and not apart:
            continue
        for pieces, point in zip(run.pieces.tolist(), run.points.tolist(), strict=True):
            x, y, z = point
            word = run.kind.word
            yield Hit(
                "lone-joint",
                tuple(pieces),
                (x, y, z),
                f"{a_or_an(word)} has one member alone: it joins it to nothing."
                if alone
                else f"What belongs to {a_or_an(word).lower()} is not all held together by its welds and bolts.",
                _FAULT,
            )


def _ends(subject: Subject) -> Iterator[Hit]:
    """Ends of members in no joint."""
    entries = subject.entries
    met = np.zeros((len(subject.shed.pieces), 2), bool)
    rows = entries.at <= At.END
    met[entries.piece[rows], entries.at[rows]] = True
    ends = subject.axes
    for piece, end in np.argwhere(~met & subject.is_member[:, None]).tolist():
        point = ends[piece, end]
        x, y, z = subject.point(piece) if np.isnan(point).any() else point.tolist()
        yield Hit(
            "end-in-no-joint",
            (piece,),
            (x, y, z),
            f"An end of {a_or_an(subject.role[piece].word).lower()} is in no joint and is not meant to be free.",
            _FAULT,
        )
