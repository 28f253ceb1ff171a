"""Shapes as compact JSON text, and back again: what a mark was issued for, in words that outlive a program."""

from __future__ import annotations

import json
from collections.abc import Callable
from typing import Any

from shedbim.fasteners.fastener import Disc, Fastener
from shedbim.model.bars import Bar
from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.end_cuts import EndCut
from shedbim.model.holes import Hole, Notch
from shedbim.model.plates import Plate
from shedbim.model.pressed_ends import Pressed
from shedbim.model.shapes import Shape
from shedbim.sections.catalogue import section

__all__ = ["shape_of", "shape_text"]

#: Decimals of lengths, mm, and of unit vectors and slopes: far below what makes two parts different.
_DECIMALS = 6


def shape_text(shape: Shape) -> str:
    """Give a shape as one line of JSON."""
    return json.dumps(_data(shape), separators=(",", ":"), ensure_ascii=True)


def shape_of(text: str) -> Shape:
    """Give the shape of a text.

    Raises:
        ValueError: when the text is none; UnknownSection when the catalogue has no such section.
    """
    try:
        data = json.loads(text)
        return _MADE[data[0]](*data[1:])
    except (KeyError, TypeError, IndexError) as fault:
        raise ValueError(f"no shape: {text[:60]}") from fault


def _data(shape: Shape) -> list[Any]:
    if isinstance(shape, Bar):
        ends = [[_rounded(end.slopes), end.notched] for end in (shape.start, shape.end)]
        pressed = [
            None if end is None else _rounded((end.flat, end.taper, end.axis)) for end in shape.pressed
        ]
        notches = [_rounded((n.outline, n.origin, n.u, n.v, n.depth)) for n in shape.notches]
        designation, length = shape.section.designation, _rounded(shape.length)
        return ["bar", designation, length, *ends, _drilled(shape.holes), notches, pressed]
    if isinstance(shape, Plate):
        corners = _rounded(shape.corners)
        return ["plate", corners, _rounded(shape.thickness), _drilled(shape.holes), _rounded(shape.bulges)]
    item = shape.fastener
    stack = [[disc.form, *_rounded((disc.size, disc.start, disc.end, disc.bore))] for disc in item.stack]
    sizes = _rounded((item.diameter, item.length))
    made = [item.kind, *sizes, item.grade, _rounded(item.grip), list(item.washers), item.nuts, stack]
    return ["bolts", made, _rounded(shape.points)]


def _drilled(holes: tuple[Hole, ...]) -> list[Any]:
    return [_rounded((h.centre, h.axis, h.diameter, h.thickness, h.slot, h.along)) for h in holes]


def _rounded(value: Any) -> Any:
    """Numbers rounded, tuples as lists; -0 as 0."""
    if isinstance(value, tuple):
        return [_rounded(each) for each in value]
    return round(float(value), _DECIMALS) + 0.0


def _tuples(value: Any) -> Any:
    """Lists as tuples."""
    return tuple(_tuples(each) for each in value) if isinstance(value, list) else value


def _bar(
    designation: str, length: float, start: Any, end: Any, holes: Any, notches: Any, pressed: Any
) -> Bar:
    first, last = (None if each is None else Pressed(*_tuples(each)) for each in pressed)
    return Bar(
        section(designation),
        length,
        EndCut(_tuples(start[0]), start[1]),
        EndCut(_tuples(end[0]), end[1]),
        tuple(Hole(*_tuples(each)) for each in holes),
        tuple(Notch(*_tuples(each)) for each in notches),
        (first, last),
    )


def _plate(corners: Any, thickness: float, holes: Any, bulges: Any) -> Plate:
    drilled = tuple(Hole(*_tuples(each)) for each in holes)
    return Plate(_tuples(corners), thickness, drilled, _tuples(bulges))


def _bolts(made: Any, points: Any) -> BoltGroup:
    kind, diameter, length, grade, grip, washers, nuts, stack = made
    discs = tuple(Disc(*each) for each in stack)
    item = Fastener(kind, diameter, length, grade, grip, _tuples(washers), nuts, discs)
    return BoltGroup(item, _tuples(points))


_MADE: dict[str, Callable[..., Shape]] = {"bar": _bar, "plate": _plate, "bolts": _bolts}
