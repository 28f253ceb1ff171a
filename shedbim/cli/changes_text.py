"""Changes as lines that a person reads: how many, quantities before and after, and the weightiest ones in groups."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

from shedbim.revisions.amounts import Amount, amounts
from shedbim.revisions.change_groups import ChangeGroup
from shedbim.revisions.changes import Changes, Kind

__all__ = ["count_words", "group_lines", "quantity_rows"]

#: Quantities whose values are whole numbers or close enough to be told so.
_FINE = {"m": 1, "m²": 1}


def count_words(changes: Changes) -> str:
    """Give in one line how many pieces changed how; that nothing did where that is so."""
    told = ", ".join(f"{count:,} {kind.word}" for kind, count in changes.counts().items() if count)
    return told or "nothing changed"


def quantity_rows(changes: Changes, *, all_of_them: bool = True) -> list[tuple[str, str, str, str]]:
    """Give quantity, value before, value after and difference; ``?`` for what a state does not tell."""
    rows = []
    for one, other in zip(amounts(changes.before), amounts(changes.after), strict=True):
        difference = "?"
        if one.value is not None and other.value is not None:
            step = other.value - one.value
            if not all_of_them and abs(step) < 0.5 * 10.0 ** -_FINE.get(one.unit, 0):
                continue
            difference = _figure(step, one.unit, sign="+")
        elif not all_of_them:
            continue
        name = f"{one.name}, {one.unit}" if one.unit else one.name
        rows.append((name, _shown(one), _shown(other), difference))
    return rows


def _shown(amount: Amount) -> str:
    return "?" if amount.value is None else _figure(amount.value, amount.unit)


def _figure(value: float, unit: str, sign: str = "") -> str:
    decimals = _FINE.get(unit, 0)
    rounded = round(value, decimals) + 0.0
    return f"{rounded:{sign if rounded else ''},.{decimals}f}"


def group_lines(groups: Sequence[ChangeGroup], most: int) -> Iterator[str]:
    """Give the most important groups, one a line, and how many pieces are not told of.

    What joints add follows members, so members come first; a group of other marks alone comes last.
    """
    if not groups:
        return
    ranked = sorted(groups, key=lambda each: (each.kind in (Kind.REMARKED, Kind.REJOINED), -each.mass))
    chosen = set(map(id, ranked[:most]))
    for group in groups:
        if id(group) in chosen:
            yield f"{group.says}, {group.mass:,.0f} kg"
    left = ranked[most:]
    if left:
        pieces = sum(len(each.rows) for each in left)
        yield f"and {pieces:,} pieces more in {len(left):,} groups"
