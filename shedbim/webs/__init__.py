"""The web patterns of trusses: one file each, and one row each in this table.

A pattern is named by the signs of its web forces under gravity, never by the drawing direction.
"""

from __future__ import annotations

from collections.abc import Mapping

from shedbim.webs import howe, pratt, warren, warren_with_posts
from shedbim.webs.pattern import Pattern, pattern_table

__all__ = ["PATTERNS", "Pattern"]

#: Every web pattern by the name that the user writes.
PATTERNS: Mapping[str, Pattern] = pattern_table(
    [
        Pattern("pratt", "posts, with diagonals in tension under gravity", pratt.topology),
        Pattern("howe", "posts, with diagonals in compression under gravity", howe.topology),
        Pattern("warren", "a zigzag of diagonals without posts (one at a ridge)", warren.topology),
        Pattern(
            "warren-with-posts",
            "a zigzag of diagonals with a post at every panel point",
            warren_with_posts.topology,
            needs_even_panels=True,
        ),
    ]
)
