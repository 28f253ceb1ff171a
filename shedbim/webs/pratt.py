"""Pratt: posts at every panel point, diagonals in tension under gravity.

Between parallel chords the diagonals then fall towards midspan, under rafters that meet the tie at the
eaves they rise towards the ridge, and in a truss between the two they turn over where the forces do.
"""

from __future__ import annotations

from shedbim.webs.posted import posted
from shedbim.webs.tension import tension_from_top_left
from shedbim.webs.topology import Topology, TrussLine

__all__ = ["topology"]


def topology(line: TrussLine) -> Topology:
    """Give the Pratt webs of ``line``."""
    return posted(line, tension_from_top_left(line))
