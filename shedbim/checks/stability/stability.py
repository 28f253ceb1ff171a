"""All checks of stability, which share one skeleton."""

from __future__ import annotations

from collections.abc import Iterator

from shedbim.checks.finding import Hit
from shedbim.checks.stability.panels import one_way_braces, panels
from shedbim.checks.stability.skeleton import skeleton
from shedbim.checks.stability.trusses import purlins_between_nodes, truss_mechanisms, trusses
from shedbim.checks.stability.whole import whole
from shedbim.checks.subject import Subject

__all__ = ["stability"]


def stability(subject: Subject) -> Iterator[Hit]:
    """Give what moves freely: of the whole building, of each truss, of each panel of bracing."""
    bars = skeleton(subject)
    yield from whole(subject, bars)
    found = list(trusses(subject, bars))
    yield from truss_mechanisms(subject, bars, found)
    yield from purlins_between_nodes(subject, bars, found)
    yield from panels(subject, bars)
    yield from one_way_braces(subject)
