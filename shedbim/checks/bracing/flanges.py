"""Whether the inner flanges of rafters and of columns at a haunch are held sideways."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from shedbim.checks.bracing.held import stretches
from shedbim.checks.finding import Hit
from shedbim.checks.subject import Subject
from shedbim.model.joints import JointKind
from shedbim.model.roles import Role
from shedbim.sections.profiles import IShape

__all__ = ["flanges"]

#: Joints that hold the lower flange of a rafter sideways.
_HOLDS = (
    JointKind.RAFTER_COLUMN,
    JointKind.APEX,
    JointKind.FLANGE_STAY,
    JointKind.POST_HEAD,
    JointKind.STRUT_END,
)


def flanges(subject: Subject) -> Iterator[Hit]:
    """Give the rafters held too seldom, and the haunched columns whose inner flange nothing holds."""
    limit, source = subject.criteria.limit("flange_restraint_spacing")
    for stretch in stretches(subject, [Role.RAFTER], _HOLDS):
        if stretch.length > limit:
            yield Hit(
                "flange-unrestrained",
                (stretch.piece,),
                stretch.point,
                "The lower flange of the rafter is not held sideways over {value} (at most {limit}): it is in "
                "compression at the haunch, and near the ridge under uplift.",
                "Stay more purlins: connections.stays.every.",
                stretch.length,
                limit,
                "m",
                source,
            )
    yield from _columns(subject)


def _columns(subject: Subject) -> Iterator[Hit]:
    """Columns of I section with a haunch and no stay."""
    entries = subject.entries
    kinds = np.array([kind.word for kind in subject.joint_kinds], object)
    haunched = entries.joint[np.isin(entries.piece, subject.having(Role.HAUNCH))]
    corner = np.isin(entries.joint, haunched) & np.isin(entries.piece, subject.having(Role.COLUMN))
    stayed = entries.piece[kinds[entries.joint] == JointKind.FLANGE_STAY.word] if len(kinds) else haunched[:0]
    pieces = np.setdiff1d(entries.piece[corner], stayed)
    i_shaped = np.array(
        [
            part.role is Role.COLUMN and isinstance(part.bar.section.profile, IShape)
            for part in subject.shed.parts
        ],
        bool,
    )
    for piece in pieces[i_shaped[subject.shed.pieces.part[pieces]]].tolist():
        yield Hit(
            "column-flange-open",
            (piece,),
            subject.point(piece),
            "Nothing in the model holds the inner flange of this column sideways below the haunch, where it is in "
            "compression.",
            "Design the column for it, or hold the flange from a side rail at rails.spacing: the description has "
            "no stays for columns.",
            source="Steel Buildings in Europe, Single-Storey Part 2 (concept design), p. 23",
            about="columns",
        )
