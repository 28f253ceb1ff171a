"""Welds as data: which two things they join, size, length and place. Never solids."""

from __future__ import annotations

from dataclasses import dataclass

__all__ = ["Weld"]


@dataclass(frozen=True)
class Weld:
    """One weld of a joint.

    Attributes:
        between: the two things it joins, as columns of the joint: its members first, then its fittings.
        form: ``fillet`` or ``butt``.
        throat: throat thickness a, mm.
        length: total run, both sides included, mm.
        site: made on site, else in the shop.
        all_round: runs round the whole of the contact.
    """

    between: tuple[int, int]
    form: str
    throat: float
    length: float
    site: bool = False
    all_round: bool = False
