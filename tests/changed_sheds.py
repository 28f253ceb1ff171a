"""Sheds with pieces taken away, moved, doubled or given another part; joints follow, and nothing else changes."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import replace
from fnmatch import fnmatchcase

import numpy as np
from numpy.typing import ArrayLike, NDArray

from shedbim.model.joints import JointRun
from shedbim.model.shed import Part, Pieces, Shed

Ints = NDArray[np.int64]


def matching(shed: Shed, *patterns: str) -> Ints:
    """Indices of the pieces whose keys match one of the patterns; refuses patterns that match none."""
    for pattern in patterns:
        assert any(fnmatchcase(key, pattern) for key in shed.pieces.keys), pattern
    found = [any(fnmatchcase(key, pattern) for pattern in patterns) for key in shed.pieces.keys]
    return np.flatnonzero(np.array(found, bool))


def with_fittings(shed: Shed, members: Iterable[int]) -> Ints:
    """The members together with all that the joints at them add."""
    members = np.asarray(list(members), np.int64)
    gone = set(members.tolist())
    for run in shed.joints:
        if run.fittings.size:
            rows = np.isin(run.pieces[:, 1:], members).any(axis=1)
            gone |= set(run.fittings[rows].ravel().tolist())
    return np.array(sorted(gone), np.int64)


def without(shed: Shed, pieces: Iterable[int]) -> Shed:
    """The shed without some pieces; a joint goes when any of its members goes, but its other fittings stay."""
    gone = np.zeros(len(shed.pieces), bool)
    gone[np.asarray(list(pieces), np.int64)] = True
    number = np.cumsum(~gone) - 1
    joints = []
    for run in shed.joints:
        keep = ~gone[run.pieces].any(axis=1)
        if run.fittings.size:
            keep &= ~gone[run.fittings].any(axis=1)
        if keep.any():
            fittings = number[run.fittings[keep]] if run.fittings.size else run.fittings
            joints.append(_rows(run, keep, number[run.pieces[keep]], fittings))
    return replace(shed, pieces=shed.pieces.only(np.flatnonzero(~gone)), joints=tuple(joints))


def _rows(run: JointRun, keep: NDArray[np.bool_], pieces: Ints, fittings: Ints) -> JointRun:
    return replace(
        run,
        pieces=pieces,
        at=run.at[keep],
        points=run.points[keep],
        eccentricity=run.eccentricity[keep],
        fittings=fittings,
    )


def without_joints(shed: Shed, of: Iterable[int]) -> Shed:
    """The shed with the same pieces, but without the joints that any of some pieces is a member of."""
    members = np.asarray(list(of), np.int64)
    joints = []
    for run in shed.joints:
        keep = ~np.isin(run.pieces, members).any(axis=1)
        if keep.any():
            fittings = run.fittings[keep] if run.fittings.size else run.fittings
            joints.append(_rows(run, keep, run.pieces[keep], fittings))
    return replace(shed, joints=tuple(joints))


def moved(shed: Shed, pieces: Iterable[int], by: ArrayLike) -> Shed:
    """The shed with some pieces moved by a vector, mm."""
    placement = shed.pieces.placement.copy()
    placement[np.asarray(list(pieces), np.int64), :, 3] += np.asarray(by, float)
    return replace(shed, pieces=replace(shed.pieces, placement=placement))


def doubled(shed: Shed, piece: int, by: ArrayLike = (0.0, 0.0, 0.0)) -> Shed:
    """The shed with a second piece like one of it, moved by a vector, in no joint."""
    pieces = shed.pieces
    placement = pieces.placement[piece : piece + 1].copy()
    placement[0, :, 3] += np.asarray(by, float)
    return replace(
        shed,
        pieces=Pieces(
            (*pieces.keys, f"{pieces.keys[piece]}/double"),
            np.append(pieces.part, pieces.part[piece]),
            np.concatenate([pieces.placement, placement]),
            np.append(pieces.assembly, -1),
        ),
    )


def remade(shed: Shed, piece: int, part: Part) -> Shed:
    """The shed with one piece of another part, which is put at the end of the table of parts."""
    number = shed.pieces.part.copy()
    number[piece] = len(shed.parts)
    return replace(shed, parts=(*shed.parts, part), pieces=replace(shed.pieces, part=number))
