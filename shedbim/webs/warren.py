"""Warren: diagonals only, from bottom nodes at the panel points to top nodes in mid-panel.

Where the top chord kinks it needs a node, which the bare zigzag does not have at a panel point: a ridge
post carries it from the bottom node below.
"""

from __future__ import annotations

from shedbim.webs.topology import Topology, TrussLine, Web

__all__ = ["topology"]


def topology(line: TrussLine) -> Topology:
    """Give the Warren webs of ``line``.

    Where the chords meet at the ends, the outer diagonals would lie in the top chord and are left out.
    """
    top: list[float] = []
    webs: list[Web] = []
    for panel in range(line.panels):
        if line.top_kink and panel == line.ridge:
            webs.append(Web("post", bottom=panel, top=len(top)))
            top.append(float(panel))
        if line.end_posts or panel > 0:
            webs.append(Web("diagonal", bottom=panel, top=len(top)))
        if line.end_posts or panel < line.panels - 1:
            webs.append(Web("diagonal", bottom=panel + 1, top=len(top)))
        top.append(panel + 0.5)
    bottom = tuple(float(point) for point in range(line.panels + 1))
    return Topology(top=tuple(top), bottom=bottom, webs=tuple(webs))
