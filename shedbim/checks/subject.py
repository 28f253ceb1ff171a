"""What all checks look at: the shed and its criteria, with the arrays that several checks need, made once."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from shedbim.checks.finding import Point
from shedbim.geometry.placements import apply
from shedbim.limits import Criteria
from shedbim.model.bars import Bar
from shedbim.model.joints import At, JointKind
from shedbim.model.other_trades import OtherModel
from shedbim.model.roles import Role, Sort
from shedbim.model.shed import Shed

__all__ = ["FITTED", "Entries", "Subject"]

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]
Bools = NDArray[np.bool_]

#: In ``Entries.at``: the piece is one that the joint adds.
FITTED = 3


@dataclass(frozen=True, eq=False)
class Entries:
    """Who takes part in which joint, a row for each piece of each joint.

    Attributes:
        joint: (e,) number of the joint, counted over all runs in their order.
        piece: (e,) index of the piece.
        at: (e,) an ``At``, or ``FITTED``.
        column: (e,) column of the piece among the members, then the fittings, of its joint.
    """

    joint: Ints
    piece: Ints
    at: NDArray[np.int8]
    column: Ints


@dataclass(frozen=True, eq=False)
class Subject:
    """A shed and what it is held against; checks read it and change nothing."""

    shed: Shed
    criteria: Criteria
    others: tuple[OtherModel, ...] = ()

    @cached_property
    def role(self) -> NDArray[np.object_]:
        """The ``Role`` of each piece (n,)."""
        roles = np.empty(len(self.shed.parts), object)
        roles[:] = [part.role for part in self.shed.parts]
        return np.asarray(roles[self.shed.pieces.part])

    def having(self, *roles: Role) -> Ints:
        """Give the indices of the pieces with one of the roles, in order."""
        wanted = np.array([part.role in roles for part in self.shed.parts], bool)
        return np.flatnonzero(wanted[self.shed.pieces.part])

    @cached_property
    def is_member(self) -> Bools:
        """Whether each piece (n,) is a member, neither fitting nor fastener."""
        wanted = np.array([part.role.sort is Sort.MEMBER for part in self.shed.parts], bool)
        return np.asarray(wanted[self.shed.pieces.part])

    @cached_property
    def axes(self) -> Floats:
        """Where the axis of each bar starts and ends (n, 2, 3), mm, building axes; nan for what is no bar."""
        local = np.full((len(self.shed.parts), 2, 3), np.nan)
        for row, part in enumerate(self.shed.parts):
            if isinstance(part.shape, Bar):
                local[row] = 0.0
                local[row, :, 0] = part.shape.axis
        return np.asarray(apply(self.shed.pieces.placement, local[self.shed.pieces.part]))

    @cached_property
    def local_boxes(self) -> Floats:
        """Least and greatest corner of each part (p, 2, 3), mm, in its own frame."""
        return np.array([part.shape.box for part in self.shed.parts]).reshape(-1, 2, 3)

    @cached_property
    def centres(self) -> Floats:
        """The middle of the box of each piece (n, 3), mm, building axes."""
        middle = self.local_boxes.mean(axis=1)[self.shed.pieces.part]
        return np.asarray(apply(self.shed.pieces.placement, middle[:, None])[:, 0])

    @cached_property
    def entries(self) -> Entries:
        """Who takes part in which joint."""
        joint, piece, at, column, first = [], [], [], [], 0
        for run in self.shed.joints:
            m, k = run.pieces.shape
            fittings = run.fittings if run.fittings.size else np.zeros((m, 0), np.int64)
            width = k + fittings.shape[1]
            joint.append(np.repeat(np.arange(first, first + m), width))
            piece.append(np.hstack([run.pieces, fittings]).ravel())
            at.append(np.hstack([run.at, np.full(fittings.shape, FITTED, np.int8)]).ravel())
            column.append(np.tile(np.arange(width), m))
            first += m
        if not joint:
            none = np.zeros(0, np.int64)
            return Entries(none, none, none.astype(np.int8), none)
        whole = [np.concatenate(each) for each in (joint, piece, at, column)]
        return Entries(whole[0], whole[1], whole[2].astype(np.int8), whole[3])

    @cached_property
    def joint_kinds(self) -> tuple[JointKind, ...]:
        """The kind of each joint, counted over all runs."""
        return tuple(run.kind for run in self.shed.joints for _ in range(len(run.pieces)))

    @cached_property
    def joint_points(self) -> Floats:
        """The work point of each joint (j, 3), mm."""
        points = [run.points for run in self.shed.joints]
        return np.concatenate(points) if points else np.zeros((0, 3))

    def ends_in_joint(self) -> Bools:
        """Give whether each end (n, 2) of each piece takes part in a joint other than a free end."""
        held = np.zeros((len(self.shed.pieces), 2), bool)
        free = np.array([kind is JointKind.FREE for kind in self.joint_kinds], bool)
        rows = self.entries.at <= At.END
        rows &= ~free[self.entries.joint]
        held[self.entries.piece[rows], self.entries.at[rows]] = True
        return held

    def mark(self, piece: int) -> str:
        """Give the mark of a piece."""
        return self.shed.parts[int(self.shed.pieces.part[piece])].mark

    def about(self, pieces: tuple[int, ...]) -> str:
        """Give what tells pieces apart but for their frame, bay, course and number: stays when these change."""
        return " + ".join(sorted({_tail(self.shed.pieces.keys[piece]) for piece in pieces}))

    def point(self, piece: int) -> Point:
        """Give the middle of a piece, mm."""
        x, y, z = self.centres[piece].tolist()
        return x, y, z


def _tail(key: str) -> str:
    """A key without its line or bay and without numbers."""
    first, *rest = key.split("/")
    return "/".join(word for word in rest if not word.isdigit()) or first
