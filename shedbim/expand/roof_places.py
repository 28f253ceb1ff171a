"""Where along the slopes gable posts stand and roof bracing has its nodes: both are set out together."""

from __future__ import annotations

from itertools import pairwise
from math import ceil

from shedbim.description.models import Description
from shedbim.expand.layout import Layout, Pitched
from shedbim.expand.pairs import Steel

__all__ = ["brace_lengths", "brace_places", "post_places"]

#: From the side of a chord to the far edge of a brace and what is bolted on beside it, mm; and the least length
#: of a chord that a gusset takes to either side of its node, mm (common practice, values from memory).
_BESIDE, _GUSSET = 80.0, 500.0
#: A gusset reaches this much farther along a brace than to where the brace clears the chord, mm.
_BOLTS = 200.0


def post_places(description: Description, layout: Layout) -> tuple[float, ...]:
    """Give x of the gable posts: every slope in equal parts no longer than the greatest post spacing."""
    spacing = description.frames.gables.post_spacing
    places: list[float] = []
    for pitched in layout.slopes:
        s = pitched.slope
        parts = ceil((s.x1 - s.x0) / spacing - 1e-9)
        places.extend(s.x0 + (s.x1 - s.x0) * k / parts for k in range(1, parts))
        if pitched.right_column < 0:
            places.append(s.x1)
    return tuple(places)


def brace_places(description: Description, layout: Layout, pitched: Pitched) -> list[float]:
    """Give x of the roof bracing's nodes of a slope: over the gable posts, or in as many panels as asked."""
    s, asked = pitched.slope, description.bracing.roof.panels
    if asked is not None:
        return [s.x0 + (s.x1 - s.x0) * k / asked for k in range(asked + 1)]
    posts = [x for x in post_places(description, layout) if s.x0 + 1.0 < x < s.x1 - 1.0]
    return [s.x0, *posts, s.x1]


def brace_lengths(
    description: Description, layout: Layout, pitched: Pitched, chord: Steel
) -> list[tuple[float, float]]:
    """Give the lengths (low, high) in x of a chord under a slope beside which roof braces and gussets lie.

    The flatter a brace runs to the chord, the longer it stays near it: the shortest bay decides.
    """
    away = chord.width / 2 + _BESIDE + description.bracing.roof.section.width
    bay = min(layout.bay_lengths)
    found = []
    for x0, x1 in pairwise(brace_places(description, layout, pitched)):
        reach = max(_GUSSET, away * (x1 - x0) / bay + _BOLTS)
        found += [(x0, x0 + reach), (x1 - reach, x1)]
    return found
