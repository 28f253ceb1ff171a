"""Solids of bars with ends pressed flat, in the bar's own frame, mm; see ``pressed_ends``."""

from __future__ import annotations

import numpy as np
from manifold3d import Manifold, OpType
from numpy.typing import NDArray

from shedbim.geometry.outlines import Outline
from shedbim.model.bodies import bar_body, drill
from shedbim.model.end_cuts import EndCut
from shedbim.model.holes import Hole
from shedbim.model.pressed_ends import Pressed, PressedEnds, bored, flat_corners, slit_width
from shedbim.sections.profiles import Pipe

__all__ = ["pressed_body", "pressed_ends"]

Array = NDArray[np.float64]


def pressed_body(
    pipe: Pipe,
    length: float,
    ends: tuple[tuple[float, EndCut], tuple[float, EndCut]],
    pressed: PressedEnds,
    chord_error: float,
) -> Manifold:
    """Give a bar with pressed ends, without holes and notches; arguments as of ``bodies.bar_body``."""
    begin, stop = _middle(length, pressed)
    (first, start), (last, end) = ends
    moved = ((first - begin, start), (last - begin, end))
    middle = bar_body(pipe.outline, stop - begin, moved, chord_error).translate((begin, 0.0, 0.0))
    return Manifold.batch_boolean([middle, *_undrilled(pipe, length, pressed, chord_error)], OpType.Add)


def pressed_ends(
    pipe: Pipe, length: float, pressed: PressedEnds, holes: tuple[Hole, ...], chord_error: float
) -> list[Manifold]:
    """Give the pressed ends of a bar alone, flat and taper, with their holes."""
    drills = [drill(None, hole, chord_error) for hole in holes if not bored(pipe, length, pressed, hole)]
    return [
        Manifold.batch_boolean([body, *drills], OpType.Subtract)
        for body in _undrilled(pipe, length, pressed, chord_error)
    ]


def _middle(length: float, pressed: PressedEnds) -> tuple[float, float]:
    """From where to where the tube is round, added up as the solid of the middle is: ends and middle meet exactly."""
    start, end = (0.0 if each is None else each.length for each in pressed)
    return start, (length - end - start) + start


def _undrilled(pipe: Pipe, length: float, pressed: PressedEnds, chord_error: float) -> list[Manifold]:
    stops = zip(pressed, (0.0, length), _middle(length, pressed), strict=True)
    return [_end(pipe, each, tip, ring, chord_error) for each, tip, ring in stops if each is not None]


def _end(pipe: Pipe, pressed: Pressed, tip: float, ring: float, chord_error: float) -> Manifold:
    """One end from its tip to the ring: three hulls, put together at the very points they share."""
    away = 1.0 if ring > tip else -1.0
    outer, inner = Outline(pipe.outline.outer, pipe.outline.holes).polygons(chord_error)
    part = tip + away * pressed.flat
    corners = flat_corners(pipe, pressed)
    half = slit_width(pipe) / 2 * np.array(pressed.across[1:])
    flat = Manifold.hull_points(np.vstack([_at(tip, corners), _at(part, corners)]).tolist())
    taper = Manifold.hull_points(np.vstack([_at(part, corners), _at(ring, outer)]).tolist())
    bore = Manifold.hull_points(np.vstack([_at(part, np.array([half, -half])), _at(ring, inner)]).tolist())
    return flat + (taper - bore)


def _at(x: float, points: Array) -> Array:
    """Points (n, 2) of a section at x: (n, 3)."""
    return np.column_stack([np.full(len(points), x), points])
