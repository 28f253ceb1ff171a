"""Whether bottom chords are held sideways often enough, by ties, stays, posts or columns."""

from __future__ import annotations

from collections.abc import Iterator

from shedbim.checks.bracing.held import stretches
from shedbim.checks.finding import Hit
from shedbim.checks.subject import Subject
from shedbim.model.joints import JointKind
from shedbim.model.roles import Role

__all__ = ["CHORD_HOLDS", "chords"]

#: Joints that hold a bottom chord sideways.
CHORD_HOLDS = (
    JointKind.CHORD_COLUMN,
    JointKind.ANGLE_COLUMN,
    JointKind.TIE_END,
    JointKind.FLANGE_STAY,
    JointKind.POST_HEAD,
)


def chords(subject: Subject) -> Iterator[Hit]:
    """Give the bottom chords with too long a stretch that nothing holds sideways when wind lifts the roof."""
    limit, source = subject.criteria.limit("chord_restraint_spacing")
    for stretch in stretches(subject, [Role.BOTTOM_CHORD], CHORD_HOLDS):
        if stretch.length > limit:
            yield Hit(
                "chord-unrestrained",
                (stretch.piece, *(piece for piece in stretch.pieces if piece != stretch.piece)),
                stretch.point,
                "The bottom chord is not held sideways over {value} (at most {limit}): under wind uplift it is in "
                "compression there.",
                "Set the ties closer: bracing.ties.spacing.",
                stretch.length,
                limit,
                "m",
                source,
            )
