"""The topology with a post at every panel point and one diagonal in every panel."""

from __future__ import annotations

from collections.abc import Sequence

from shedbim.webs.topology import Topology, TrussLine, Web

__all__ = ["posted"]


def posted(line: TrussLine, from_top_left: Sequence[bool]) -> Topology:
    """Give posts at all panel points and the diagonals that ``from_top_left`` names.

    Args:
        line: the truss.
        from_top_left: (panels,) True for a diagonal from top left to bottom right, else the other.

    Where the chords meet at the ends there is no end post, and the end panels are triangles that need
    no diagonal.
    """
    first = 0 if line.end_posts else 1
    last = line.panels - first
    webs = []
    for point in range(first, last + 1):
        webs.append(Web("post", bottom=point, top=point))
        if point < last:
            falls = from_top_left[point]
            webs.append(Web("diagonal", bottom=point + falls, top=point + (not falls)))
    nodes = tuple(float(point) for point in range(line.panels + 1))
    return Topology(top=nodes, bottom=nodes, webs=tuple(webs))
