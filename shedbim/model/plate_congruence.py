"""Which plates are the same thing to cut: equal under a motion in their plane, or turned over.

A plate is compared by its corners, the middles of its sides, which tell how these bulge, and its holes. Every
motion of one plate onto another carries corners onto corners in their order round the outline, this way or that;
a round plate has no corners, and is turned so that its holes fall on one another.
"""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from shedbim.geometry.placements import Placements
from shedbim.model.congruence import ranks
from shedbim.model.likeness import Gathering, Likeness
from shedbim.model.patterns import (
    Marker,
    Pattern,
    best_fit,
    far_off,
    feature_markers,
    lead,
    patterns,
    signatures,
    turns_onto,
)
from shedbim.model.plates import Plate
from shedbim.tolerance import NOISE

__all__ = ["plate_likeness", "plate_symmetries"]

Array = NDArray[np.float64]
Ints = NDArray[np.int64]
Complex = NDArray[np.complex128]


class _Seen:
    """A plate as it is compared: corners (k,) as complex numbers in order, none for a round plate; pattern."""

    def __init__(self, plate: Plate, corners: Complex, pattern: Pattern) -> None:
        self.thickness = plate.thickness
        self.corners = corners
        self.pattern = pattern
        # The outline comes first; of a round plate it is marked on the axis.
        self.middle = complex(corners.mean()) if len(corners) else complex(*pattern.points[0, :2])


def plate_likeness(plates: Sequence[Plate], classes: Sequence[int]) -> Likeness:
    """Sort plates into shapes; those of different ``classes`` are different.

    Equal plates have equal thickness, and a motion brings each point of one to within ``SAME_LENGTH`` of its like.
    """
    seen = _seen(plates)
    thickness = ranks([plate.thickness for plate in plates])
    groups: dict[tuple[int, ...], list[int]] = defaultdict(list)
    for i, each in enumerate(seen):
        groups[(int(classes[i]), int(thickness[i]), *each.pattern.content)].append(i)
    found = Gathering(len(plates))
    for (_, _, *content), rows in sorted(groups.items()):
        lot = [plates[i] for i in rows]
        marks, order, leader, motion = _sorted_out(lot, [seen[i] for i in rows])
        found.add(rows, order, leader, lot, [(*content, *each) for each in marks])
        found.motion[rows] = motion
    return found.done()


def _sorted_out(
    lot: Sequence[Plate], seen: Sequence[_Seen]
) -> tuple[list[tuple[int, ...]], list[int], Ints, Placements]:
    """Signatures, order, leaders and motions of plates with as many corners and holes of the same sizes."""
    marks = signatures([_sides(each) for each in seen], seen[0].pattern.labels)
    # Equal but for noise: the one with the least numbers leads, in whatever order they came.
    order = sorted(range(len(lot)), key=lambda i: (marks[i], _numbers(lot[i])))

    def fit(i: int, j: int) -> Placements | None:
        return best_fit(_motions(seen[i], seen[j]), seen[i].pattern, seen[j].pattern)

    return marks, order, *lead(order, np.array([_spread(each) for each in seen]), fit)


def plate_symmetries(plate: Plate) -> tuple[Placements, bool]:
    """Give the motions (g, 3, 4) that carry a plate onto itself, and whether it is free to turn about its middle.

    The identity comes first; of a plate that is free to turn only that and one turning over are given.
    """
    (seen,) = _seen([plate])
    motions = _motions(seen, seen)
    kept: list[Placements] = []
    for motion in motions:
        if best_fit(motion[None], seen.pattern, seen.pattern) is None:
            continue
        if all(np.abs(motion[:, :3] - other[:, :3]).max() > 1e-3 for other in kept):
            kept.append(motion)
    reach = np.abs(seen.pattern.points[:, :2] @ np.array([1, 1j]) - seen.middle)
    return np.array(kept), len(seen.corners) == 0 and bool(reach.max() < NOISE)


def _seen(plates: Sequence[Plate]) -> list[_Seen]:
    """All plates as they are compared."""
    corners, markers = [], []
    for plate in plates:
        own, outline = _outline(plate)
        corners.append(own)
        markers.append(outline + feature_markers(plate.holes))
    return [
        _Seen(plate, own, pattern)
        for plate, own, pattern in zip(plates, corners, patterns(markers), strict=True)
    ]


def _outline(plate: Plate) -> tuple[Complex, list[Marker]]:
    """The corners of a plate, none where it is round, and the markers of its outline, named to come first."""
    corner = np.array(plate.corners) @ np.array([1, 1j])
    bulge = np.array(plate.bulges) if plate.bulges else np.zeros(len(corner))
    step = np.roll(corner, -1) - corner
    middle = (corner + np.roll(corner, -1)) / 2 - 1j * step * bulge / 2
    height = plate.thickness / 2
    around = np.concatenate([corner, middle])
    centre = complex(around.mean())
    if (bulge > 0).all() and np.ptp(np.abs(around - centre)) < NOISE:
        # Its radius is told by two points on its axis, which turning over brings onto each other.
        radius = float(np.abs(around - centre).mean())
        levels = (height - radius, height + radius)
        return np.zeros(0, complex), [(" round", 0.0, 0.0, (centre.real, centre.imag, z)) for z in levels]
    # A corner in the midst of a straight side is none.
    before, bent = np.roll(step, 1), (bulge != 0) | (np.roll(bulge, 1) != 0)
    across = (before.conj() * step).imag / np.maximum(np.abs(before), np.abs(step))
    real = bent | (np.abs(across) > NOISE)
    if not real.all():
        corner, bulge = corner[real], bulge[real]
        step = np.roll(corner, -1) - corner
        middle = (corner + np.roll(corner, -1)) / 2 - 1j * step * bulge / 2
    markers: list[Marker] = [(" corner", 0.0, 0.0, (p.real, p.imag, height)) for p in corner.tolist()]
    markers += [(" side", 0.0, 0.0, (p.real, p.imag, height)) for p in middle.tolist()]
    return corner, markers


def _motions(one: _Seen, other: _Seen) -> Placements:
    """The motions (v, 3, 4) of a plate that may carry it onto another with as many corners."""
    turns, shifts, over = [], [], []
    for turned_over in (False, True):
        here = one.corners.conj() if turned_over else one.corners
        middle = one.middle.conjugate() if turned_over else one.middle
        if len(here) == 0:
            around = one.pattern.points[:, :2] @ np.array([1, 1j])
            around = (around.conj() if turned_over else around) - middle
            there = other.pattern.points[:, :2] @ np.array([1, 1j]) - other.middle
            angles = turns_onto(_plane(around), _plane(there), one.pattern.labels)
        else:
            count = len(here)
            steps = -1 if turned_over else 1
            rows = (np.arange(count)[:, None] + steps * np.arange(count)) % count
            lean = (here - middle).conj() * (other.corners[rows] - other.middle)
            angles = np.angle(lean.sum(axis=1))
        turn = np.exp(1j * angles)
        turns.append(turn)
        shifts.append(other.middle - turn * middle)
        over.append(np.full(len(turn), turned_over))
    return _placed(np.concatenate(turns), np.concatenate(shifts), np.concatenate(over), one.thickness)


def _placed(turn: Complex, shift: Complex, over: NDArray[np.bool_], thickness: float) -> Placements:
    """Placements (v, 3, 4) of a plate turned and moved in its plane, some of them turned over about x before."""
    motions = np.zeros((len(turn), 3, 4))
    side = np.where(over, -1.0, 1.0)
    motions[:, 0, 0], motions[:, 1, 0] = turn.real, turn.imag
    motions[:, 0, 1], motions[:, 1, 1] = -turn.imag * side, turn.real * side
    motions[:, 2, 2] = side
    motions[:, 0, 3], motions[:, 1, 3] = shift.real, shift.imag
    motions[:, 2, 3] = np.where(over, thickness, 0.0)
    # What is nothing but noise is nothing: plates that lie square stay square.
    motions[:, :, :3][np.abs(motions[:, :, :3]) < NOISE * 1e-6] = 0.0
    motions[:, :, 3][np.abs(motions[:, :, 3]) < NOISE * 1e-3] = 0.0
    return motions


def _sides(each: _Seen) -> Array:
    """The points (v, m, 3) of a plate from each frame that it offers: a corner and the side that follows."""
    points = each.pattern.points
    plane = points[:, :2] @ np.array([1, 1j])
    views = []
    for turned_over in (False, True):
        around = (plane.conj() if turned_over else plane) - (
            each.middle.conjugate() if turned_over else each.middle
        )
        if len(each.corners) == 0:
            far = far_off(around)
            levers = around[far] if far.any() else np.ones(1, complex)
        else:
            centred = each.corners - each.middle
            centred = centred.conj() if turned_over else centred
            levers = np.roll(centred, 1 if turned_over else -1) - centred
        for lever in levers:
            turned = around * (lever.conjugate() / abs(lever))
            height = each.thickness - points[:, 2] if turned_over else points[:, 2]
            views.append(np.column_stack([turned.real, turned.imag, height]))
    return np.array(views)


def _plane(points: Complex) -> Array:
    return np.column_stack([points.real, points.imag])


def _spread(each: _Seen) -> Array:
    """How far the points of each label lie from the middle, sorted (m,), mm."""
    reach = np.abs(each.pattern.points[:, :2] @ np.array([1, 1j]) - each.middle)
    result: Array = reach[np.lexsort((reach, each.pattern.labels))]
    return result


def _numbers(plate: Plate) -> tuple[object, ...]:
    """All numbers of a plate: they sort plates that are equal but for noise or motion."""
    return plate.corners, plate.bulges, [(h.centre, h.axis, h.along) for h in plate.holes]
