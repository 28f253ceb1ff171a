"""What hangs together by welds and bolts, joint by joint."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from shedbim.model.joints import JointKind, JointRun
from shedbim.model.roles import Role
from shedbim.model.shed import Shed

__all__ = ["lots_of_columns"]

Ints = NDArray[np.int64]


def lots_of_columns(shed: Shed, run: JointRun) -> Ints:
    """Give the lot of each column of a run, members first, then fittings: what its welds and bolts join is one lot.

    Packs lie in the grout under base plates and count as joined. What adds nothing at all to its members, as the
    joints of a shed without fittings, is one lot.
    """
    count = run.pieces.shape[1] + (run.fittings.shape[1] if run.fittings.size else 0)
    pairs = [weld.between for weld in run.welds]
    for clamp in run.clamps:
        pairs += [(clamp.group, column) for column, _ in clamp.layers]
        pairs += [(clamp.group, clamp.thread)] if clamp.thread is not None else []
    if not pairs and not run.fittings.size and run.kind is not JointKind.FREE:
        pairs = [(0, column) for column in range(1, count)]
    if run.fittings.size:
        first = run.pieces.shape[1]
        roles = [shed.parts[shed.pieces.part[piece]].role for piece in run.fittings[0].tolist()]
        pairs += [(0, first + k) for k, role in enumerate(roles) if role is Role.PACK]
    lot = list(range(count))
    for a, b in pairs:
        if lot[a] != lot[b]:
            old, new = lot[b], lot[a]
            lot = [new if each == old else each for each in lot]
    return np.array(lot)
