"""The mesh of a shape as the view draws it: coarser than an exact one, what is round with few chords."""

from __future__ import annotations

from enum import IntEnum

from shedbim.model.bars import Bar
from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.shapes import Shape
from shedbim.model.shells import Shell, shell
from shedbim.sections.profiles import Pipe, Round
from shedbim.writers.coarse import coarse
from shedbim.writers.described import head_size

__all__ = ["Surface", "sizes", "surface_of", "view_shell"]

#: Arcs become chords this far off, mm: a rolled corner becomes two chords with an edge between them.
_CHORD_ERROR = 1.6
#: Round sections become ten-sided: this far off as a share of the radius, at most.
_ROUND_SHARE = 0.06
#: Shanks and washers become eight-sided: so far off as a share of a washer's radius.
_BOLT_SHARE = 0.08
#: Holes become twelve-sided: round enough for their chords not to be drawn as edges.
_HOLE_SHARE = 0.035
#: Plates gain their edges in the picture as a bar does that is this many times as deep as they are thick.
_PLATE_DEPTH = 3.0


class Surface(IntEnum):
    """Which lines of a mesh are edges: where it turns by 32 degrees; no chords along a bar; where it turns by 50."""

    PLAIN = 0
    ROUND_BAR = 1
    BOLTS = 2


def surface_of(shape: Shape) -> Surface:
    """Give how the edges of a shape's mesh are told from chords of what is round."""
    if isinstance(shape, BoltGroup):
        return Surface.BOLTS
    is_round = isinstance(shape, Bar) and isinstance(shape.section.profile, Pipe | Round)
    return Surface.ROUND_BAR if is_round else Surface.PLAIN


def view_shell(shape: Shape) -> Shell:
    """Give the closed surface of a shape, or of each prism of a bolt; the page finds the edges in it."""
    return shell(coarse(shape), min(_CHORD_ERROR, _finest(shape)))


def sizes(shape: Shape) -> tuple[float, float]:
    """Give how deep and how broad a shape is to the eye, mm: what its edges and all of it fade by from afar.

    Of a bar the lesser and the greater side of the section, of bolts one head.
    """
    if isinstance(shape, Bar):
        (_, low_y, low_z), (_, high_y, high_z) = shape.box
        return min(shape.section.width, shape.section.height), max(high_y - low_y, high_z - low_z)
    if isinstance(shape, BoltGroup):
        return head_size(shape), head_size(shape)
    shorter = shape.size[1]
    return min(_PLATE_DEPTH * shape.thickness, shorter), shorter


def _finest(shape: Shape) -> float:
    """How far chords leave the arcs of a shape at most, by what is round in it, mm."""
    if isinstance(shape, BoltGroup):
        return _BOLT_SHARE * max(disc.size for disc in shape.fastener.stack if disc.form == "round") / 2
    errors = [_HOLE_SHARE * hole.diameter / 2 for hole in shape.holes]
    if isinstance(shape, Bar) and surface_of(shape) is Surface.ROUND_BAR:
        errors.append(_ROUND_SHARE * shape.section.height / 2)
    return min(errors, default=_CHORD_ERROR)
