"""All pieces of a shed and their neighbours, with what every check of clashes asks of a pair of them."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from shedbim.checks.clash.boxes import boxes_around
from shedbim.checks.clash.clearances import reach_of_roles
from shedbim.checks.clash.configurations import Placed
from shedbim.checks.clash.joined import shared_entries
from shedbim.checks.clash.measures import Neighbours, neighbours
from shedbim.checks.finding import Point
from shedbim.checks.subject import Subject
from shedbim.tolerance import SHARED_VOLUME

__all__ = ["Meetings", "meetings", "placed_pieces"]

Bools = NDArray[np.bool_]
Ints = NDArray[np.int64]

#: Two pieces of one part that share so much of its volume are one piece counted twice.
_SAME = 0.9


@dataclass(frozen=True, eq=False)
class Meetings:
    """A shed's pieces and the pairs of them that are near enough to ask anything of."""

    subject: Subject
    placed: Placed
    pairs: Neighbours

    @cached_property
    def shared(self) -> tuple[Ints, Ints, Ints]:
        """Which pair shares a joint, and the entries of its two pieces there: (s,) each."""
        pairs = self.pairs
        return shared_entries(self.subject.entries, len(self.subject.shed.pieces), pairs.first, pairs.second)

    @cached_property
    def declared(self) -> Bools:
        """Whether each pair (m,) shares a joint, or is welded together in one shop assembly."""
        shed = self.subject.shed
        found = np.zeros(len(self.pairs.first), bool)
        found[self.shared[0]] = True
        made = np.array([kind.made == "shop" for kind in shed.assembly_types], bool)
        first, second = (shed.pieces.assembly[k] for k in (self.pairs.first, self.pairs.second))
        one = np.flatnonzero((first == second) & (first >= 0))
        found[one] |= made[shed.assemblies.type[first[one]]]
        return found

    @cached_property
    def overlapping(self) -> Bools:
        """Whether each pair (m,) shares more than what a grinder takes off."""
        return np.asarray(self.pairs.volume > SHARED_VOLUME)

    @cached_property
    def same(self) -> Bools:
        """Whether each pair (m,) is one piece counted twice."""
        pieces, pairs = self.subject.shed.pieces, self.pairs
        own = np.array([part.shape.volume for part in self.subject.shed.parts])
        part = pieces.part[pairs.first]
        alike = part == pieces.part[pairs.second]
        return np.asarray(alike & (pairs.volume > _SAME * own[part]))

    @cached_property
    def doubled(self) -> Bools:
        """Whether each piece (n,) stands where one before it stands already."""
        found = np.zeros(len(self.subject.shed.pieces), bool)
        found[self.pairs.second[self.same]] = True
        return found

    def about(self, pair: int) -> str:
        """Give the roles of a pair as words: warnings of one pair of roles are one finding."""
        role = self.subject.role
        return " + ".join(sorted((role[self.pairs.first[pair]].word, role[self.pairs.second[pair]].word)))

    def place(self, pair: int) -> Point:
        """Give where a pair meets, mm: the middle of what they share, else of where their boxes are nearest."""
        x, y, z = self.pairs.place[pair].tolist()
        if np.isnan(x):
            rows = np.array([self.pairs.first[pair], self.pairs.second[pair]])
            low, high = boxes_around(self.placed.boxes[self.placed.shape[rows]], self.placed.placement[rows])
            x, y, z = ((low.max(axis=0) + high.min(axis=0)) / 2).tolist()
        return x, y, z


def placed_pieces(subject: Subject) -> Placed:
    """Give the pieces of a shed, whole, with every hole."""
    shed = subject.shed
    return Placed([part.shape for part in shed.parts], shed.pieces.part, shed.pieces.placement)


def meetings(subject: Subject) -> Meetings:
    """Give the pieces of a shed that are near to one another, each pair measured."""
    contact, _ = subject.criteria.limit("contact_gap")
    joint, _ = subject.criteria.limit("joint_gap")
    roles = [part.role for part in subject.shed.parts]
    reach, limits = reach_of_roles(roles, max(contact, joint), subject.criteria)
    placed = placed_pieces(subject)
    return Meetings(subject, placed, neighbours(placed, reach, (contact, joint, *limits)))
