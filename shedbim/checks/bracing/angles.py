"""How steep the diagonals of the bracing are."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from shedbim.checks.finding import Hit
from shedbim.checks.subject import Subject
from shedbim.model.roles import Role

__all__ = ["angles"]


def angles(subject: Subject) -> Iterator[Hit]:
    """Give the diagonals that are too flat or too steep, measured from the direction of the struts."""
    low, low_source = subject.criteria.limit("brace_angle_least")
    high, high_source = subject.criteria.limit("brace_angle_greatest")
    for role, field in ((Role.ROOF_BRACE, "bracing.roof.panels"), (Role.WALL_BRACE, "bracing.walls.tiers")):
        pieces = subject.having(role)
        along = np.diff(subject.axes[pieces], axis=1)[:, 0]
        rise = np.arctan2(np.hypot(along[:, 0], along[:, 2]), np.abs(along[:, 1]))
        for piece, angle in zip(pieces.tolist(), rise.tolist(), strict=True):
            if low <= angle <= high:
                continue
            flat = angle < low
            yield Hit(
                "brace-flat" if flat else "brace-steep",
                (piece,),
                subject.point(piece),
                "A diagonal lies at {value} to the struts (at least {limit}): it takes little across the bay, and its "
                "joints grow long."
                if flat
                else "A diagonal lies at {value} to the struts (at most {limit}): it takes little along the building, "
                "and its force grows.",
                f"Use {'fewer and larger' if flat else 'more and smaller'} panels ({field}), or another bay "
                "(bracing.bays).",
                angle,
                low if flat else high,
                "deg",
                low_source if flat else high_source,
                about=role.word,
            )
