"""Pieces and their changes as rows of plain values; changes applied to rows of one state give those of the other."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from typing import Any

import numpy as np

from shedbim.revisions.changes import Changes
from shedbim.revisions.states import State

__all__ = ["applied", "changed_rows", "piece_rows"]

#: Decimals of places, mm, and of the entries of a turn.
_PLACE, _TURN = 2, 6

Row = dict[str, Any]


def piece_rows(state: State) -> list[Row]:
    """Give one row for each piece of a state, in its order.

    ``id``, ``key``; ``mark``, ``role``, ``stock``, ``grade``, ``finish``; ``mass_kg``, ``length_mm``; ``shape``, the
    same for equal shapes; ``place_mm`` and ``turn`` (row by row) of the frame in building axes; ``assembly``, its mark;
    ``joints``, the same as long as all joints of the piece are.
    """
    kinds = [
        {
            "mark": thing.mark,
            "role": thing.role,
            "stock": thing.stock,
            "grade": thing.grade,
            "finish": thing.finish,
            "mass_kg": round(thing.mass, 3),
            "length_mm": round(thing.length, 2),
            "shape": thing.shape,
        }
        for thing in state.things
    ]
    # Adding zero makes no difference but for -0, which is 0.
    places = (np.round(state.placement[:, :, 3], _PLACE) + 0.0).tolist()
    turns = (np.round(state.placement[:, :, :3], _TURN) + 0.0).reshape(-1, 9).tolist()
    return [
        {
            "id": name,
            "key": key,
            **kinds[thing],
            "place_mm": place,
            "turn": turn,
            "assembly": held,
            "joints": f"{met:x}",
        }
        for name, key, thing, place, turn, held, met in zip(
            state.ids,
            state.keys,
            state.thing.tolist(),
            places,
            turns,
            state.assembly,
            state.joints.tolist(),
            strict=True,
        )
    ]


def changed_rows(changes: Changes) -> list[Row]:
    """Give one row for each piece whose row differs: ``id``, ``key``, ``kinds`` and what it was and is.

    ``before`` and ``after`` hold the values that differ; all of them for a piece that was added or removed, where the
    other is None. A piece without a kind is the same to whoever looks at it: it is called otherwise, goes into an
    assembly with another mark, or its frame lies in another of the places that its own symmetry allows.
    """
    before, after = piece_rows(changes.before), piece_rows(changes.after)
    found = []
    for row, (old, new) in enumerate(zip(changes.old.tolist(), changes.new.tolist(), strict=True)):
        was = before[old] if old >= 0 else None
        now = after[new] if new >= 0 else None
        if was and now:
            names = [name for name in now if was[name] != now[name]]
            if not names and not changes.kinds[row]:
                continue
            was, now = ({name: each[name] for name in names} for each in (was, now))
        found.append(
            {
                "id": changes.id(row),
                "key": changes.key(row),
                "kinds": list(changes.words(row)),
                "before": was,
                "after": now,
            }
        )
    return found


def applied(rows: Iterable[Row], changed: Iterable[Mapping[str, Any]]) -> list[Row]:
    """Give the rows of the later state, sorted by id, from those of the earlier one and what changed.

    Args:
        rows: as ``piece_rows`` gives them.
        changed: as ``changed_rows`` gives them.

    Raises:
        ValueError: when a piece is not as the changes say that it was.
    """
    found = {row["id"]: row for row in rows}
    for change in changed:
        name, was, now = change["id"], change["before"], change["after"]
        own = found.pop(name, None)
        if (own is None) != (was is None) or (own and any(own[each] != was[each] for each in was)):
            raise ValueError(f"{change['key']} ({name}) is not as the changes say that it was")
        if now is not None:
            found[name] = {**(own or {}), **now}
    return [found[name] for name in sorted(found)]
