"""The bays of a building, those that are alike taken together so that their kit is made once."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from shedbim.expand.kits import Kit, Run
from shedbim.expand.layout import Layout

__all__ = ["Bay", "runs_of_bays"]

_NANOMETRE = 1e-6


@dataclass(frozen=True)
class Bay:
    """What the kit of a bay depends on: its length and whether it is the first or the last."""

    length: float
    first: bool
    last: bool


def runs_of_bays(
    layout: Layout, kit: Callable[[Bay], Kit], chosen: Callable[[int], bool] = lambda _: True
) -> list[Run]:
    """Give the runs of the bays with a ``chosen`` number (0 for the first), one run for each kind of bay."""
    lengths = layout.bay_lengths
    count = len(lengths)
    alike: dict[Bay, list[int]] = {}
    for number, length in enumerate(lengths):
        if chosen(number):
            bay = Bay(round(length / _NANOMETRE) * _NANOMETRE, number == 0, number == count - 1)
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
