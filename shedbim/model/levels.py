"""A shed as much as its models and pictures show of it: levels of detail.

    outline       members alone, trimmed, neither drilled, notched nor pressed flat
    coordination  members with their notches, plates without holes, of bolts what stands out of the steel
    fabrication   everything: every bolt whole, every hole

Keys, marks and the order of pieces are the same at each level, and so are the quantities of what is shown: they
are those of ``Part.shape``, which no level changes.
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from shedbim.errors import ModelError
from shedbim.fasteners.levels import outside
from shedbim.model.bars import Bar
from shedbim.model.joints import JointRun
from shedbim.model.plates import Plate
from shedbim.model.roles import Sort
from shedbim.model.shapes import Shape
from shedbim.model.shed import Part, Shed

__all__ = ["LEVELS", "at_level"]

#: From the least to the most.
LEVELS = ("outline", "coordination", "fabrication")


def at_level(shed: Shed, level: str) -> Shed:
    """Give the shed as it is shown at a level of detail.

    At ``outline`` fittings and fasteners are left out, as pieces, as parts and in the joints.

    Raises:
        ModelError: when there is no such level.
    """
    if level not in LEVELS:
        raise ModelError(f"no level of detail {level!r}; there are: {', '.join(LEVELS)}")
    if level == "fabrication":
        return replace(shed, parts=tuple(_drawn(part, part.shape) for part in shed.parts))
    if level == "coordination":
        return replace(shed, parts=tuple(_drawn(part, _without_holes(part.shape)) for part in shed.parts))
    return _members_alone(shed)


def _drawn(part: Part, shape: Shape) -> Part:
    """A part drawn as ``shape``."""
    return replace(part, drawn=None if shape == part.shape else shape)


def _without_holes(shape: Shape) -> Shape:
    """What coordination shows of a shape."""
    if isinstance(shape, Bar | Plate):
        return replace(shape, holes=()) if shape.holes else shape
    return replace(shape, fastener=outside(shape.fastener))


def _as_cut(bar: Bar) -> Bar:
    """A bar as it comes from the saw."""
    return replace(bar, holes=(), notches=(), pressed=(None, None))


def _members_alone(shed: Shed) -> Shed:
    """The shed without fittings and fasteners."""
    is_member = np.array([part.role.sort is Sort.MEMBER for part in shed.parts], bool)
    parts = []
    for part in shed.parts:
        if part.role.sort is Sort.MEMBER:
            shape = part.shape
            bare = _as_cut(shape) if isinstance(shape, Bar) else _without_holes(shape)
            parts.append(_drawn(part, bare))
    stays = is_member[shed.pieces.part] if len(shed.pieces) else np.zeros(0, bool)
    rows = np.flatnonzero(stays)
    part_number = np.cumsum(is_member) - 1
    left_over = shed.pieces.only(rows)
    pieces = replace(left_over, part=part_number[left_over.part])
    piece_number = np.where(stays, np.cumsum(stays) - 1, -1)
    joints = [_bare_joints(run, piece_number[run.pieces]) for run in shed.joints]
    left = tuple(run for run in joints if len(run.pieces))
    return replace(shed, parts=tuple(parts), pieces=pieces, joints=left)


def _bare_joints(run: JointRun, pieces: NDArray[np.int64]) -> JointRun:
    """Joints whose members are now those ``pieces`` (m, k), -1 for those gone, with nothing added to them.

    Joints of fittings, such as the two ends of a stay, go with them.
    """
    kept: NDArray[np.bool_] = np.asarray((pieces >= 0).all(axis=1))
    return replace(
        run,
        pieces=pieces[kept],
        at=run.at[kept],
        points=run.points[kept],
        eccentricity=run.eccentricity[kept],
        fittings=np.zeros((int(kept.sum()), 0), np.int64),
        welds=(),
        clamps=(),
    )
