"""The bays of a building, those that are alike taken together so that their kit is made once."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from math import ceil

import numpy as np

from shedbim.description.models import Description
from shedbim.expand.kits import Kit, Run
from shedbim.expand.layout import Layout

__all__ = ["Bay", "braced_bays", "is_odd", "runs_of_bays"]

_NANOMETRE = 1e-6

#: Greatest distance between braced bays chosen by rule (IS 800:2007 clause 3.10.2, value from memory).
_BRACED_EVERY = 50_000.0


@dataclass(frozen=True)
class Bay:
    """What the kit of a bay depends on: its length, whether it is the first or the last, and its turn.

    ``odd``: of bays that take turns, whether it is the first, the third and so on; True of all that do not.
    """

    length: float
    first: bool
    last: bool
    odd: bool = True


def runs_of_bays(
    layout: Layout,
    kit: Callable[[Bay], Kit],
    chosen: Callable[[int], bool] = lambda _: True,
    *,
    in_turns: bool = False,
) -> list[Run]:
    """Give the runs of the bays with a ``chosen`` number (0 for the first), one run for each kind of bay.

    ``in_turns``: odd and even bays are two kinds.
    """
    lengths = layout.bay_lengths
    count = len(lengths)
    alike: dict[Bay, list[int]] = {}
    for number, length in enumerate(lengths):
        if chosen(number):
            bay = Bay(
                round(length / _NANOMETRE) * _NANOMETRE, number == 0, number == count - 1,
                not in_turns or is_odd(number),
            )  # fmt: skip
            alike.setdefault(bay, []).append(number)
    numbers, labels = layout.grid.numbers, layout.bay_labels
    return [
        Run(
            kit(bay),
            [labels[i] for i in each],
            np.array([layout.grid.y[i] for i in each]),
            first_lines=[numbers[i] for i in each],
            second_lines=[numbers[i + 1] for i in each],
            next_bays=[] if bay.last else [labels[i + 1] for i in each],
        )
        for bay, each in alike.items()
    ]


def is_odd(number: int) -> bool:
    """Whether a bay (0 for the first) is the first, the third and so on."""
    return number % 2 == 0


def braced_bays(description: Description, layout: Layout) -> frozenset[int]:
    """Give the numbers (0 for the first) of the braced bays: as named, or by rule."""
    asked, count = description.bracing.bays, len(layout.bay_lengths)
    if asked != "rule":
        named = {"first": 0, "last": count - 1}
        return frozenset(named[bay] if isinstance(bay, str) else bay - 1 for bay in asked)
    chosen = {0, count - 1}
    middles = (np.array(layout.grid.y[1:]) + np.array(layout.grid.y[:-1])) / 2
    parts = ceil((middles[-1] - middles[0]) / _BRACED_EVERY - 1e-9)
    for k in range(1, parts):
        wanted = middles[0] + (middles[-1] - middles[0]) * k / parts
        chosen.add(int(np.abs(middles - wanted).argmin()))
    return frozenset(chosen)
