"""Where pieces meet: which pieces, how, and at what point."""

from __future__ import annotations

from dataclasses import dataclass, field
from enum import Enum, IntEnum

import numpy as np
from numpy.typing import NDArray

from shedbim.model.welds import Weld

__all__ = ["At", "Clamp", "JointKind", "JointRun"]


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
    COLUMN_CAP = ("column cap", "welded")
    POST_HEAD = ("gable post head", "bolted")
    RAFTER_COLUMN = ("rafter to column", "bolted")
    APEX = ("apex", "bolted")
    CHORD_COLUMN = ("chord to column", "bolted")
    CHORD_RIDGE = ("chord at ridge", "welded")
    CHORD_SPLICE = ("chord splice", "bolted")
    WEB_SPLICE = ("web site joint", "bolted")
    NODE = ("truss node", "welded")
    ANGLE_NODE = ("truss gusset", "welded")
    ANGLE_SITE_NODE = ("truss gusset, web joined on site", "bolted")
    ANGLE_COLUMN = ("truss gusset at column", "bolted")
    ANGLE_SPLICE = ("bolted cover splice", "bolted")
    PACKED_PAIR = ("packed pair", "welded")
    PURLIN_CLEAT = ("purlin cleat", "bolted")
    PURLIN_LAP = ("purlin lap", "bolted")
    RAIL_CLEAT = ("rail cleat", "bolted")
    BRACE_GUSSET = ("brace gusset", "bolted")
    BRACE_CROSSING = ("brace crossing", "bolted")
    STRUT_END = ("strut end", "bolted")
    TIE_END = ("tie end", "bolted")
    SAG_BAR_END = ("sag bar end", "bolted")
    FLANGE_STAY = ("flange stay", "bolted")
    FREE = ("free end", "none")

    def __init__(self, word: str, fastening: str) -> None:
        self.word = word
        self.fastening = fastening


@dataclass(frozen=True)
class Clamp:
    """The layers that a bolt group of a joint passes through, head to nut.

    Attributes:
        group: column of the bolt group among the members and fittings of the joint.
        layers: (column, thickness in mm) of each layer.
        thread: of nuts alone, the column of the member whose thread they turn on.
    """

    group: int
    layers: tuple[tuple[int, float], ...]
    thread: int | None = None


@dataclass(frozen=True, eq=False)
class JointRun:
    """Many joints of one configuration.

    Attributes:
        kind: how they meet.
        pieces: (m, k) int, indices into the pieces of the shed; the first of a row is what carries the rest.
        at: (m, k) int8, an ``At`` for each.
        points: (m, 3) float, work points in mm, building axes.
        eccentricity: (m,) float, mm: how far the axes miss one another at the work point.
        fittings: (m, f) int, the pieces that each joint adds: plates, cleats, bolt groups.
        welds, clamps: the same for all; their columns count the k members first, then the f fittings.
    """

    kind: JointKind
    pieces: NDArray[np.int64]
    at: NDArray[np.int8]
    points: NDArray[np.float64]
    eccentricity: NDArray[np.float64]
    fittings: NDArray[np.int64] = field(default_factory=lambda: np.zeros((0, 0), np.int64))
    welds: tuple[Weld, ...] = ()
    clamps: tuple[Clamp, ...] = ()
