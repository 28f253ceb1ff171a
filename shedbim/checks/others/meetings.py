"""Which pieces share space with bodies of others, or come too near to them: exact, once for each distinct pair."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass
from functools import cache

import numpy as np
from manifold3d import Manifold
from numpy.typing import NDArray

from shedbim.checks.clash.boxes import apart, boxes_around
from shedbim.checks.clash.near_pairs import near_pairs_between
from shedbim.checks.finding import Point
from shedbim.checks.others.bodies import Bodies, Body
from shedbim.checks.subject import Subject
from shedbim.geometry.placements import Placements, apply, compose, inverse
from shedbim.geometry.rows import distinct_rows
from shedbim.model.solids import solid
from shedbim.tolerance import SHARED_VOLUME

__all__ = ["Meeting", "meetings"]

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]

#: Arcs of steel are cut into chords that leave them by so much, mm: a tenth of the least distance anybody asks for.
_CHORD_ERROR = 0.2
#: Relative placements that differ by less are one: mm, and parts of one in directions.
_PLACE, _TURN = 1e-2, 1e-7
#: Steel has gone through an open surface where it still meets it when moved so far to any side, mm.
_SHIFT = 1.0


@dataclass(frozen=True)
class Meeting:
    """A piece and a body that are nearer than asked for.

    Attributes:
        piece: index of the piece.
        body: index of the body.
        point: where they meet, or between them, mm, building axes.
        shares: whether they share space.
        volume: how much of it, mm³; None where the body's surface is open.
        gap: distance, mm, 0 where they touch.
        above: whether the gap is the free height above the body.
    """

    piece: int
    body: int
    point: Point
    shares: bool
    volume: float | None
    gap: float
    above: bool = False


@dataclass(frozen=True)
class _Found:
    """What one distinct pair comes to, in the frame of the piece: ``Meeting`` without the piece and the body."""

    point: Floats
    shares: bool
    volume: float | None
    gap: float
    above: bool = False


def meetings(subject: Subject, bodies: Bodies, body_of: Callable[[int], Body]) -> Iterator[Meeting]:
    """Give every piece and body that share space or are nearer than the body asks for, in order.

    Args:
        subject: the shed.
        bodies: what it is held against.
        body_of: gives the body of a number of a shape; asked once for each that is needed.
    """
    piece, body, relative = _near(subject, bodies)
    if not len(piece):
        return
    part, shape = subject.shed.pieces.part[piece], bodies.shape[body]
    up = subject.shed.pieces.placement[piece][:, 2, :3]
    asked = np.column_stack([bodies.around[body], bodies.above[body]])
    turn = np.concatenate([relative[:, :, :3].reshape(-1, 9), up * (asked[:, 1:] > 0)], axis=1)
    rounded = np.column_stack([part, shape, turn / _TURN, relative[:, :, 3] / _PLACE, asked / _PLACE])
    leaders, which = distinct_rows(np.round(rounded).astype(np.int64))
    made, steel = cache(body_of), cache(lambda k: solid(subject.shed.parts[k].shape, _CHORD_ERROR))
    found = [
        _found(steel(int(part[k])), made(int(shape[k])), relative[k], up[k], *asked[k].tolist())
        for k in leaders
    ]
    for row, k in enumerate(which):
        one = found[k]
        if one is not None:
            place = subject.shed.pieces.placement[piece[row]]
            x, y, z = apply(place, one.point[None])[0].tolist()
            yield Meeting(
                int(piece[row]), int(body[row]), (x, y, z), one.shares, one.volume, one.gap, one.above
            )


def _found(
    steel: Manifold, body: Body, relative: Placements, up: Floats, around: float, above: float
) -> _Found | None:
    """What a piece and a body come to in the frame of the piece; None where they are far enough apart."""
    other = body.solid.transform(relative)
    shared = steel ^ other
    volume = shared.volume()
    if volume > SHARED_VOLUME if body.closed else (volume > 0 and _goes_through(steel, other)):
        return _Found(_middle(shared), True, volume if body.closed else None, 0.0)
    if volume > 0 and around > 0:
        return _Found(_middle(shared), False, None, 0.0)
    gap = steel.min_gap(other, around) if around > 0 else around
    if gap < around:
        return _Found(_between(steel, other, gap), False, None, float(gap))
    if not above:
        return None
    over = Manifold.batch_hull([other, other.translate((up * above).tolist())])
    under = steel ^ over
    if under.volume() <= SHARED_VOLUME:
        return None
    height = float((_corners(under) @ up).min() - (_corners(other) @ up).max())
    return _Found(_middle(under), False, None, max(height, 0.0), above=True)


def _goes_through(steel: Manifold, skin: Manifold) -> bool:
    """Whether steel meets a skin wherever it is moved a little: where it only lies on it, it comes off."""
    shifts = np.concatenate([np.eye(3), -np.eye(3)]) * _SHIFT
    return all((steel.translate(shift.tolist()) ^ skin).volume() > 0 for shift in shifts)


def _corners(body: Manifold) -> Floats:
    return np.asarray(body.to_mesh64().vert_properties, float)[:, :3]


def _middle(body: Manifold) -> Floats:
    low_x, low_y, low_z, high_x, high_y, high_z = body.bounding_box()
    return np.array([low_x + high_x, low_y + high_y, low_z + high_z]) / 2


def _between(steel: Manifold, other: Manifold, gap: float) -> Floats:
    """The middle of where the boxes of two bodies come together."""
    ours, theirs = np.array(steel.bounding_box()), np.array(other.bounding_box())
    low = np.maximum(ours[:3], theirs[:3] - gap)
    high = np.minimum(ours[3:], theirs[3:] + gap)
    return np.asarray((low + high) / 2)


def _near(subject: Subject, bodies: Bodies) -> tuple[Ints, Ints, Placements]:
    """The pieces and bodies whose boxes, each along its own axes, are near, and the bodies as the pieces see them."""
    pieces = subject.shed.pieces
    steel, placement = subject.local_boxes[pieces.part], pieces.placement
    room = np.maximum(bodies.around, bodies.above)
    low, high = boxes_around(bodies.box, bodies.placement)
    ours, theirs = near_pairs_between(
        *boxes_around(steel, placement), low - room[:, None], high + room[:, None]
    )
    relative = compose(inverse(placement[ours]), bodies.placement[theirs])
    first, second = steel[ours], bodies.box[theirs]
    middle = np.einsum("mij,mj->mi", relative[:, :, :3], second.mean(axis=1)) + relative[:, :, 3]
    gap = apart(
        (first[:, 1] - first[:, 0]) / 2,
        (second[:, 1] - second[:, 0]) / 2,
        relative[:, :, :3],
        middle - first.mean(axis=1),
        float(room.max(initial=0.0)),
    )
    near = gap <= room[theirs]
    return ours[near], theirs[near], relative[near]
