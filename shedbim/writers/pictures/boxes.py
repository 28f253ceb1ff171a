"""Bounding boxes of pieces in building axes, mm."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from shedbim.model.shed import Shed
from shedbim.writers.pictures.projection import box_corners

__all__ = ["piece_boxes", "piece_corners"]

Floats = NDArray[np.float64]


def piece_corners(shed: Shed, pieces: NDArray[np.int64]) -> Floats:
    """Give the corners (n, 8, 3) of the box round each piece that runs along the piece's own axes."""
    local = np.empty((len(shed.parts), 8, 3))
    for index, part in enumerate(shed.parts):
        local[index] = box_corners(*part.body.box)
    motion = shed.pieces.placement[pieces]
    corners: Floats = (
        local[shed.pieces.part[pieces]] @ np.swapaxes(motion[:, :, :3], 1, 2) + motion[:, None, :, 3]
    )
    return corners


def piece_boxes(shed: Shed, pieces: NDArray[np.int64]) -> tuple[Floats, Floats]:
    """Give the least and the greatest corner (n, 3) of the upright box round each piece."""
    corners = piece_corners(shed, pieces)
    return corners.min(axis=1), corners.max(axis=1)
