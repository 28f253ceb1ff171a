"""Which pairs of pieces share a joint, and which pieces of a joint hang together."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from shedbim.checks.subject import Entries

__all__ = ["linked", "shared_entries"]

Ints = NDArray[np.int64]


def shared_entries(entries: Entries, pieces: int, i: Ints, j: Ints) -> tuple[Ints, Ints, Ints]:
    """Give the joints that hold both pieces of pairs: the pair, and the entry of either piece, (s,) each.

    Args:
        entries: who takes part in which joint.
        pieces: how many pieces there are.
        i, j: (m,) the pairs.
    """
    order = np.argsort(entries.piece, kind="stable")
    number = np.bincount(entries.piece, minlength=pieces)
    first = np.cumsum(number) - number
    fewer = np.where(number[i] <= number[j], i, j)
    other = i + j - fewer
    times = number[fewer]
    pair = np.repeat(np.arange(len(i)), times)
    within = np.arange(len(pair)) - np.repeat(np.cumsum(times) - times, times)
    mine = order[first[fewer][pair] + within]
    keys = entries.joint * pieces + entries.piece
    sorted_keys = np.argsort(keys, kind="stable")
    wanted = entries.joint[mine] * pieces + other[pair]
    at = np.searchsorted(keys, wanted, sorter=sorted_keys)
    theirs = sorted_keys[np.minimum(at, len(keys) - 1)] if len(keys) else mine
    held = keys[theirs] == wanted
    pair, mine, theirs = pair[held], mine[held], theirs[held]
    turned = fewer[pair] != i[pair]
    return pair, np.where(turned, theirs, mine), np.where(turned, mine, theirs)


def linked(nodes: int, a: Ints, b: Ints) -> Ints:
    """Give for each node (n,) the least node that it hangs together with by the edges ``a`` to ``b`` (m,)."""
    label = np.arange(nodes)
    while True:
        least = np.minimum(label[a], label[b])
        after = label.copy()
        np.minimum.at(after, a, least)
        np.minimum.at(after, b, least)
        after = after[after]
        if np.array_equal(after, label):
            return label
        label = after
