"""Whether frames on pinned bases stand by themselves sideways, or lean on a girder along the building."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from shedbim.checks.bracing.braced import braced
from shedbim.checks.bracing.lines import lines_at
from shedbim.checks.finding import Hit
from shedbim.checks.subject import Subject
from shedbim.model.joints import JointKind
from shedbim.model.roles import Role

__all__ = ["sway"]

#: How a chord is joined to a column.
_CHORDS = (JointKind.CHORD_COLUMN, JointKind.ANGLE_COLUMN)


def sway(subject: Subject) -> Iterator[Hit]:
    """Give the frames with neither a fixed base nor a stiff corner where no girder in the roof carries them.

    A corner is stiff where a rafter is bolted to a column by an end plate, or where both chords of a truss join
    a column. Frames with gable posts are left out: their walls carry them, or are to be braced.
    """
    columns = subject.having(Role.COLUMN)
    line_of = lines_at(subject, subject.centres[columns][:, 1])
    posts = subject.having(Role.GABLE_POST)
    gables = set(lines_at(subject, subject.centres[posts][:, 1]).tolist())
    stiff = _stiff(subject)
    last = len(subject.shed.grid.y) - 1
    girder = {bay for _, bay in braced(subject).roofs}
    if girder.issuperset(range(last)):
        return
    for line in sorted(set(line_of.tolist()) - gables):
        standing = columns[line_of == line].tolist()
        if not stiff.intersection(standing):
            yield Hit(
                "no-longitudinal-girder",
                tuple(standing),
                subject.point(standing[0]),
                "The columns of this frame have pinned bases and no stiff corner, and no bracing runs along the whole "
                "roof to carry it to the gables: nothing in the model resists sideways forces.",
                "Fix the bases (frames.columns.base), or join both chords of the truss to the columns.",
                source="Steel Buildings in Europe, Single-Storey Part 5 (trusses), p. 2",
            )


def _stiff(subject: Subject) -> set[int]:
    """The columns with a fixed base or a stiff corner."""
    entries = subject.entries
    found: set[int] = set()
    both: list[set[int]] = []
    for kinds, partner in (
        ((JointKind.FIXED_BASE,), Role.COLUMN),
        ((JointKind.RAFTER_COLUMN,), Role.RAFTER),
        (_CHORDS, Role.TOP_CHORD),
        (_CHORDS, Role.BOTTOM_CHORD),
    ):
        of_kind = np.array([kind in kinds for kind in subject.joint_kinds], bool)
        with_partner = np.zeros(len(of_kind), bool)
        with_partner[entries.joint[np.isin(entries.piece, subject.having(partner))]] = True
        rows = (of_kind & with_partner)[entries.joint] & np.isin(entries.piece, subject.having(Role.COLUMN))
        columns = set(entries.piece[rows].tolist())
        if kinds == _CHORDS:
            both.append(columns)
        else:
            found |= columns
    return found | set.intersection(*both)
