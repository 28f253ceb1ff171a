"""The snapshot of a topic: the place close by, its pieces loud and all others pale, as PNG bytes."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from shedbim.model.shed import Shed
from shedbim.writers.bcf.sight import Sight
from shedbim.writers.pictures.composition import compose
from shedbim.writers.pictures.picture import png_picture
from shedbim.writers.pictures.projection import View
from shedbim.writers.pictures.tints import Emphasis

__all__ = ["HEIGHT", "WIDTH", "snapshot"]

#: Pixels; the shape of the picture is that of the viewpoint's camera.
WIDTH, HEIGHT = 800, 600


def snapshot(shed: Shed, sight: Sight, pieces: tuple[int, ...], caption: str) -> bytes | None:
    """Give the picture of a place; None where nothing stands there.

    Args:
        shed: the building.
        sight: how the place is looked at; nothing but what is near it is drawn.
        pieces: indices of the pieces the finding speaks of.
        caption: written in the lower left corner.
    """
    if not len(sight.near):
        return None
    near = _alone(shed, sight.near)
    loud = np.flatnonzero(np.isin(sight.near, np.array(pieces, np.int64)))
    composition = compose(
        near,
        View(sight.direction, box=sight.box),
        width=WIDTH,
        height=HEIGHT,
        labels="marks",
        caption=caption,
        emphasis=Emphasis(near, loud),
    )
    return png_picture(composition)


def _alone(shed: Shed, rows: NDArray[np.int64]) -> Shed:
    """The shed with some pieces and their parts alone, so that a picture of it costs what it shows."""
    used, part = np.unique(shed.pieces.part[rows], return_inverse=True)
    pieces = replace(shed.pieces.only(rows), part=part.reshape(-1))
    return replace(shed, parts=tuple(shed.parts[row] for row in used.tolist()), pieces=pieces, joints=())
