"""Changes as the view colours by them: the pieces of the later state by the change that they are told under."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterable

from shedbim.model.shed import Shed
from shedbim.revisions.change_groups import ChangeGroup
from shedbim.revisions.changes import Changes
from shedbim.writers.view.found import rows_of
from shedbim.writers.view.shown import ShownChange

__all__ = ["shown_changes"]


def shown_changes(
    shed: Shed, changes: Changes, groups: Iterable[ChangeGroup], drawn: Shed
) -> list[ShownChange]:
    """Give what became of the pieces that stand; each piece comes once.

    Args:
        shed: the later state.
        changes: to that state.
        groups: of the changes.
        drawn: what the view shows of the shed.
    """
    pieces: dict[str, list[int]] = defaultdict(list)
    for group in groups:
        pieces[group.kind.word] += [int(each) for each in changes.new[group.rows] if each >= 0]
    row = rows_of(shed, drawn, {piece for some in pieces.values() for piece in some})
    shown = {
        word: tuple(sorted(row[piece] for piece in some if piece in row)) for word, some in pieces.items()
    }
    return [ShownChange(word, some) for word, some in shown.items() if some]
