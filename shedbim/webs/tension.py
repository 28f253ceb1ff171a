"""Which way the diagonal of each panel runs if gravity shall put it in tension."""

from __future__ import annotations

from shedbim.webs.topology import TrussLine

__all__ = ["tension_from_top_left"]

#: Leverages that differ by less than this share of the largest count as equal: above the rounding of
#: the caller's arithmetic (about 1e-15), far below any force that matters.
_SAME_LEVERAGE = 1e-9


def tension_from_top_left(line: TrussLine) -> tuple[bool, ...]:
    """Tell for each panel whether its tension diagonal goes from the top node at the panel's left end.

    True is top left to bottom right, False bottom left to top right. A cut through panel i with posts
    at both ends gives the horizontal force of a top-left diagonal as leverage[i + 1] - leverage[i]
    (moments about its two ends, then horizontal equilibrium), for chords of any slope; of the other
    diagonal as the opposite. So tension starts on top at the end with the smaller leverage.

    Where both are equal the diagonal carries nothing; it runs as if leverage grew towards the middle,
    which keeps symmetric trusses symmetric. The middle panel of an odd straight truss has no symmetric
    choice and takes the top-left diagonal.
    """
    same = _SAME_LEVERAGE * max(abs(value) for value in line.leverage)
    answer = []
    for panel in range(line.panels):
        gain = line.leverage[panel + 1] - line.leverage[panel]
        answer.append(gain > 0 if abs(gain) > same else panel + 0.5 <= line.middle)
    return tuple(answer)
