"""Pairs of equal angles back to back, one on either side of the plane y = 0 with a gap for gussets between them.

Glossary:
    near, far   the angle on the side of the first line of the building (y < 0), and the one on the other side
    heel        where the two legs of an angle meet; in the plane it lies to one side of the pair's axis
    back, toe   from the axis of centroids to the heel, and to the tip of the leg that lies on the gusset
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.expand.kits import Meets, Member
from shedbim.expand.sticks import Planes, stick
from shedbim.geometry.placements import cross
from shedbim.model.joints import At
from shedbim.model.roles import Role
from shedbim.sections.section import Section

__all__ = ["Envelope", "Pair", "Steel", "pair_of", "size_of_pair"]

Array = NDArray[np.float64]
_SIDE = np.array([0.0, 1.0, 0.0])


@dataclass(frozen=True)
class Envelope:
    """The overall size of a pair: across, and in its plane, mm."""

    designation: str
    width: float
    height: float


#: What carries a roof: bars of one section, or pairs.
Steel = Section | Envelope


@dataclass(frozen=True, eq=False)
class Pair:
    """Two angles of a kit, ``near`` and ``far``.

    Attributes:
        name: without the last word that tells the two apart.
        forward: for each whether its own x runs from the pair's start to its end.
    """

    name: str
    near: Member
    far: Member
    forward: tuple[bool, bool]

    def meets(self, at: At) -> tuple[Meets, Meets]:
        """Both angles at the pair's start, at its end or along it."""
        names = (self.near.name, self.far.name)
        near, far = (
            Meets(name, at if at == At.ALONG or ahead else At(1 - at))
            for name, ahead in zip(names, self.forward, strict=True)
        )
        return near, far


def pair_of(
    name: str,
    role: Role,
    section: Section,
    line: tuple[Array, Array],
    heel: Array,
    gap: float,
    planes: tuple[Planes | None, Planes | None],
    grade: str,
    finish: str,
) -> Pair:
    """Give the pair whose axis runs between two points (2,) in x and z.

    Args:
        heel: unit vector (2,) in x and z to the side of the heels, square to the axis.
        gap: between the two angles, mm.
        planes: that cut its start and its end; square where None.
    """
    (ax, az), (bx, bz) = line
    out = np.array([heel[0], 0.0, heel[1]])
    run = np.array([bx - ax, 0.0, bz - az])
    off = gap / 2 - section.outline.bounds[0]
    members, forward = [], []
    for word, side in (("near", -1.0), ("far", 1.0)):
        start, end = (np.array([x, side * off, z]) for x, z in ((ax, az), (bx, bz)))
        # One leg on the gusset from the heel along -out, the other away from it: x follows from y and z.
        ahead = float(cross(_SIDE * side, -out) @ run) > 0
        first, last = planes if ahead else planes[::-1]
        bar, place = stick(
            section, *((start, end) if ahead else (end, start)), -out, start_planes=first, end_planes=last
        )
        members.append(Member(f"{name}/{word}", role, bar, place, grade, finish))
        forward.append(ahead)
    return Pair(name, members[0], members[1], (forward[0], forward[1]))


def size_of_pair(section: Section, gap: float) -> Envelope:
    """Give the overall size of a pair of angles."""
    return Envelope(f"2 {section.designation}", 2 * section.width + gap, section.height)
