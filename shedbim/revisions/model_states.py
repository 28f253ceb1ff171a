"""The state of a building as a model file tells it, ours or anybody's; and what became of each element between two."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.geometry.placements import Placements
from shedbim.revisions.changes import Changes, Kind
from shedbim.revisions.comparing import SAME_TURN, held, met
from shedbim.revisions.states import Thing
from shedbim.tolerance import SAME_LENGTH, SAME_PLACE

__all__ = ["ModelState", "compare_models"]

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]


@dataclass(frozen=True, eq=False)
class ModelState:
    """The elements of a model file that have a shape, n rows; see ``states.State``.

    Attributes:
        project: name of the project; ``project_id`` is its GlobalId.
        properties: (t,) digest of all that is said of each thing in property sets.
        remarks: what was left out, in sentences.
    """

    project: str
    project_id: str
    revision: str
    ids: tuple[str, ...]
    keys: tuple[str, ...]
    things: tuple[Thing, ...]
    properties: tuple[str, ...]
    thing: Ints
    placement: Placements
    joints: NDArray[np.uint64]
    assembly: tuple[str, ...]
    remarks: tuple[str, ...] = ()
    welds: float | None = None

    def __len__(self) -> int:
        return len(self.ids)


def compare_models(before: ModelState, after: ModelState) -> Changes:
    """Give what became of each element; the other way round it is ``compare_models(after, before)``.

    Elements are met by GlobalId, shapes by what their representations say: a symmetry that a shape has by itself is not
    seen, so an element that was turned onto itself counts as moved.
    """
    old, new = met(before.ids, after.ids)
    both = np.flatnonzero((old >= 0) & (new >= 0))
    kinds = np.zeros(len(old), np.uint8)
    kinds[old < 0] = Kind.ADDED
    kinds[new < 0] = Kind.REMOVED
    one, other = old[both], new[both]

    def differ(*names: str) -> NDArray[np.bool_]:
        words = [
            np.array(["\t".join(getattr(thing, name) for name in names) for thing in state.things], str)
            for state in (before, after)
        ]
        return np.asarray(words[0][before.thing[one]] != words[1][after.thing[other]])

    said = [np.array(state.properties, str)[state.thing] for state in (before, after)]
    reach = [np.array([t.length for t in state.things], float)[state.thing] for state in (before, after)]
    alike = np.abs(reach[0][one] - reach[1][other]) <= SAME_LENGTH
    restocked, reshaped = differ("stock"), differ("shape")
    flags = [
        (Kind.MOVED, _moved(before, after, one, other, reshaped)),
        (Kind.RESECTIONED, restocked),
        (Kind.RESHAPED, reshaped & ~(restocked & alike)),
        (Kind.REMARKED, differ("mark")),
        (Kind.REJOINED, before.joints[one] != after.joints[other]),
        (Kind.ALTERED, differ("role", "grade", "finish") | (said[0][one] != said[1][other])),
    ]
    for kind, holds in flags:
        kinds[both[holds]] |= np.uint8(kind)
    moved = np.zeros((len(old), 3))
    moved[both] = _ends(after)[other].mean(axis=1) - _ends(before)[one].mean(axis=1)
    return Changes(before, after, old, new, kinds, moved)


def _moved(
    before: ModelState, after: ModelState, one: Ints, other: Ints, reshaped: NDArray[np.bool_]
) -> NDArray[np.bool_]:
    """Whether each element has another frame; one of another shape, whether neither end of its axis is an end still."""
    here, there = before.placement[one], after.placement[other]
    turned = np.abs(here[:, :, :3] - there[:, :, :3]).max(axis=(1, 2), initial=0.0) > SAME_TURN
    far = np.linalg.norm(here[:, :, 3] - there[:, :, 3], axis=1) > SAME_PLACE
    moved = np.asarray(turned | far)
    rows = np.flatnonzero(reshaped)
    moved[rows] = ~held(_ends(before)[one[rows]], _ends(after)[other[rows]])
    return moved


def _ends(state: ModelState) -> Floats:
    """The origin of each element and its far end along x (n, 2, 3), mm; twice the origin of what has no length."""
    length = np.array([thing.length for thing in state.things], float)[state.thing]
    origin = state.placement[:, :, 3]
    return np.stack([origin, origin + length[:, None] * state.placement[:, :, 0]], axis=1)
