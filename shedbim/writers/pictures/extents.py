"""How large shapes are in a picture: how deep, how finely their arcs are cut, and the line they shrink to; mm."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from shedbim.model.bars import Bar
from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.shapes import Shape
from shedbim.writers.described import head_size

__all__ = ["chord_error", "depth", "middle_line"]

#: Arcs become chords this far off, mm, and no further than this share of the radius, so that the chords of a
#: thin round bar, of a hole or of a washer do not turn so sharply that they are drawn as edges.
_CHORD_ERROR, _CHORD_SHARE = 1.0, 0.02


def depth(shape: Shape) -> float:
    """Give the size that edges fade by: the greater side of a section, the lesser of a plate, a bolt's head."""
    if isinstance(shape, Bar):
        return max(shape.section.width, shape.section.height)
    return head_size(shape) if isinstance(shape, BoltGroup) else shape.size[1]


def chord_error(shape: Shape) -> float:
    """Give how far the chords of arcs leave them at most, as coarse as a picture allows."""
    diameters = [] if isinstance(shape, BoltGroup) else [hole.diameter for hole in shape.holes]
    if isinstance(shape, Bar):
        diameters += [shape.section.width, shape.section.height]
    elif isinstance(shape, BoltGroup):
        diameters = [disc.size for disc in shape.fastener.stack]
    return min([_CHORD_ERROR, *(_CHORD_SHARE * diameter / 2 for diameter in diameters)])


def middle_line(shape: Shape) -> NDArray[np.float64]:
    """Give the line (2, 3) that a shape shrinks to: a bar's axis, else the middle of the box along its longest side."""
    if isinstance(shape, Bar):
        return np.array([[0.0, 0.0, 0.0], [shape.length, 0.0, 0.0]])
    low, high = np.array(shape.box)
    longest = int((high - low).argmax())
    ends = np.tile((low + high) / 2, (2, 1))
    ends[:, longest] = low[longest], high[longest]
    return ends
