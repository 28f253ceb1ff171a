"""Shapes as simple as a picture allows: bolts of few prisms without bores, and no hole too small to be seen."""

from __future__ import annotations

from dataclasses import replace

from shedbim.fasteners.fastener import Disc
from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.shapes import Shape

__all__ = ["coarse"]


def coarse(shape: Shape, least_hole: float = 0.0) -> Shape:
    """Give a shape without what a picture does not show.

    The bores of nuts and washers are filled: a shank is in them, or nothing that could be seen. A shank and its
    thread become one. Holes narrower than ``least_hole`` mm are left out; notches stay.
    """
    if isinstance(shape, BoltGroup):
        return replace(shape, fastener=replace(shape.fastener, stack=_filled(shape.fastener.stack)))
    if all(hole.diameter >= least_hole for hole in shape.holes):
        return shape
    return replace(shape, holes=tuple(hole for hole in shape.holes if hole.diameter >= least_hole))


def _filled(stack: tuple[Disc, ...]) -> tuple[Disc, ...]:
    """A stack without bores, equal discs that touch joined to one."""
    kept: list[Disc] = []
    for disc in sorted(
        (replace(each, bore=0.0) for each in stack), key=lambda each: (each.form, each.size, each.start)
    ):
        last = kept[-1] if kept else None
        if last and (last.form, last.size) == (disc.form, disc.size) and disc.start <= last.end:
            kept[-1] = replace(last, end=max(last.end, disc.end))
        else:
            kept.append(disc)
    return tuple(kept)
