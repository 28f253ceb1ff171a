"""GlobalIds of what stands between two pieces, many at once."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from shedbim.model.identity import Words, pair_ids

__all__ = ["meeting_ids"]

Integers = NDArray[np.int64]


def meeting_ids(project_id: str, name: str, words: Words, one: Integers, other: Integers) -> list[str]:
    """Give an id for each meeting of two pieces; where the same two meet twice, each meeting has its own.

    Args:
        project_id, name: the scope of the ids.
        words: (n, 2) of all pieces; see ``model.identity.piece_words``.
        one, other: (m,) the two pieces of each meeting.
    """
    times, which = np.unique(_times_met(one, other), return_inverse=True)
    ids = np.empty(len(one), "U22")
    for number, count in enumerate(times.tolist()):
        rows = which == number
        ids[rows] = pair_ids(project_id, f"{name}/{count}", words[one[rows]], words[other[rows]])
    return [str(each) for each in ids.tolist()]


def _times_met(one: Integers, other: Integers) -> Integers:
    """Give for each pair how often the same two have met before it (m,)."""
    order = np.lexsort((other, one))
    sorted_one, sorted_other = one[order], other[order]
    starts = np.ones(len(one), bool)
    starts[1:] = (sorted_one[1:] != sorted_one[:-1]) | (sorted_other[1:] != sorted_other[:-1])
    places = np.arange(len(one))
    before = np.empty_like(order)
    before[order] = places - np.maximum.accumulate(np.where(starts, places, 0))
    return before
