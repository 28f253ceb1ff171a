"""Howe: posts at every panel point, diagonals in compression under gravity (tension under uplift)."""

from __future__ import annotations

from shedbim.webs.posted import posted
from shedbim.webs.tension import tension_from_top_left
from shedbim.webs.topology import Topology, TrussLine

__all__ = ["topology"]


def topology(line: TrussLine) -> Topology:
    """Give the Howe webs of ``line``: in every panel the diagonal that Pratt does not take."""
    return posted(line, [not tension for tension in tension_from_top_left(line)])
