"""Which bars of one section are the same thing to make, and by which motion one lies on the other.

Glossary:
    motion    a rigid motion of a bar onto its own place: a turn about its axis that its section allows, or a
              flip end for end. A flip is a half turn about an axis square to the bar, so the section's own
              plane is mirrored, and only sections with a mirror axis allow it
    turn      the (2, 2) part of a motion in the section's plane: a rotation, or a reflection for a flip
    form      length and end cuts of a bar as numbers: what is left of it once section and frame are known
    view      the form of a bar seen from the frame that a motion carries onto the bar's own
    canonical the view of a bar that is the same from whichever end and side one looks at it

Two slopes or lengths closer than ``NOISE`` are equal for every choice made here, and they are told equal by
the gap between sorted values, never by rounding: no boundary exists at which they could part.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from itertools import product

import numpy as np
from numpy.typing import ArrayLike, NDArray

from shedbim.geometry.placements import Placements
from shedbim.model.bars import Bar, EndCut
from shedbim.sections.section import Section, Symmetry
from shedbim.tolerance import NOISE, SAME_LENGTH, SOLID_CHORD_ERROR

__all__ = ["Congruence", "Forms", "congruence", "forms", "is_free_to_turn", "ranks", "symmetries"]

Array = NDArray[np.float64]
Ints = NDArray[np.int64]
Bools = NDArray[np.bool_]

#: Kinds of ends: one plane; two planes, the steel inside both; two planes, the steel inside either.
_PLANE, _POINT, _NOTCH = range(3)


@dataclass(frozen=True, eq=False)
class Forms:
    """Bars of one section as columns of s rows.

    Attributes:
        length: (s,) float, mm.
        slopes: (s, 2, 2, 2) float: end, plane, and the pair (a, b) of ``EndCut``; one plane stands twice.
        kind: (s, 2) int: one plane, a point or a notch at each end.
    """

    length: Array
    slopes: Array
    kind: Ints

    def take(self, rows: Ints) -> Forms:
        """The bars of some rows, in their order."""
        return Forms(self.length[rows], self.slopes[rows], self.kind[rows])

    def bar(self, section: Section, row: int) -> Bar:
        """One row as a bar."""
        start, end = (_end_cut(self.slopes[row, i], int(self.kind[row, i])) for i in (0, 1))
        return Bar(section, float(self.length[row]), start, end)


@dataclass(frozen=True, eq=False)
class _Views:
    """s bars after k motions: slopes (k, s, 2, 2, 2), kind (k, s, 2), flip (k,), turn (k, s, 2, 2)."""

    slopes: Array
    kind: Ints
    flip: Bools
    turn: Array


@dataclass(frozen=True, eq=False)
class Congruence:
    """Bars of one section sorted into shapes.

    Attributes:
        shapes: the distinct bars.
        shape_of: (s,) int, index into ``shapes``.
        flipped: (s,) bool, whether the shape's start lies at the bar's end.
        motion: (s, 3, 4) float, placement of the shape's frame in the bar's frame, mm. A shape lies in the
            middle of a bar that is longer than itself.
    """

    shapes: tuple[Bar, ...]
    shape_of: Ints
    flipped: Bools
    motion: Placements


def ranks(values: ArrayLike, gap: float = NOISE) -> Ints:
    """Give each value (...) its place among all of them; a chain of steps up to ``gap`` shares one place."""
    flat = np.asarray(values, float)
    order = np.argsort(flat, axis=None, kind="stable")
    climbs = np.diff(flat.ravel()[order], prepend=-np.inf) > gap
    places = np.empty(flat.size, np.int64)
    places[order] = np.cumsum(climbs)
    return places.reshape(flat.shape)


def forms(bars: Sequence[Bar]) -> Forms:
    """Give length and end cuts of ``bars`` as columns; two equal planes at an end are one plane."""
    slopes = np.array(
        [[cut.slopes if len(cut.slopes) == 2 else cut.slopes * 2 for cut in (b.start, b.end)] for b in bars]
    )
    kind = np.array([[_kind(b.start), _kind(b.end)] for b in bars])
    pointless = (np.ptp(slopes, axis=2) <= 1e-12).all(axis=2)
    return Forms(np.array([b.length for b in bars]), slopes, np.where(pointless, _PLANE, kind))


def congruence(bars: Sequence[Bar], classes: Sequence[int]) -> Congruence:
    """Sort bars of one section into shapes.

    Two bars share a shape only if they have the same class and an allowed motion brings their lengths and
    cuts within ``SAME_LENGTH`` of each other everywhere on the section's bounding box. Every bar is that near
    to its shape; shapes are taken from the shortest bar upwards, so none is longer than what it stands for.
    Neither the shapes nor who shares one depends on the order or the direction of the bars.

    Args:
        bars: s bars, all of one section.
        classes: s numbers; bars with different ones are different whatever their shape.
    """
    section = bars[0].section
    seen, flip, turn, keys = _canonical(section, forms(bars))
    keys = np.column_stack([np.asarray(classes), ranks(seen.length), keys])
    # Equal but for noise: one form, that of the least numbers.
    exact = np.column_stack([seen.length, seen.slopes.reshape(len(bars), -1)])
    order = np.lexsort(np.vstack([exact.T[::-1], keys.T[::-1]]))
    first = np.ones(len(bars), bool)
    first[1:] = (keys[order[1:]] != keys[order[:-1]]).any(axis=1)
    form_of = np.empty(len(bars), np.int64)
    form_of[order] = np.cumsum(first) - 1
    leaders = order[first]
    distinct = seen.take(leaders)
    shape_of, flip_on, turn_on = _lead(section, distinct, keys[leaders, 0])
    chosen = np.unique(shape_of)
    flipped = flip ^ flip_on[form_of]
    length = np.array([bar.length for bar in bars])
    motion = _motion(flipped, turn @ turn_on[form_of], length, distinct.length[shape_of[form_of]])
    shapes = tuple(distinct.bar(section, int(row)) for row in chosen)
    return Congruence(shapes, np.searchsorted(chosen, shape_of[form_of]), flipped, motion)


def is_free_to_turn(bar: Bar) -> bool:
    """Whether any turn about its axis leaves the bar as it is: round and cut square."""
    form = forms([bar])
    reach = (np.linalg.norm(form.slopes, axis=-1) * _half_sizes(bar.section)[0]).max()
    return bar.section.profile.symmetry.turns == 0 and bool(reach < NOISE)


def symmetries(bar: Bar) -> Placements:
    """Give the motions (g, 3, 4) that carry a bar onto itself within ``SAME_LENGTH``, the identity first.

    Of a bar that is free to turn only the identity and one flip are given.
    """
    form, symmetry = forms([bar]), bar.section.profile.symmetry
    views = _views(form, symmetry)
    if symmetry.turns == 0:
        views = _fitted(views, form.slopes)
    alike = _difference(views, form, bar.section)[:, 0] < SAME_LENGTH - NOISE
    length = np.full(int(alike.sum()), bar.length)
    motions = _motion(views.flip[alike], views.turn[alike, 0], length, length)
    kept: list[Placements] = []
    for motion in motions:
        if all(np.abs(motion[:, :3] - other[:, :3]).max() > 1e-3 for other in kept):
            kept.append(motion)
    return np.array(kept)


def _kind(cut: EndCut) -> int:
    if len(cut.slopes) == 1:
        return _PLANE
    return _NOTCH if cut.notched else _POINT


def _end_cut(slopes: Array, kind: int) -> EndCut:
    """The cut of (2, 2) slopes; adding zero turns -0.0 into 0.0, which prints and hashes like one number."""
    pairs = tuple((float(a) + 0.0, float(b) + 0.0) for a, b in slopes)
    return EndCut(pairs[:1]) if kind == _PLANE else EndCut(pairs, notched=kind == _NOTCH)


def _half_sizes(section: Section) -> Array:
    """How far the section reaches from its centroid along y and z (2,), mm."""
    low_y, low_z, high_y, high_z = section.outline.bounds
    half = np.array([max(-low_y, high_y), max(-low_z, high_z)])
    # Bounds are read off chords of arcs; a round section must come out equally large both ways.
    return np.full(2, half.max()) if np.ptp(half) < 2 * SOLID_CHORD_ERROR else half


def _rotations(angle: ArrayLike) -> Array:
    """Rotations (..., 2, 2) by ``angle`` (...) radians; whole quarter turns are exact."""
    c, s = np.round(np.cos(angle), 15), np.round(np.sin(angle), 15)
    return np.stack([np.stack([c, -s], axis=-1), np.stack([s, c], axis=-1)], axis=-2)


def _allowed(symmetry: Symmetry) -> tuple[Bools, Array]:
    """The motions of a section: whether each flips (k,), its turn (k, 2, 2); for round ones one of each."""
    count = max(symmetry.turns, 1)
    turns = _rotations(2 * np.pi * np.arange(count) / count)
    if symmetry.mirror is None:
        return np.zeros(count, bool), turns
    reflection = _rotations(2 * symmetry.mirror) @ np.diag([1.0, -1.0])
    return np.repeat([False, True], count), np.concatenate([turns, turns @ reflection])


def _views(form: Forms, symmetry: Symmetry) -> _Views:
    """All views of bars: each motion, with the two planes of an end in either order."""
    flip, turn = _allowed(symmetry)
    # With p = Q p' a plane x = x0 + g·p has the slopes Qᵀg; a flip swaps the ends and turns x round.
    slopes = np.einsum("kji,sepj->ksepi", turn, form.slopes)
    slopes[flip] = -slopes[flip][:, :, ::-1]
    kind = np.where(flip[:, None, None], form.kind[:, ::-1], form.kind)
    turns = np.broadcast_to(turn[:, None], (len(flip), len(form.length), 2, 2))
    if (form.kind == _PLANE).all():
        return _Views(slopes, kind, flip, turns)
    orders = [
        np.stack([slopes[:, :, 0, ::i], slopes[:, :, 1, ::j]], axis=2) for i, j in product((1, -1), repeat=2)
    ]
    return _Views(
        np.concatenate(orders), np.tile(kind, (4, 1, 1)), np.tile(flip, 4), np.tile(turns, (4, 1, 1, 1))
    )


def _turned(views: _Views, angle: Array) -> _Views:
    """Views of round bars, each turned on by ``angle`` (k, s)."""
    rotation = _rotations(angle)
    slopes = np.einsum("ksji,ksepj->ksepi", rotation, views.slopes)
    return _Views(slopes, views.kind, views.flip, views.turn @ rotation)


def _fitted(views: _Views, target: Array) -> _Views:
    """Views of round bars, each turned to lie best (least squares) on slopes ``target`` (s or 1, 2, 2, 2)."""
    here, there = views.slopes @ np.array([1, 1j]), target @ np.array([1, 1j])
    lean = (here * there.conj()).sum(axis=(-1, -2))
    return _turned(views, np.where(np.abs(lean) > 1e-18, np.angle(lean), 0.0))


def _difference(views: _Views, target: Forms, section: Section) -> Array:
    """How far cuts of views lie from those of ``target`` (s or 1 rows), mm (k, s); inf for another kind."""
    apart = np.abs(views.slopes - target.slopes) * _half_sizes(section)
    is_round = section.profile.symmetry.turns == 0
    away = np.hypot(apart[..., 0], apart[..., 1]) if is_round else apart.sum(axis=-1)
    unlike = (views.kind != target.kind).any(axis=-1)
    result: Array = np.where(unlike, np.inf, away.max(axis=(-1, -2)))
    return result


def _canonical(section: Section, form: Forms) -> tuple[Forms, Bools, Array, Ints]:
    """The canonical forms of bars, flip (s,), turn (s, 2, 2) to them, and what identifies them, (s, c) int.

    The canonical view has the simpler end first, the squarer of two alike, and then leans to +y, then to +z.
    """
    half, symmetry = _half_sizes(section), section.profile.symmetry
    views = _views(form, symmetry)
    if symmetry.turns == 0:
        leans = [views.slopes[:, :, end, plane] for end, plane in product((0, 1), repeat=2)]
        turned = [_turned(views, _lean_angle(lean, half[0])) for lean in leans]
        views = _Views(
            np.concatenate([v.slopes for v in turned]),
            np.concatenate([v.kind for v in turned]),
            np.tile(views.flip, 4),
            np.concatenate([v.turn for v in turned]),
        )
    reach = views.slopes * half
    count = reach.shape[:2]
    size = ranks(np.linalg.norm(reach, axis=-1).sum(axis=-1))
    keys = np.concatenate([views.kind, size, -ranks(reach).reshape(*count, 8)], axis=-1)
    best = np.ones(count, bool)
    for column in np.moveaxis(keys, -1, 0):
        rivals = np.where(best, column, np.iinfo(np.int64).max)
        best &= rivals == rivals.min(axis=0)
    pick, rows = best.argmax(axis=0), np.arange(count[1])
    slopes = np.where(np.abs(reach[pick, rows]) <= NOISE, 0.0, views.slopes[pick, rows])
    canonical = Forms(form.length, slopes, views.kind[pick, rows])
    return canonical, views.flip[pick], views.turn[pick, rows], keys[pick, rows]


def _lean_angle(slopes: Array, radius: float) -> Array:
    """The direction (k, s) that planes with slopes (k, s, 2) lean to, radians from y; 0 for square ones."""
    square = np.hypot(slopes[..., 0], slopes[..., 1]) * radius <= NOISE
    return np.where(square, 0.0, np.arctan2(slopes[..., 1], slopes[..., 0]))


def _lead(section: Section, form: Forms, classes: Ints) -> tuple[Ints, Bools, Array]:
    """For each form the row of the one that stands for it, flip and turn from that one's frame to its own.

    Rows come sorted by class, then length; the first that is left takes all that are near enough to it.
    """
    symmetry, length = section.profile.symmetry, form.length
    count = len(length)
    # How much the two planes of each end lean in all, the lesser end first: no motion changes these, and they
    # differ by at most twice what the planes do. They spare most bars the closer look.
    leans = np.sort(np.linalg.norm(form.slopes * _half_sizes(section), axis=-1).sum(axis=-1), axis=1)
    leader = np.full(count, -1)
    flip, turn = np.zeros(count, bool), np.tile(np.eye(2), (count, 1, 1))
    for row in range(count):
        if leader[row] >= 0:
            continue
        leader[row] = row
        near = (leader < 0) & (classes == classes[row]) & (length < length[row] + SAME_LENGTH - NOISE)
        near &= (np.abs(leans - leans[row]) < 2 * SAME_LENGTH).all(axis=1)
        rows = np.flatnonzero(near)
        if len(rows) == 0:
            continue
        target = form.take(np.array([row]))
        views = _views(form.take(rows), symmetry)
        if symmetry.turns == 0:
            views = _fitted(views, target.slopes)
        apart = _difference(views, target, section)
        best = apart.min(axis=0)
        # Of views that fit equally well take the first: the identity where it is one of them.
        pick = (apart <= best + NOISE).argmax(axis=0)
        alike = best < SAME_LENGTH - NOISE
        taken, pick, at = rows[alike], pick[alike], np.flatnonzero(alike)
        leader[taken], flip[taken], turn[taken] = row, views.flip[pick], views.turn[pick, at]
    return leader, flip, turn


def _motion(flip: Bools, turn: Array, outer: Array, inner: Array) -> Placements:
    """Placements (s, 3, 4) of bars of length ``inner`` amid bars of length ``outer`` after flip and turn."""
    motion = np.zeros((len(flip), 3, 4))
    motion[:, 0, 0] = np.where(flip, -1.0, 1.0)
    motion[:, 1:, 1:3] = turn
    motion[:, 0, 3] = (outer - motion[:, 0, 0] * inner) / 2
    return motion
