"""Under which name each piece is known: the key it had when it was first issued, which its id is made from.

A piece that is what an issued one was, where it was, is that piece, and of the others one that has its key. What is
left over of both, because grid labels shifted or courses were counted anew, is met by role and place, so that pieces
move least in sum: first those of one part whose paths
differ in the line or bay alone, then those of such paths, of one part, of one role. What a joint adds goes with its
member, or else is met by part and place.
"""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.tolerance import SAME_PLACE

__all__ = ["Known", "names_of"]

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]

#: Pairs of leftover pieces of one role that are weighed against one another at once; of more, each takes the nearest.
_MOST_PAIRS = 4_000_000


@dataclass(frozen=True, eq=False)
class Known:
    """Pieces in one state: n rows.

    Attributes:
        keys: paths.
        roles: numbers of the roles.
        parts: numbers of the parts, equal for equal parts of both states.
        middles: (n, 3) mm, building axes.
        is_member: (n,) bool; what is none is named after the member at the head of its key.
    """

    keys: Sequence[str]
    roles: Ints
    parts: Ints
    middles: Floats
    is_member: NDArray[np.bool_]


def names_of(issued: Known, names: Sequence[str], now: Known, reach: float) -> tuple[str, ...]:
    """Give the name of each piece now (n,), all different.

    Args:
        issued: the pieces as last issued.
        names: of the issued pieces.
        now: the pieces.
        reach: no piece is met with one farther away than this, mm.
    """
    row = {key: i for i, key in enumerate(issued.keys)}
    called = np.array([row.get(key, -1) for key in now.keys], np.int64)
    called[(called >= 0) & (issued.roles[called] != now.roles)] = -1
    stays = (called >= 0) & (issued.parts[called] == now.parts)
    stays &= np.linalg.norm(issued.middles[called] - now.middles, axis=1) <= SAME_PLACE
    met = np.where(stays, called, -1)
    free_old = np.ones(len(issued.keys), bool)
    free_old[called[stays]] = False
    for old, new in _unmoved(issued, now, np.flatnonzero(free_old), np.flatnonzero(~stays)):
        met[new], free_old[old] = old, False
    by_key = np.flatnonzero((met < 0) & (called >= 0) & free_old[called])
    met[by_key], free_old[called[by_key]] = called[by_key], False

    def meet(members: bool, by_part: bool, by_path: bool) -> None:
        old = _grouped(issued, np.flatnonzero(free_old & (issued.is_member == members)), by_part, by_path)
        new = _grouped(now, np.flatnonzero((met < 0) & (now.is_member == members)), by_part, by_path)
        for group in sorted(old.keys() & new.keys()):
            pairs = _nearest(issued.middles[old[group]], now.middles[new[group]], reach)
            for one, other in pairs:
                met[new[group][other]] = old[group][one]
                free_old[old[group][one]] = False

    for by_part, by_path in ((True, True), (False, True), (True, False), (False, False)):
        meet(True, by_part, by_path)
    _with_members(issued, now, free_old, met)
    meet(False, True, False)
    found = [names[each] if each >= 0 else "" for each in met.tolist()]
    return _distinct(found, now.keys)


def _unmoved(issued: Known, now: Known, old: Ints, new: Ints) -> list[tuple[int, int]]:
    """Pairs of rows (issued, now) of equal parts in one place, whatever their keys."""
    if not len(old) or not len(new):
        return []
    from scipy.spatial import cKDTree  # noqa: PLC0415 - heavy, and only needed after a change

    apart = 1e6  # mm: parts are told apart in a fourth direction, far beyond any tolerance
    there = np.column_stack([issued.middles[old], apart * issued.parts[old]])
    here = np.column_stack([now.middles[new], apart * now.parts[new]])
    far, near = cKDTree(there).query(here, distance_upper_bound=SAME_PLACE)
    taken: set[int] = set()
    pairs = []
    for place in np.argsort(far, kind="stable").tolist():
        if far[place] <= SAME_PLACE and int(near[place]) not in taken:
            taken.add(int(near[place]))
            pairs.append((int(old[near[place]]), int(new[place])))
    return pairs


def _grouped(known: Known, rows: Ints, by_part: bool, by_path: bool) -> dict[tuple[int, int, str], Ints]:
    """Rows by role, and by part and by the key without its line or bay where asked for."""
    groups: dict[tuple[int, int, str], list[int]] = defaultdict(list)
    for row in rows.tolist():
        part = int(known.parts[row]) if by_part else -1
        path = known.keys[row].partition("/")[2] if by_path else ""
        groups[int(known.roles[row]), part, path].append(row)
    return {group: np.array(each, np.int64) for group, each in groups.items()}


def _nearest(old: Floats, new: Floats, reach: float) -> list[tuple[int, int]]:
    """Pairs of rows (old, new) that move least in sum, none farther than ``reach``."""
    if len(old) * len(new) > _MOST_PAIRS:
        return _nearest_first(old, new, reach)
    from scipy.optimize import linear_sum_assignment  # noqa: PLC0415 - heavy, and only needed after such a change

    # A pair beyond reach costs more than all others together, so that it is taken only where nothing else is left.
    far = np.linalg.norm(old[:, None] - new[None], axis=2)
    cost = np.where(far <= reach, far, reach * (min(far.shape) + 1))
    rows, columns = linear_sum_assignment(cost)
    near = far[rows, columns] <= reach
    return list(zip(rows[near].tolist(), columns[near].tolist(), strict=True))


def _nearest_first(old: Floats, new: Floats, reach: float) -> list[tuple[int, int]]:
    """Pairs of rows (old, new): each new one takes the nearest that no nearer one has taken."""
    from scipy.spatial import cKDTree  # noqa: PLC0415 - heavy, and only needed after such a change

    far, near = cKDTree(old).query(new, k=min(8, len(old)), distance_upper_bound=reach)
    far, near = far.reshape(len(new), -1), near.reshape(len(new), -1)
    taken, given = np.zeros(len(old) + 1, bool), np.zeros(len(new), bool)
    pairs = []
    for place in np.argsort(far, axis=None, kind="stable").tolist():
        one, other = int(near.flat[place]), place // far.shape[1]
        if far.flat[place] <= reach and not taken[one] and not given[other]:
            taken[one] = given[other] = True
            pairs.append((one, other))
    return pairs


def _with_members(issued: Known, now: Known, free_old: NDArray[np.bool_], met: Ints) -> None:
    """Meet what joints add with what they added to the same member, where that has another key now."""
    renamed = {
        now.keys[new]: issued.keys[old]
        for new, old in enumerate(met.tolist())
        if old >= 0 and now.is_member[new] and now.keys[new] != issued.keys[old]
    }
    if not renamed:
        return
    row = {issued.keys[i]: i for i in np.flatnonzero(free_old & ~issued.is_member).tolist()}
    for new in np.flatnonzero((met < 0) & ~now.is_member).tolist():
        member, place = _parted(now.keys[new])
        old = row.get(f"{renamed[member]}{place}", -1) if member in renamed else -1
        if old >= 0 and free_old[old] and issued.roles[old] == now.roles[new]:
            met[new], free_old[old] = old, False


def _parted(key: str) -> tuple[str, str]:
    """The key of the member that a joint adds something to, and the rest."""
    for place in ("/start/", "/end/", "/at "):
        member, found, rest = key.partition(place)
        if found:
            return member, place + rest
    return key, ""


def _distinct(found: Sequence[str], keys: Sequence[str]) -> tuple[str, ...]:
    """The names with those of new pieces filled in: their keys, numbered on where a name is taken."""
    taken = {name for name in found if name}
    names = []
    for name, key in zip(found, keys, strict=True):
        chosen, number = name or key, 1
        while not name and chosen in taken:
            number += 1
            chosen = f"{key}#{number}"
        taken.add(chosen)
        names.append(chosen)
    return tuple(names)
