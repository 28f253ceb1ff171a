"""Changes rolled up: for each mark, role, frame or bay how many pieces changed how, and its mass before and after."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np

from shedbim.revisions.changes import Changes, Kind
from shedbim.revisions.states import State

__all__ = ["ROLLED_BY", "Roll", "bay_of", "frame_of", "rolled"]


@dataclass(frozen=True)
class Roll:
    """What changed under one name.

    Attributes:
        name: a mark, a role, the label of a line, or those of the two lines of a bay.
        changed: pieces that changed in any way.
        counts: pieces by how they changed, without zeros.
        pieces, mass: before and after; kg.
    """

    name: str
    changed: int
    counts: dict[Kind, int]
    pieces: tuple[int, int]
    mass: tuple[float, float]


def frame_of(key: str) -> str:
    """Give the line on which a piece stands, by its key; empty where it stands on none."""
    word, slash, _ = key.partition("/")
    return word if slash and "-" not in word else ""


def bay_of(key: str) -> str:
    """Give the lines between which a piece stands, by its key; empty where it stands in no bay."""
    word, slash, _ = key.partition("/")
    return word if slash and "-" in word else ""


def _by_thing(what: str) -> Callable[[State], Sequence[str]]:
    def names(state: State) -> Sequence[str]:
        each = [str(getattr(thing, what)) for thing in state.things]
        return [each[thing] for thing in state.thing.tolist()]

    return names


#: What changes are rolled up by: the name of each piece of a state.
ROLLED_BY: dict[str, Callable[[State], Sequence[str]]] = {
    "mark": _by_thing("mark"),
    "role": _by_thing("role"),
    "frame": lambda state: [frame_of(key) for key in state.keys],
    "bay": lambda state: [bay_of(key) for key in state.keys],
}


def rolled(changes: Changes, by: str) -> tuple[Roll, ...]:
    """Give a roll for each name under which anything changed, in the order of the later state's pieces.

    A piece counts under the name that it has now; one that was removed, under the name that it had. Pieces and masses
    before are those that had the name then.
    """
    old_names, new_names = (ROLLED_BY[by](state) for state in (changes.before, changes.after))
    number = {name: i for i, name in enumerate(dict.fromkeys((*new_names, *old_names)))}
    old, new = (np.array([number[name] for name in names], np.int64) for names in (old_names, new_names))
    now = np.full(len(changes), -1)
    stands = changes.new >= 0
    now[stands] = new[changes.new[stands]]
    now[~stands] = old[changes.old[~stands]]
    size = len(number)
    counts = {kind: np.bincount(now[changes.having(kind)], minlength=size) for kind in Kind}
    changed = np.bincount(now[changes.changed], minlength=size)
    pieces = [np.bincount(rows, minlength=size).tolist() for rows in (old, new)]
    masses = [
        np.bincount(rows, weights=_masses(state), minlength=size).tolist()
        for rows, state in ((old, changes.before), (new, changes.after))
    ]
    return tuple(
        Roll(
            name,
            int(changed[i]),
            {kind: int(some[i]) for kind, some in counts.items() if some[i]},
            (pieces[0][i], pieces[1][i]),
            (masses[0][i], masses[1][i]),
        )
        for name, i in number.items()
        if name and changed[i]
    )


def _masses(state: State) -> np.ndarray[tuple[int], np.dtype[np.float64]]:
    return np.array([thing.mass for thing in state.things], float)[state.thing]
