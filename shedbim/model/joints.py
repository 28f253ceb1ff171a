"""Where pieces meet: which pieces, how, and at what point."""

from __future__ import annotations

from dataclasses import dataclass
from enum import Enum, IntEnum

import numpy as np
from numpy.typing import NDArray

__all__ = ["At", "JointKind", "JointRun"]


class At(IntEnum):
    """Which place of a piece a joint takes: an end, or somewhere along it."""

    START = 0
    END = 1
    ALONG = 2


class JointKind(Enum):
    """A kind of meeting: the word people read, and how it will be fastened."""

    PINNED_BASE = ("pinned column base", "bolted")
    FIXED_BASE = ("fixed column base", "bolted")
    POST_BASE = ("gable post base", "bolted")
    POST_HEAD = ("gable post head", "bolted")
    RAFTER_COLUMN = ("rafter to column", "bolted")
    APEX = ("apex", "bolted")
    CHORD_COLUMN = ("chord to column", "bolted")
    CHORD_RIDGE = ("chord at ridge", "welded")
    NODE = ("truss node", "welded")
    PURLIN_CLEAT = ("purlin cleat", "bolted")
    RAIL_CLEAT = ("rail cleat", "bolted")
    BRACE_GUSSET = ("brace gusset", "bolted")
    BRACE_CROSSING = ("brace crossing", "bolted")
    STRUT_END = ("strut end", "bolted")
    TIE_END = ("tie end", "bolted")
    SAG_BAR_END = ("sag bar end", "bolted")
    FREE = ("free end", "none")

    def __init__(self, word: str, fastening: str) -> None:
        self.word = word
        self.fastening = fastening


@dataclass(frozen=True, eq=False)
class JointRun:
    """Many joints of one kind that bring the same number of pieces together.

    Attributes:
        kind: how they meet.
        pieces: (m, k) int, indices into the pieces of the shed; the first of a row is what carries the rest.
        at: (m, k) int8, an ``At`` for each.
        points: (m, 3) float, work points in mm, building axes.
        eccentricity: (m,) float, mm: how far the axes miss one another at the work point.
    """

    kind: JointKind
    pieces: NDArray[np.int64]
    at: NDArray[np.int8]
    points: NDArray[np.float64]
    eccentricity: NDArray[np.float64]
