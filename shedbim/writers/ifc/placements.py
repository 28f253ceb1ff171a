"""Placements as entities: equal ones are written once, however many pieces stand that way.

Origins are rounded to 0.01 mm and directions to ten digits; equal placements are those that agree then.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from shedbim.geometry.placements import Placements
from shedbim.geometry.rows import distinct_rows
from shedbim.writers.ifc.stepfile import SLOT, StepFile, numbered
from shedbim.writers.ifc.text import number, reals

__all__ = ["axis2placement", "direction", "point", "write_placements"]

_PER_MM = 100  # 0.01 mm
_PER_METRE = 1000 * _PER_MM
_PER_UNIT = 10**10
#: Added before rounding down: takes the boundary a little off the halves, where plain numbers lie.
_HALF = 0.501

Integers = NDArray[np.int64]


def point(step: StepFile, *coordinates: float) -> str:
    """Write (or find) a point at ``coordinates`` in mm, two or three; give its reference."""
    return step.share("IfcCartesianPoint", Coordinates=reals([value / 1000 for value in coordinates]))


def direction(step: StepFile, *ratios: float) -> str:
    """Write (or find) a unit vector of two or three ``ratios``; give its reference."""
    # Adding zero turns -0.0 into 0.0.
    return step.share("IfcDirection", DirectionRatios=reals([round(ratio, 10) + 0.0 for ratio in ratios]))


def axis2placement(
    step: StepFile, origin: Sequence[float], axis: Sequence[float], ref: Sequence[float]
) -> str:
    """Write (or find) a placement: ``origin`` (3,) mm, its z ``axis`` and its x ``ref`` as unit vectors."""
    return step.share(
        "IfcAxis2Placement3D",
        Location=point(step, *origin),
        Axis=direction(step, *axis),
        RefDirection=direction(step, *ref),
    )


def write_placements(step: StepFile, placements: Placements) -> tuple[int, Integers]:
    """Write the distinct ones among placements (n, 3, 4), mm.

    Returns:
        The number of the first one's entity, and for each placement how many entities after that its own is.
    """
    origins = _rounded(placements[:, :, 3], _PER_MM)
    turns = _rounded(placements[:, :, [2, 0]].swapaxes(1, 2).reshape(-1, 6), _PER_UNIT)
    turn_first, turn = distinct_rows(turns)
    pairs = (turns[turn_first] / _PER_UNIT).reshape(-1, 2, 3).tolist()
    axes, refs = ([direction(step, *pair[i]) for pair in pairs] for i in (0, 1))
    first, kind = distinct_rows(np.column_stack([origins, turn]))
    count = len(first)
    points = step.reserve(2 * count)
    start = points + count
    template = step.template("IfcCartesianPoint", Coordinates=f"({SLOT},{SLOT},{SLOT})")
    template += step.template("IfcAxis2Placement3D", "Axis", "RefDirection", Location=f"#{SLOT}")
    numbers = numbered(points, count)
    turned = turn[first].tolist()
    directions = ([axes[t] for t in turned], [refs[t] for t in turned])
    coordinates = [_texts(column) for column in origins[first].T]
    step.fill(template, numbers, *coordinates, numbered(start, count), numbers, *directions)
    return start, kind


def _rounded(values: NDArray[np.float64], scale: int) -> Integers:
    """Round to whole multiples of 1/scale."""
    return np.floor(values * scale + _HALF).astype(np.int64)


def _texts(column: Integers) -> list[str]:
    """Give the texts in metres of whole hundredths of a mm, each distinct one made once."""
    distinct, which = np.unique(column, return_inverse=True)
    texts = [number(value) for value in (distinct / _PER_METRE).tolist()]
    return [texts[i] for i in which.tolist()]
