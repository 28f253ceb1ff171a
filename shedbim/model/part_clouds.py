"""Points that show how a part lies in an assembly, as far as its own symmetries let one tell."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from shedbim.geometry.placements import apply
from shedbim.model.bars import Bar
from shedbim.model.bolt_congruence import bolt_symmetries
from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.clouds import Cloud
from shedbim.model.feature_congruence import bar_symmetries
from shedbim.model.plate_congruence import plate_symmetries
from shedbim.model.plates import Plate
from shedbim.model.shapes import Shape

__all__ = ["PROBES", "part_cloud"]

#: Labels a part has in a cloud at most.
PROBES = 3

#: Where in the bounding box of a plate or a bolt group its probes are: off every axis and plane of symmetry.
_PLACES = np.array([[1.0, 0.7, 0.0], [0.15, 1.0, 1.0], [0.45, 0.05, 0.0]])


def part_cloud(shape: Shape, label: int) -> Cloud:
    """Give the cloud of a part, labelled from ``label``.

    Three points off every axis and plane of symmetry, or points on the axis about which it is free to turn, each
    with its images under the symmetries of the part.
    """
    if isinstance(shape, Bar):
        motions, is_free = bar_symmetries(shape)
    elif isinstance(shape, Plate):
        motions, is_free = plate_symmetries(shape)
    else:
        motions, is_free = bolt_symmetries(shape)
    probes = _on_axis(shape) if is_free else _off_axis(shape)
    images = apply(motions, probes)  # (g, p, 3)
    labels = label + np.repeat(np.arange(len(probes)), len(images))
    return Cloud(np.swapaxes(images, 0, 1).reshape(-1, 3), labels)


def _on_axis(shape: Shape) -> NDArray[np.float64]:
    """Probes of a part that is free to turn: where the axis enters it; of a bolt, which has a head, its tip too."""
    if isinstance(shape, Bar):
        return np.zeros((1, 3))
    low, high = np.array(shape.box)
    foot, head = (low + high) / 2, (low + high) / 2
    foot[2], head[2] = low[2], high[2]
    return np.array([foot, head]) if isinstance(shape, BoltGroup) else foot[None]


def _off_axis(shape: Shape) -> NDArray[np.float64]:
    """Three probes."""
    if not isinstance(shape, Bar):
        low, high = np.array(shape.box)
        result: NDArray[np.float64] = low + _PLACES * (high - low)
        return result
    low_y, low_z, high_y, high_z = shape.section.outline.bounds
    return np.array(
        [
            [0.0, high_y, 0.4 * high_z],
            [0.0, 0.3 * low_y, high_z],
            [0.45 * shape.length, high_y, 0.6 * low_z],
        ]
    )
