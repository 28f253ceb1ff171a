"""Sheds with members taken out while the joints of the others stay: as if they had been left out of the drawing."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from shedbim.model.joints import JointKind, JointRun
from shedbim.model.shed import Shed

__all__ = ["freed", "joined_as", "taken_out"]

Ints = NDArray[np.int64]
_MANY = 2


def taken_out(shed: Shed, members: Iterable[int]) -> Shed:
    """The shed without some members; a joint stays, without them, where two of its members are left.

    What joints added stays with the joints that stay, and goes with those that go.
    """
    gone = np.zeros(len(shed.pieces), bool)
    gone[np.asarray(list(members), np.int64)] = True
    joints: list[JointRun] = []
    for run in shed.joints:
        lost = gone[run.pieces]
        hurt = lost.any(axis=1)
        stays = hurt & ((~lost).sum(axis=1) >= _MANY)
        if run.fittings.size:
            gone[run.fittings[hurt & ~stays].ravel()] = True
        joints.append(_rows(run, ~hurt))
        joints += [_left(run, row, ~lost[row]) for row in np.flatnonzero(stays)]
    number = np.cumsum(~gone) - 1
    at = np.flatnonzero(~gone)
    kept = [run for run in joints if len(run.pieces)]
    return replace(
        shed,
        pieces=replace(
            shed.pieces,
            keys=tuple(shed.pieces.keys[i] for i in at),
            part=shed.pieces.part[at],
            placement=shed.pieces.placement[at],
            assembly=shed.pieces.assembly[at],
        ),
        joints=tuple(
            replace(
                run,
                pieces=number[run.pieces],
                fittings=number[run.fittings] if run.fittings.size else run.fittings,
            )
            for run in kept
        ),
    )


def _rows(run: JointRun, keep: NDArray[np.bool_]) -> JointRun:
    return replace(
        run,
        pieces=run.pieces[keep],
        at=run.at[keep],
        points=run.points[keep],
        eccentricity=run.eccentricity[keep],
        fittings=run.fittings[keep] if run.fittings.size else run.fittings,
    )


def _left(run: JointRun, row: int, keep: NDArray[np.bool_]) -> JointRun:
    """One joint with some of its members; welds and clamps of the others go with them."""
    count = len(keep)
    one = _rows(run, np.arange(len(run.pieces)) == row)
    columns = [*np.flatnonzero(keep).tolist(), *range(count, count + one.fittings.shape[1])]
    new = {old: at for at, old in enumerate(columns)}
    return replace(
        one,
        pieces=one.pieces[:, keep],
        at=one.at[:, keep],
        welds=tuple(
            replace(weld, between=(new[weld.between[0]], new[weld.between[1]]))
            for weld in run.welds
            if set(weld.between) <= set(new)
        ),
        clamps=tuple(
            replace(
                clamp,
                group=new[clamp.group],
                layers=tuple((new[column], thickness) for column, thickness in clamp.layers if column in new),
                thread=new.get(clamp.thread) if clamp.thread is not None else None,
            )
            for clamp in run.clamps
        ),
    )


def freed(shed: Shed, piece: int, end: int) -> Shed:
    """The shed with one end of a piece let go: declared free, its joint gone with what that added."""
    joints: list[JointRun] = []
    for run in shed.joints:
        held = ((run.pieces == piece) & (run.at == end)).any(axis=1)
        joints.append(_rows(run, ~held))
    joints.append(
        JointRun(
            JointKind.FREE,
            np.array([[piece]]),
            np.array([[end]], np.int8),
            shed.pieces.placement[[piece], :, 3],
            np.zeros(1),
        )
    )
    return replace(shed, joints=tuple(run for run in joints if len(run.pieces)))


def joined_as(shed: Shed, old: JointKind, new: JointKind, of: Iterable[int] | None = None) -> Shed:
    """The shed with joints of one kind made another; those alone that have one of some pieces, where given."""
    joints: list[JointRun] = []
    for run in shed.joints:
        if run.kind is not old:
            joints.append(run)
            continue
        hit = np.ones(len(run.pieces), bool)
        if of is not None:
            hit = np.isin(run.pieces, np.asarray(list(of))).any(axis=1)
        joints += [_rows(run, ~hit), replace(_rows(run, hit), kind=new)]
    return replace(shed, joints=tuple(run for run in joints if len(run.pieces)))
