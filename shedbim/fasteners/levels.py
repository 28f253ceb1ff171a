"""What is left of a fastener where its joint is drawn without holes."""

from __future__ import annotations

from dataclasses import replace

from shedbim.fasteners.fastener import Disc, Fastener

__all__ = ["outside"]


def outside(fastener: Fastener) -> Fastener:
    """Give the fastener with only what stands outside the layers it clamps: head, washers, nuts and tip.

    Its name, length and counts stay; a disc that runs through a face of the layers is cut there.
    """
    kept: list[Disc] = []
    for disc in fastener.stack:
        for low, high in ((float("-inf"), 0.0), (fastener.grip, float("inf"))):
            start, end = max(disc.start, low), min(disc.end, high)
            if start < end:
                kept.append(replace(disc, start=start, end=end))
    return replace(fastener, stack=tuple(kept))
