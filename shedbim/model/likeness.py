"""The result of sorting things into equal ones, whatever their shape."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.geometry.placements import IDENTITY, Placements
from shedbim.model.shapes import Shape

__all__ = ["Gathering", "Likeness"]

Ints = NDArray[np.int64]


@dataclass(frozen=True, eq=False)
class Likeness:
    """s things sorted into distinct shapes.

    Attributes:
        shapes: the distinct ones.
        signatures: of each shape, numbers that sort shapes whose outlines are equal by what else there is.
        shape_of: (s,) int, index into ``shapes``.
        motion: (s, 3, 4) float, placement of the shape's frame in the thing's frame, mm.
        flipped: (s,) bool, whether a bar's shape starts at the end of the bar.
    """

    shapes: tuple[Shape, ...]
    signatures: tuple[tuple[int, ...], ...]
    shape_of: NDArray[np.int64]
    motion: Placements
    flipped: NDArray[np.bool_]


class Gathering:
    """A Likeness of s things while it is put together, lot after lot; within a lot all but small things are equal."""

    def __init__(self, count: int) -> None:
        self.motion = np.tile(IDENTITY, (count, 1, 1))
        self.flipped = np.zeros(count, bool)
        self._shapes: list[Shape] = []
        self._signatures: list[tuple[int, ...]] = []
        self._shape_of = np.empty(count, np.int64)

    def add(
        self,
        rows: Sequence[int],
        order: Sequence[int],
        leader: Ints,
        shapes: Sequence[Shape],
        signatures: Sequence[tuple[int, ...]],
    ) -> None:
        """Add a lot.

        Args:
            rows: which of the s things it is.
            order: of the things of the lot, leaders come before what they lead.
            leader: of each thing of the lot the one that stands for it.
            shapes, signatures: of each thing of the lot; those of leaders are kept.
        """
        among = np.array(rows)
        for i in order:
            if leader[i] == i:
                self._shape_of[among[leader == i]] = len(self._shapes)
                self._shapes.append(shapes[i])
                self._signatures.append(signatures[i])

    def done(self) -> Likeness:
        """Give the whole."""
        return Likeness(
            tuple(self._shapes), tuple(self._signatures), self._shape_of, self.motion, self.flipped
        )
