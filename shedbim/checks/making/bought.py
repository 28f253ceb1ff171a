"""Whether bars can be cut from the lengths that are bought."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from shedbim.checks.finding import Hit
from shedbim.checks.stability.places import a_or_an
from shedbim.checks.subject import Subject
from shedbim.model.bars import Bar
from shedbim.sections.profiles import FoldedChannel, Hollow, LippedC, LippedZ, Pipe

__all__ = ["COLD_FORMED", "bought"]

COLD_FORMED = (LippedC, LippedZ, FoldedChannel)


def bought(subject: Subject) -> Iterator[Hit]:
    """Give the bars that are longer than what is bought of their kind, and have no splice."""
    for number, part in enumerate(subject.shed.parts):
        if not isinstance(part.shape, Bar):
            continue
        profile = part.shape.section.profile
        name = "stock_length"
        if isinstance(profile, COLD_FORMED):
            name = "cold_formed_length"
        elif isinstance(profile, Hollow | Pipe):
            name = "hollow_stock_length"
        limit, source = subject.criteria.limit(name)
        if part.shape.length <= limit:
            continue
        for piece in np.flatnonzero(subject.shed.pieces.part == number).tolist():
            yield Hit(
                "bar-longer-than-stock",
                (piece,),
                subject.point(piece),
                f"{a_or_an(part.role.word)} of {part.shape.section.family} is {{value}} long in one piece; {{limit}} "
                "is the longest that is usually bought.",
                "Divide it (frames.roof.longest for trusses, shorter building.spans or building.bays), or order the "
                f"length and set checks.limits.{name}.",
                part.shape.length,
                limit,
                "m",
                source,
                about=part.role.word,
            )
