"""How far holes are from edges and from each other, and the room that a wrench needs, mm.

The least distances are those of EN 1993-1-8 Table 3.3 for round holes; the usual ones are those a workshop works
to. Both are for setting out: nothing here is a check of resistance.
"""

from __future__ import annotations

from shedbim.fasteners.rows import listed

__all__ = ["edge", "least_edge", "least_gauge", "least_pitch", "pitch", "wrench_pitch", "wrench_wall"]


def edge(diameter: float) -> float:
    """Give the usual distance from a bolt to an edge or end (common practice); ValueError where not listed."""
    return listed("distances", diameter)["edge"]


def pitch(diameter: float) -> float:
    """Give the usual distance between bolts (common practice), wrench access held; ValueError where not listed."""
    return listed("distances", diameter)["pitch"]


def least_edge(hole: float) -> float:
    """Give the least distance e1, e2 from a hole of this diameter to an edge or end (Table 3.3: 1.2 d0)."""
    return 1.2 * hole


def least_pitch(hole: float) -> float:
    """Give the least distance p1 between holes in the direction of force (Table 3.3: 2.2 d0)."""
    return 2.2 * hole


def least_gauge(hole: float) -> float:
    """Give the least distance p2 between holes across the direction of force (Table 3.3: 2.4 d0)."""
    return 2.4 * hole


def wrench_pitch(diameter: float) -> float:
    """Give the least distance between bolts at which a wrench turns both; ValueError where not listed."""
    return listed("distances", diameter)["wrench_pitch"]


def wrench_wall(diameter: float) -> float:
    """Give the least distance from a bolt to what stands beside it; ValueError where not listed."""
    return listed("distances", diameter)["wrench_wall"]
