"""The faces of pieces that are worth a colour of their own in a vector picture.

What is seen of a face as a sliver (the facets of a rounded corner from afar, a sheet edge-on) would make
thousands of specks; it takes the colour of the face of its piece that is seen most.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

__all__ = ["despeckled", "main_faces"]

Indices = NDArray[np.int64]

#: A face keeps its colour when it is seen this thick on average, pixels of the canvas.
_LEAST_THICK = 2.5


def main_faces(seen: Indices, owners: Indices) -> Indices:
    """Give the face that each face is coloured as, (f + 1,) int with none at the end.

    Args:
        seen: (height, width) int, the face seen at each pixel, ``len(owners)`` where none is.
        owners: (f,) int, the piece of each face.
    """
    faces = len(owners)
    row, column = np.nonzero(seen < faces)
    face = seen[row, column]
    count = np.bincount(face, minlength=faces)
    extent = np.zeros(faces)
    for place in (row, column):
        low, high = np.full(faces, seen.size), np.full(faces, -1)
        np.minimum.at(low, face, place)
        np.maximum.at(high, face, place)
        extent = np.hypot(extent, np.maximum(high - low + 1, 0))
    shown = np.flatnonzero(count)
    ranked = shown[np.lexsort((shown, -count[shown], owners[shown]))]
    pieces, first = np.unique(owners[ranked], return_index=True)
    most = np.full(int(owners.max(initial=-1)) + 1, -1)
    most[pieces] = ranked[first]
    thick = count >= _LEAST_THICK * extent
    return np.append(np.where(thick, np.arange(faces), most[owners]), faces)


def despeckled(image: Indices) -> Indices:
    """Give an image (height, width) in which no pixel stands between two equal ones, across or down."""
    clean = image.copy()
    for _ in range(2):
        for before, own, after in (
            (clean[:, :-2], clean[:, 1:-1], clean[:, 2:]),
            (clean[:-2], clean[1:-1], clean[2:]),
        ):
            lone = (before == after) & (own != before) & (own >= 0) & (before >= 0)
            own[lone] = before[lone]
    return clean
