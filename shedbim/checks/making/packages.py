"""What leaves the shop as one thing: its mass, and the box that it travels in."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from shedbim.checks.subject import Subject
from shedbim.geometry.placements import apply, compose, inverse

__all__ = ["Package", "Size", "packages", "smallest_box"]

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]
Size = tuple[float, float, float]

#: A flat thing is turned in its plane by steps of this to find its smallest box, rad: a quarter of a degree.
_STEP = np.pi / 720


@dataclass(frozen=True, eq=False)
class Package:
    """One kind of thing that leaves the shop: an assembly, or a loose piece.

    Attributes:
        name: its mark.
        kind: what it is, in a word.
        pieces: the first piece of each of its occurrences.
        parts: number of each part in one of it.
        corners: (n, 3) of the boxes of its pieces, mm, seen along its longest piece.
        mass: kg.
    """

    name: str
    kind: str
    pieces: tuple[int, ...]
    parts: tuple[int, ...]
    corners: Floats
    mass: float

    @property
    def rough_size(self) -> Size:
        """Length, depth and thickness of the box along its longest piece, mm, the greatest first."""
        first, second, third = sorted(np.ptp(self.corners, axis=0).tolist(), reverse=True)
        return first, second, third

    @cached_property
    def size(self) -> Size:
        """Length, depth and thickness of the box that is least deep, mm, the greatest first."""
        return smallest_box(self.corners)


def packages(subject: Subject) -> list[Package]:
    """Give the shop assemblies and the loose pieces of a shed, one for each mark."""
    shed = subject.shed
    made = np.array([each.made == "shop" for each in shed.assembly_types], bool)
    owner = shed.pieces.assembly
    kind = np.where(owner >= 0, shed.assemblies.type[owner] if len(shed.assemblies) else -1, -1)
    in_shop = (kind >= 0) & (made[kind] if made.size else False)
    order = np.argsort(owner, kind="stable")
    found = []
    for number in np.unique(kind[in_shop]).tolist():
        copies = np.flatnonzero(shed.assemblies.type == number)
        first = np.searchsorted(owner[order], copies, side="left")
        last = np.searchsorted(owner[order], copies, side="right")
        filled = last > first
        if filled.any():
            group = order[first[filled][0] : last[filled][0]]
            mains = order[first[filled]]
            row = shed.assembly_types[number]
            found.append(_package(subject, row.mark, row.kind, group, mains))
    loose = np.flatnonzero(~in_shop & subject.is_member)
    parts, firsts = np.unique(shed.pieces.part[loose], return_index=True)
    for part, at in zip(parts.tolist(), firsts.tolist(), strict=True):
        row_of = loose[shed.pieces.part[loose] == part]
        found.append(
            _package(subject, shed.parts[part].mark, shed.parts[part].role.word, loose[at : at + 1], row_of)
        )
    return found


def _package(subject: Subject, name: str, kind: str, group: Ints, firsts: Ints) -> Package:
    """The package of the pieces of one occurrence."""
    shed = subject.shed
    part = shed.pieces.part[group]
    boxes = subject.local_boxes[part]
    # The longest piece gives the direction that the box is first laid along.
    main = group[(boxes[:, 1, 0] - boxes[:, 0, 0]).argmax()]
    seen = compose(inverse(shed.pieces.placement[main]), shed.pieces.placement[group])
    corners = apply(seen, _corners(boxes)).reshape(-1, 3)
    mass = sum(shed.parts[each].shape.mass for each in part.tolist())
    return Package(name, kind, tuple(firsts.tolist()), tuple(part.tolist()), corners, mass)


def _corners(boxes: Floats) -> Floats:
    """The eight corners of boxes (n, 2, 3) as (n, 8, 3)."""
    pick = np.array([(i, j, k) for i in (0, 1) for j in (0, 1) for k in (0, 1)])
    return np.asarray(boxes[:, pick, np.arange(3)])


def smallest_box(points: Floats) -> Size:
    """Give the sides of the box round points (n, 3) that is least deep, mm, the longest side first.

    The points are turned about the axis in which they reach least far; sizes are within the turn of a quarter of a
    degree.
    """
    spread = np.ptp(points, axis=0)
    thin = int(spread.argmin())
    flat = np.delete(points, thin, axis=1)
    angle = np.arange(0.0, np.pi / 2, _STEP)
    turned = np.cos(angle)[:, None] * flat[:, 0] + np.sin(angle)[:, None] * flat[:, 1]
    crossed = np.cos(angle)[:, None] * flat[:, 1] - np.sin(angle)[:, None] * flat[:, 0]
    sides = np.sort(np.stack([np.ptp(turned, axis=1), np.ptp(crossed, axis=1)], axis=1), axis=1)
    depth, length = sides[sides[:, 0].argmin()].tolist()
    first, second, third = sorted((length, depth, float(spread[thin])), reverse=True)
    return first, second, third
