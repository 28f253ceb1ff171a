"""Where along the slopes gable posts stand and roof bracing has its nodes: both are set out together."""

from __future__ import annotations

from math import ceil

from shedbim.description.models import Description
from shedbim.expand.layout import Layout, Pitched

__all__ = ["brace_places", "post_places"]


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
