"""What became of each piece between two states of a building."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from enum import IntFlag

import numpy as np
from numpy.typing import NDArray

from shedbim.revisions.states import State

__all__ = ["Changes", "Kind"]

Ints = NDArray[np.int64]


class Kind(IntFlag):
    """How a piece changed; several may hold of one."""

    ADDED = 1
    REMOVED = 2
    MOVED = 4
    RESHAPED = 8
    RESECTIONED = 16
    REMARKED = 32
    REJOINED = 64
    ALTERED = 128

    @property
    def word(self) -> str:
        """What a reader sees."""
        return _WORDS[self]


_WORDS = {
    Kind.ADDED: "added",
    Kind.REMOVED: "removed",
    Kind.MOVED: "moved",
    Kind.RESHAPED: "reshaped",
    Kind.RESECTIONED: "other section",
    Kind.REMARKED: "other mark",
    Kind.REJOINED: "joint changed",
    Kind.ALTERED: "property changed",
}


@dataclass(frozen=True, eq=False)
class Changes:
    """Two states of a building and what became of each piece of either, m rows, one for each id.

    Attributes:
        before, after: the states.
        old: (m,) row in ``before``, -1 for a piece that was added.
        new: (m,) row in ``after``, -1 for a piece that was removed.
        kinds: (m,) ``Kind`` flags; 0 for what stayed as it was.
        moved: (m, 3) float, how far its middle moved, mm; 0 for what was added or removed.
    """

    before: State
    after: State
    old: Ints
    new: Ints
    kinds: NDArray[np.uint8]
    moved: NDArray[np.float64]

    def __len__(self) -> int:
        return len(self.kinds)

    def having(self, kind: Kind) -> Ints:
        """Give the rows of what changed in a way."""
        return np.flatnonzero(self.kinds & np.uint8(kind))

    @property
    def changed(self) -> Ints:
        """The rows of all that changed."""
        return np.flatnonzero(self.kinds)

    def counts(self) -> dict[Kind, int]:
        """Give how many pieces changed in each way."""
        return {kind: len(self.having(kind)) for kind in Kind}

    def words(self, row: int) -> Iterator[str]:
        """Give the words for what became of one piece."""
        return (kind.word for kind in Kind if self.kinds[row] & kind)

    def key(self, row: int) -> str:
        """Give the key of a piece: the one it has now, or had."""
        new = int(self.new[row])
        return self.after.keys[new] if new >= 0 else self.before.keys[int(self.old[row])]

    def id(self, row: int) -> str:
        """Give the GlobalId of a piece."""
        new = int(self.new[row])
        return self.after.ids[new] if new >= 0 else self.before.ids[int(self.old[row])]
