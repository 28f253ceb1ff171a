"""Whether the building is longer or wider than is usually built without a movement joint."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from shedbim.checks.finding import Hit
from shedbim.checks.subject import Subject
from shedbim.model.roles import Role

__all__ = ["length"]


def length(subject: Subject) -> Iterator[Hit]:
    """Give the building that is too long, or too wide, for one unbroken length of steel."""
    columns = subject.having(Role.COLUMN)
    if not columns.size:
        return
    places = subject.centres[columns]
    for axis, name, across in (
        (1, "unbroken_length", "long"),
        (0, "unbroken_width", "wide"),
    ):
        limit, source = subject.criteria.limit(name)
        size = float(np.ptp(places[:, axis]))
        if size > limit:
            field = "building.bays" if axis == 1 else "building.spans"
            last = int(columns[places[:, axis].argmax()])
            yield Hit(
                "no-movement-joint",
                (last,),
                subject.point(last),
                f"The steel is {{value}} {across} without a movement joint; one is usually considered from {{limit}}.",
                f"Describe it as two buildings with a joint between them ({field}), or have the effects of temperature "
                f"worked out and set checks.limits.{name}.",
                size,
                limit,
                "m",
                source,
                about=across,
            )
