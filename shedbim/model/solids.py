"""Exact solids of parts, in the part's own frame, mm."""

from __future__ import annotations

from manifold3d import Manifold, OpType

from shedbim.model.bars import Bar
from shedbim.model.bodies import bar_body, drill, notch_body, prism
from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.plates import Plate
from shedbim.model.polygons import disc_polygons, plate_polygons
from shedbim.model.pressed_solids import pressed_body
from shedbim.model.shapes import Shape
from shedbim.sections.profiles import Pipe
from shedbim.tolerance import SOLID_CHORD_ERROR

__all__ = ["solid"]


def solid(shape: Shape, chord_error: float = SOLID_CHORD_ERROR) -> Manifold:
    """Give the solid of a part, its arcs cut into chords that leave them by ``chord_error`` mm at most."""
    if isinstance(shape, Bar):
        return _bar(shape, chord_error)
    if isinstance(shape, Plate):
        return prism(plate_polygons(shape, chord_error), 0.0, shape.thickness)
    return _bolts(shape, chord_error)


def _bar(bar: Bar, chord_error: float) -> Manifold:
    """The solid of a bar with its holes and notches."""
    first, last = bar.axis
    ends = ((first, bar.start), (last, bar.end))
    profile = bar.section.profile
    if isinstance(profile, Pipe) and bar.pressed != (None, None):
        body = pressed_body(profile, bar.length, ends, bar.pressed, chord_error)
    else:
        body = bar_body(bar.section.outline, bar.length, ends, chord_error)
    taken = [drill(bar.bored(hole), hole, chord_error) for hole in bar.holes]
    taken += [notch_body(notch) for notch in bar.notches]
    return Manifold.batch_boolean([body, *taken], OpType.Subtract) if taken else body


def _bolts(group: BoltGroup, chord_error: float) -> Manifold:
    """The solid of a bolt group: the prisms of each fastener as one."""
    discs = [prism(disc_polygons(disc, chord_error), disc.start, disc.end) for disc in group.fastener.stack]
    one = Manifold.batch_boolean(discs, OpType.Add)
    return Manifold.compose([one.translate((x, y, 0.0)) for x, y in group.points])
