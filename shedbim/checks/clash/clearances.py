"""Distances that pieces of two roles keep."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.limits import Criteria
from shedbim.limits.rows import rows_of
from shedbim.model.roles import Role

__all__ = ["CLEARANCES", "Clearance", "reach_of_roles"]

Floats = NDArray[np.float64]


@dataclass(frozen=True)
class Clearance:
    """Two roles and the name of the limit that their distance is held against."""

    first: Role
    second: Role
    limit: str


def _clearances() -> tuple[Clearance, ...]:
    """The table; refuses doubles and words that are no role."""
    by_word = {role.word: role for role in Role}
    found = [
        Clearance(by_word[row["first"]], by_word[row["second"]], row["limit"])
        for row in rows_of("clearances")
    ]
    if len({frozenset((each.first, each.second)) for each in found}) < len(found):
        raise ValueError("two clearances are of the same roles")
    return tuple(found)


CLEARANCES: tuple[Clearance, ...] = _clearances()


def reach_of_roles(roles: Sequence[Role], least: float, criteria: Criteria) -> tuple[Floats, list[float]]:
    """Give up to which gap each pair of parts is of interest, and the limits of all clearances, mm.

    Args:
        roles: (p,) of the parts.
        least: what holds for all pairs, mm.
        criteria: gives the limits.
    """
    number = {role: k for k, role in enumerate(Role)}
    table = np.full((len(number), len(number)), least)
    limits = []
    for each in CLEARANCES:
        limit, _ = criteria.limit(each.limit)
        limits.append(limit)
        a, b = number[each.first], number[each.second]
        table[a, b] = table[b, a] = max(least, limit)
    rows = np.array([number[role] for role in roles], np.int64)
    return table[rows[:, None], rows[None, :]], sorted(set(limits))
