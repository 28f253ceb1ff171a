"""Kits: templates of bars that repeat along the building, and the runs that place them.

Glossary:
    kit      bars and meetings in the axes of one frame (y = 0 on its line) or one bay (y from its first
             line), described once however often they are placed
    run      a kit placed many times, each time with the label that its keys begin with
    meeting  the template of a joint; its pieces are named within the kit, or in a frame or bay beside it
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from shedbim.geometry.placements import IDENTITY, Placements
from shedbim.model.bars import Bar
from shedbim.model.joints import At, JointKind
from shedbim.model.roles import Role

__all__ = ["FIRST_LINE", "HERE", "NEXT_BAY", "SECOND_LINE", "Kit", "Meeting", "Meets", "Member", "Run"]

#: Where the piece of a meeting is looked for: in the kit itself, in the frame on the bay's first or
#: second line, or in the bay after this one.
HERE, FIRST_LINE, SECOND_LINE, NEXT_BAY = range(4)


@dataclass(frozen=True, eq=False)
class Member:
    """One bar of a kit.

    Attributes:
        name: its key without the label of line or bay, unique in the kit.
        placement: (3, 4) of the bar's own frame in the kit's axes.
    """

    name: str
    role: Role
    bar: Bar
    placement: Placements
    grade: str
    finish: str


@dataclass(frozen=True)
class Meets:
    """One piece of a meeting: its name, the place of it that is taken, and where it is looked for."""

    name: str
    at: At
    where: int = HERE


@dataclass(frozen=True, eq=False)
class Meeting:
    """The template of a joint; the first piece is what carries the rest. ``point`` (3,) mm, kit axes."""

    kind: JointKind
    pieces: tuple[Meets, ...]
    point: NDArray[np.float64]
    eccentricity: float = 0.0


@dataclass(frozen=True, eq=False)
class Kit:
    """A template of bars.

    Attributes:
        members: bars that belong to this kit itself.
        meetings: joints; they may name members of children too.
        assembly: (name, kind, made) when the members are put together as one assembly, else None.
        origin: (3, 4) placement of the assembly's own frame in the kit's axes.
        children: kits in the same axes whose assemblies are part of this one.
    """

    members: tuple[Member, ...]
    meetings: tuple[Meeting, ...] = ()
    assembly: tuple[str, str, str] | None = None
    origin: Placements = field(default_factory=lambda: IDENTITY)
    children: tuple[Kit, ...] = ()

    def all_members(self) -> list[Member]:
        """Own members, then those of the children in their order."""
        return [*self.members, *(m for child in self.children for m in child.all_members())]


@dataclass(frozen=True, eq=False)
class Run:
    """A kit placed n times along the building.

    Attributes:
        labels: n labels of lines (``3``) or bays (``3-4``).
        offsets: (n,) y of the kit's own line in building axes, mm.
        first_lines, second_lines, next_bays: for each placing, the labels its meetings look beside it.
    """

    kit: Kit
    labels: Sequence[str]
    offsets: NDArray[np.float64]
    first_lines: Sequence[str] = ()
    second_lines: Sequence[str] = ()
    next_bays: Sequence[str] = ()
