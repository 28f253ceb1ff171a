"""Warren with posts: diagonals that alternate from both supports, and a post at every panel point."""

from __future__ import annotations

from shedbim.errors import ModelError
from shedbim.webs.posted import posted
from shedbim.webs.topology import Topology, TrussLine

__all__ = ["topology"]


def topology(line: TrussLine) -> Topology:
    """Give the webs of ``line``: b0-t1, t1-b2, ... up to the middle, and mirrored from the other end.

    Raises:
        ModelError: a straight truss with an odd number of panels, whose middle panel has no
            symmetric diagonal.
    """
    if line.ridge is None and line.panels % 2:
        raise ModelError(
            f"a straight Warren truss with posts needs an even number of panels, not {line.panels}"
        )
    from_top_left = [
        panel % 2 == 1 if panel < line.middle else (line.panels - 1 - panel) % 2 == 0
        for panel in range(line.panels)
    ]
    return posted(line, from_top_left)
