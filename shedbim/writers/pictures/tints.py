"""The colour of each piece in a picture: that of its role, loud where highlighted, pale where beside the point."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from shedbim.model.shed import Shed
from shedbim.writers.palette import PALETTE

__all__ = ["HIGHLIGHT", "Emphasis", "shades", "tints"]

Floats = NDArray[np.float64]

#: Highlighted pieces: a red that no role has.
HIGHLIGHT = (232, 38, 52)
#: What is pale keeps this share of its colour and of its edges; the rest is white.
PALE = 0.30
#: Where the light stands seen from the eye: over the left shoulder (right, down, away).
_LIGHT = np.array([-0.40, -0.62, -0.68]) / np.linalg.norm([-0.40, -0.62, -0.68])
_AMBIENT = 0.58


class Emphasis:
    """Which pieces of a shed stand out in a picture.

    Args:
        shed: the building.
        highlight: indices of the pieces shown in a loud colour; all others go pale when there are any.
        named: indices of the pieces that keep their colour while all others go pale, used when nothing is
            highlighted; None for all.
    """

    def __init__(
        self, shed: Shed, highlight: NDArray[np.int64], named: NDArray[np.int64] | None = None
    ) -> None:
        self.loud = np.zeros(len(shed.pieces), bool)
        self.loud[highlight] = True
        self.pale = np.zeros(len(shed.pieces), bool)
        if len(highlight) or named is not None:
            self.pale[:] = True
            self.pale[highlight if len(highlight) else named] = False

    def strength(self, pieces: NDArray[np.int64]) -> Floats:
        """How strong edges (n,) of pieces (n,) are, 0 to 1."""
        return np.where(self.pale[pieces], PALE, 1.0)


def tints(shed: Shed, emphasis: Emphasis) -> Floats:
    """Give the colour (n, 3) of each piece of a shed, 0 to 255, before the light falls on it."""
    by_part = np.array([PALETTE[part.role] for part in shed.parts], float).reshape(-1, 3)
    colours = by_part[shed.pieces.part]
    colours[emphasis.loud] = HIGHLIGHT
    colours[emphasis.pale] = 255 - (255 - colours[emphasis.pale]) * PALE
    return colours


def shades(colours: Floats, normals: Floats) -> NDArray[np.uint32]:
    """Give the colours 0xRRGGBB (n, g) of faces by colour (n, 3) and normals (n, g, 3) seen from the eye."""
    light = _AMBIENT + (1 - _AMBIENT) * np.clip(normals @ _LIGHT, 0.0, 1.0)
    red, green, blue = (np.rint(light * colours[:, None, i]).astype(np.uint32) for i in range(3))
    packed: NDArray[np.uint32] = (red << np.uint32(16)) | (green << np.uint32(8)) | blue
    return packed
