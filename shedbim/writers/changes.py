"""The changes between two states as JSON: counts, quantities, roll-ups, groups, and every changed piece.

``pieces[]`` holds the GlobalId, key and kinds of change of each piece that is not as it was, and the values that
differ ``before`` and ``after``: enough that, applied to the list of pieces of the earlier state, they give that of the
later (``revisions.piece_rows``). A piece without a kind is the same to whoever looks at it, and called or turned
otherwise.
"""

from __future__ import annotations

import json
from typing import Any

from shedbim.revisions.amounts import amounts, masses_by
from shedbim.revisions.changes import Changes, Kind
from shedbim.revisions.piece_rows import changed_rows
from shedbim.revisions.rolling import ROLLED_BY, Roll, rolled
from shedbim.revisions.states import State
from shedbim.writers.comparison import Comparison

__all__ = ["changes_data", "changes_text"]

_DECIMALS = 3


def changes_data(comparison: Comparison) -> dict[str, Any]:
    """Give the changes as plain data."""
    changes, imprint = comparison.changes, comparison.imprint
    return {
        "program": "shedbim",
        "version": imprint.version,
        "time_stamp": imprint.stamp,
        "project": comparison.project,
        "before": _head(changes.before, comparison.names[0]),
        "after": _head(changes.after, comparison.names[1]),
        "notes": list(comparison.notes),
        "changed_pieces": len(changes.changed),
        "counts": _counts(changes.counts()),
        "quantities": [
            {
                "quantity": one.name,
                "unit": one.unit,
                "before": _figure(one.value),
                "after": _figure(other.value),
            }
            for one, other in zip(amounts(changes.before), amounts(changes.after), strict=True)
        ],
        "by_role": _masses(changes, "role"),
        "by_stock": _masses(changes, "stock"),
        **{f"changed_by_{by}": [_roll(each) for each in rolled(changes, by)] for by in ROLLED_BY},
        "groups": [
            {
                "kind": group.kind.word,
                "role": group.role,
                "says": group.says,
                "mass_kg": _figure(group.mass),
                "pieces": [changes.id(row) for row in group.rows.tolist()],
            }
            for group in comparison.groups
        ],
        "pieces": changed_rows(changes),
    }


def changes_text(comparison: Comparison) -> str:
    """Give the changes as JSON text that ends in a line feed; texts keep their own letters (UTF-8)."""
    return json.dumps(changes_data(comparison), ensure_ascii=False, indent=1, allow_nan=False) + "\n"


def _head(state: State, name: str) -> dict[str, Any]:
    return {"name": name, "project_id": state.project_id, "revision": state.revision, "pieces": len(state)}


def _counts(counts: dict[Kind, int]) -> dict[str, int]:
    return {kind.word: count for kind, count in counts.items()}


def _figure(value: float | None) -> float | None:
    return None if value is None else round(value, _DECIMALS)


def _masses(changes: Changes, what: str) -> list[dict[str, Any]]:
    """Pieces and mass before and after, by role or stock."""
    old, new = (masses_by(state, what) for state in (changes.before, changes.after))
    none = (0, 0.0)
    return [
        {
            what: name,
            "pieces": [old.get(name, none)[0], new.get(name, none)[0]],
            "mass_kg": [_figure(old.get(name, none)[1]), _figure(new.get(name, none)[1])],
        }
        for name in dict.fromkeys((*new, *old))
    ]


def _roll(roll: Roll) -> dict[str, Any]:
    return {
        "name": roll.name,
        "changed": roll.changed,
        "counts": _counts(roll.counts),
        "pieces": list(roll.pieces),
        "mass_kg": [_figure(each) for each in roll.mass],
    }
