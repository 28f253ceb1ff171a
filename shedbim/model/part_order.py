"""The order in which parts are numbered: it hangs on what they are, and on nothing else.

By role; then bars by section, from long to short, by cuts, by how much is drilled and cut out of them; plates from
thin to thick, then from large to small; bolt groups by designation, grip and count. At last by grade, finish and
where holes, corners and bolts are.
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from shedbim.model.bars import Bar
from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.congruence import forms, ranks
from shedbim.model.plates import Plate
from shedbim.model.roles import Role
from shedbim.model.shapes import Shape

__all__ = ["Distinct", "least_rectangle", "sequence"]

_NUMBER = re.compile(r"(\d+(?:\.\d+)?)")

_Key = tuple[object, ...]


@dataclass(frozen=True)
class Distinct:
    """One distinct thing; ``signature`` as in ``Likeness``."""

    role: Role
    shape: Shape
    grade: str
    finish: str
    signature: tuple[int, ...]


def sequence(found: Sequence[Distinct]) -> list[int]:
    """Give the indices of distinct things in the order of their numbers."""
    bars, plates, groups = {}, {}, {}
    for i, each in enumerate(found):
        if isinstance(each.shape, Bar):
            bars[i] = each.shape
        elif isinstance(each.shape, Plate):
            plates[i] = each.shape
        else:
            groups[i] = each.shape
    keys: dict[int, _Key] = {
        **dict(zip(bars, _bar_keys(list(bars.values())), strict=True)),
        **dict(zip(plates, _plate_keys(list(plates.values())), strict=True)),
        **dict(zip(groups, _bolt_keys(list(groups.values())), strict=True)),
    }
    roles = {role: i for i, role in enumerate(Role)}
    sorts: list[type] = [Bar, Plate, BoltGroup]

    def place(i: int) -> _Key:
        each = found[i]
        return (
            roles[each.role], sorts.index(type(each.shape)), keys[i], each.grade, each.finish, each.signature
        )  # fmt: skip

    return sorted(range(len(found)), key=place)


def least_rectangle(plate: Plate) -> tuple[float, float]:
    """Give the sides of the rectangle of least area round a plate, mm, the longer first, however it is drawn."""
    rim = plate.outline.rim @ np.array([1, 1j])
    corners = np.array(plate.corners) @ np.array([1, 1j])
    steps = np.roll(corners, -1) - corners
    turned = rim * (steps.conj() / np.abs(steps))[:, None]
    sides = np.sort([np.ptp(turned.real, axis=1), np.ptp(turned.imag, axis=1)], axis=0)[::-1].T
    area = ranks(sides.prod(axis=1))
    longest = max(tuple(each) for each in sides[area == area.min()].tolist())
    return longest[0], longest[1]


def _bar_keys(bars: Sequence[Bar]) -> list[_Key]:
    """By section, length and cuts; more holes, notches and pressed ends later."""
    if not bars:
        return []
    form = forms(bars)
    cuts = np.column_stack([-ranks(form.length), form.kind, -ranks(form.slopes).reshape(len(bars), -1)])
    return [
        (
            _natural(bar.section.designation),
            bar.section.family,
            tuple(cut),
            len(bar.notches) + len(bar.holes) + sum(end is not None for end in bar.pressed),
        )
        for bar, cut in zip(bars, cuts.tolist(), strict=True)
    ]


def _plate_keys(plates: Sequence[Plate]) -> list[_Key]:
    """By thickness and size; more holes later."""
    sizes = np.array([least_rectangle(plate) for plate in plates]).reshape(-1, 2)
    thickness = ranks([plate.thickness for plate in plates])
    columns = np.column_stack([thickness, -ranks(sizes[:, 0]), -ranks(sizes[:, 1])]).tolist()
    return [(tuple(size), len(plate.holes)) for size, plate in zip(columns, plates, strict=True)]


def _bolt_keys(groups: Sequence[BoltGroup]) -> list[_Key]:
    """By designation, grip and count."""
    grip = ranks([group.fastener.grip for group in groups]).tolist()
    return [
        (_natural(group.fastener.designation), thickness, group.count)
        for group, thickness in zip(groups, grip, strict=True)
    ]


def _natural(text: str) -> tuple[str | float, ...]:
    """A key that puts 80 before 300: words and numbers by turns, a word first."""
    pieces = _NUMBER.split(text)
    return tuple(float(piece) if i % 2 else piece for i, piece in enumerate(pieces))
