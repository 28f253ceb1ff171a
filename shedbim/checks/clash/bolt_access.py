"""Bolts that a wrench cannot get at: something stands in the room over a head or a nut."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from manifold3d import Manifold
from numpy.typing import NDArray

from shedbim.checks.clash.boxes import boxes_around
from shedbim.checks.clash.configurations import Pair, Placed, measured
from shedbim.checks.clash.meetings import placed_pieces
from shedbim.checks.clash.near_pairs import near_pairs_between
from shedbim.checks.clash.role_fields import fields_of
from shedbim.checks.clash.wrench_room import axes_of, wrench_room
from shedbim.checks.finding import Hit
from shedbim.checks.subject import Subject
from shedbim.fasteners.distances import wrench_wall
from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.solids import solid

__all__ = ["bolt_access"]

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]

#: Something that takes less than this of the room, mm³, is not in the way.
_LET_PASS = 100.0
#: Thickness of the rod that stands for the axis of a bolt when distances from it are measured, mm.
_ROD = 1.0


def bolt_access(subject: Subject) -> Iterator[Hit]:
    """Give a hit for each piece that stands where the wrench on a bolt group goes."""
    length, _ = subject.criteria.limit("wrench_length")
    placed, groups = _with_rooms(placed_pieces(subject), length)
    n = len(subject.shed.pieces)
    low, high = boxes_around(placed.boxes[placed.shape], placed.placement)
    room, piece = near_pairs_between(low[n:], high[n:], low[:n], high[:n])
    beside = _not_its_own(subject, groups[room], piece)
    room, piece = room[beside], piece[beside]
    reach = np.zeros((len(placed.shapes), len(placed.shapes)))
    rods: dict[int, Manifold] = {}

    def taken(pair: Pair) -> tuple[float, float]:
        shared = pair.first ^ pair.second
        volume = shared.volume()
        if volume <= _LET_PASS:
            return 0.0, np.inf
        shape = int(placed.shape[n + room[pair.row]])
        if shape not in rods:
            rods[shape] = solid(axes_of(_group(placed, shape), _ROD), _ROD / 10)
        return volume, shared.min_gap(rods[shape], 1e3) + _ROD / 2

    found = measured(placed, n + room, piece, reach, taken, (0.0, np.inf))
    for k in np.flatnonzero(found[:, 0] > 0).tolist():
        yield _hit(subject, int(groups[room[k]]), int(piece[k]), float(found[k, 1]))


def _hit(subject: Subject, group: int, piece: int, distance: float) -> Hit:
    """A piece that stands beside a bolt group nearer than a wrench needs."""
    shape = subject.shed.parts[int(subject.shed.pieces.part[group])].shape
    assert isinstance(shape, BoltGroup)
    word, other = shape.fastener.designation, subject.role[piece]
    return Hit(
        "bolt-access",
        (group, piece),
        subject.point(group),
        f"No room for the wrench on {word}: the {other.word} stands {{value}} from the axis of a bolt, "
        f"{{limit}} are needed.",
        f"Move the bolts or the {other.word}: see {fields_of(subject.role[group], other)}.",
        distance,
        wrench_wall(shape.fastener.diameter),
        "mm",
        "room for wrenches, hexagon standard series, from a data handbook (fasteners/data/distances.csv)",
        f"{subject.role[group].word} + {other.word}",
    )


def _with_rooms(placed: Placed, length: float) -> tuple[Placed, Ints]:
    """The pieces with the rooms for wrenches behind them, and the bolt group of each room."""
    shapes, number = list(placed.shapes), np.full(len(placed.shapes), -1)
    for row, shape in enumerate(placed.shapes):
        room = wrench_room(shape, length) if isinstance(shape, BoltGroup) else None
        if room is not None:
            number[row] = len(shapes)
            shapes.append(room)
    groups = np.flatnonzero(number[placed.shape] >= 0)
    numbers = np.concatenate([placed.shape, number[placed.shape[groups]]])
    return Placed(shapes, numbers, np.concatenate([placed.placement, placed.placement[groups]])), groups


def _group(placed: Placed, shape: int) -> BoltGroup:
    room = placed.shapes[shape]
    assert isinstance(room, BoltGroup)
    return room


def _not_its_own(subject: Subject, groups: Ints, piece: Ints) -> NDArray[np.bool_]:
    """Whether pieces are neither the bolt group itself, nor the same counted twice, nor the bar its nuts turn on."""
    pieces, n = subject.shed.pieces, len(subject.shed.pieces)
    same = groups == piece
    alike = np.flatnonzero(pieces.part[groups] == pieces.part[piece])
    apart = pieces.placement[groups[alike]] - pieces.placement[piece[alike]]
    same[alike] |= np.abs(apart).max(axis=(1, 2)) < 1.0
    bars = [np.zeros(0, np.int64)]
    for run in subject.shed.joints:
        columns = np.hstack([run.pieces, run.fittings]) if run.fittings.size else run.pieces
        bars += [columns[:, c.group] * n + columns[:, c.thread] for c in run.clamps if c.thread is not None]
    return np.asarray(~same & ~np.isin(groups * n + piece, np.concatenate(bars)))
