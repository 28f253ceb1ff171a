"""What every roof form has: options that a user writes, and the slopes over given spans."""

from __future__ import annotations

from collections.abc import Iterator
from itertools import accumulate, pairwise
from math import tan

from shedbim.fields import Options
from shedbim.roofs.slope import Slope

__all__ = ["RoofForm", "extents", "single_slope"]


class RoofForm(Options):
    """Base of the roof forms; each adds its field ``form`` and its options."""

    def slopes(self, spans: tuple[float, ...]) -> tuple[Slope, ...]:
        """The slopes over spans (mm), left to right; the lowest column line has its eaves at z = 0."""
        raise NotImplementedError


def extents(spans: tuple[float, ...]) -> Iterator[tuple[int, float, float]]:
    """Number, left end and right end of each span, mm from column line A."""
    lines = accumulate(spans, initial=0.0)
    return ((span, left, right) for span, (left, right) in enumerate(pairwise(lines)))


def single_slope(spans: tuple[float, ...], pitch: float, high: str) -> tuple[Slope, ...]:
    """One plane over all spans (mm), rising by the pitch (rad) to its ``high`` side, left or right."""
    rise, width = tan(pitch), sum(spans)

    def height(x: float) -> float:
        return rise * (x if high == "right" else width - x)

    return tuple(Slope(span, x0, x1, height(x0), height(x1)) for span, x0, x1 in extents(spans))
