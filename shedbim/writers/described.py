"""What a shape is in one line and in figures: the words that models, pictures and lists share."""

from __future__ import annotations

from math import sqrt

from shedbim.model.bars import Bar
from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.plates import Plate
from shedbim.model.shapes import Shape

__all__ = ["Figure", "described", "figures", "head_size", "kind_word"]

#: A number, some numbers, or a word.
Figure = float | int | str | list[float]

#: A hexagon over its corners as a share of its size across flats.
_OVER_CORNERS = 2 / sqrt(3)


def described(shape: Shape) -> str:
    """Give what a shape is in one line: ``IPE 300``, ``PL 20x300x400``, ``M20x60 8.8 x4``.

    A plate's thickness comes first, then the sides of the rectangle it is cut from, the shorter one first, mm.
    """
    if isinstance(shape, Bar):
        return shape.section.designation
    if isinstance(shape, BoltGroup):
        return f"{shape.fastener.designation} x{shape.count}"
    longer, shorter = shape.size
    return f"PL {_short(shape.thickness)}x{_short(shorter)}x{_short(longer)}"


def kind_word(shape: Shape) -> str:
    """Give what kind of shape it is: ``bar``, ``plate`` or ``bolts``."""
    return "bar" if isinstance(shape, Bar) else "plate" if isinstance(shape, Plate) else "bolts"


def figures(shape: Shape) -> dict[str, Figure]:
    """Give the figures of a shape by name, lengths in mm to a thousandth; holes only where there are any."""
    if isinstance(shape, BoltGroup):
        fastener = shape.fastener
        lengths = {"length_mm": _rounded(fastener.length)} if fastener.length else {}
        return {
            "designation": fastener.designation,
            "count": shape.count,
            "diameter_mm": _rounded(fastener.diameter),
            **lengths,
            "grip_mm": _rounded(fastener.grip),
            "nuts": fastener.nuts,
            "washers": sum(fastener.washers),
        }
    holes: dict[str, Figure] = {"holes": len(shape.holes)} if shape.holes else {}
    if isinstance(shape, Plate):
        size = [_rounded(side) for side in shape.size]
        return {"thickness_mm": _rounded(shape.thickness), "size_mm": size, **holes}
    return {"length_mm": _rounded(shape.length), **holes}


def head_size(group: BoltGroup) -> float:
    """Give how wide the widest disc of one fastener of a group is, corners included, mm."""
    return max(
        disc.size * (_OVER_CORNERS if disc.form == "hexagon" else 1.0) for disc in group.fastener.stack
    )


def _short(value: float) -> str:
    """A length to a tenth of a millimetre, without zeros behind the point."""
    return f"{round(value, 1):.10g}"


def _rounded(value: float) -> float:
    """A length to a thousandth of a millimetre."""
    return round(float(value), 3)
