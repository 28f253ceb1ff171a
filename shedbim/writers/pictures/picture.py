"""A picture as PNG bytes: flat-shaded pieces with dark edges on white, hidden surfaces removed."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from shedbim.writers.pictures.annotations import INK, PAPER
from shedbim.writers.pictures.composition import Composition
from shedbim.writers.pictures.overlay import draw_over
from shedbim.writers.pictures.png import png
from shedbim.writers.pictures.shot import FINER, Shot

__all__ = ["edge_strength", "png_picture"]

#: Edges are full dark on a section that is this many pixels of the canvas deep, and fade with smaller ones,
#: so that a building seen from afar does not go black.
_FULL_INK_PIXELS = 40.0
_FULL_INK, _LEAST_INK = 0.85, 0.10


def png_picture(composition: Composition) -> bytes:
    """Give the PNG file of a picture; writes on the canvas of its shot."""
    shot = composition.shot
    _draw_edges(shot)
    pixels = shot.canvas.pixels(shot.colours, PAPER, INK, FINER)
    draw_over(pixels, composition.annotations)
    return png(np.rint(pixels).astype(np.uint8))


def edge_strength(pixels_deep: float) -> float:
    """Give how dark edges are, 0 to 1, on a section so many pixels of the canvas deep."""
    return max(_FULL_INK * min(pixels_deep / _FULL_INK_PIXELS, 1.0), _LEAST_INK)


def _draw_edges(shot: Shot) -> None:
    """Darken the edges of which at least one side faces the eye."""
    for batch in shot.batches:
        if batch.slender(shot.projection):
            continue
        row, ends = batch.shown_edges(shot.projection)
        strength = edge_strength(batch.depth(shot.projection))
        by_piece: NDArray[np.float64] = strength * shot.emphasis.strength(batch.pieces)
        shot.canvas.ink(ends, by_piece[row], shot.bias)
