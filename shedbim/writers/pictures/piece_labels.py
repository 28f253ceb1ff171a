"""Labels of pieces: the mark or key of what is seen, on it, beside it, or at the end of a leader.

Each is put where it covers least of the drawing and touches no other. First one label for each text there is,
what stands out and what is seen largest before the rest; then repeats, where there is room right beside them.
A leader ends in a dot on its piece (ISO 128-2: a leader that ends within an outline ends in a dot; from memory).
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.geometry.placements import Placements
from shedbim.model.roles import Sort
from shedbim.model.shed import Shed
from shedbim.writers.pictures.annotations import INK, Annotation, Stroke, Words
from shedbim.writers.pictures.extents import middle_line
from shedbim.writers.pictures.placing import Room
from shedbim.writers.pictures.projection import Projection
from shedbim.writers.pictures.shot import Shot

__all__ = ["Seen", "piece_labels", "seen_pieces"]

Floats = NDArray[np.float64]
Indices = NDArray[np.int64]

#: A member is labelled when it shows this many pixels; a fitting or bolt group, where it is labelled at all, when
#: it shows so many: as large as a small letter.
_LEAST_PIXELS, _LEAST_SMALL_PIXELS = 8, 64
#: No more labels than this on a picture.
_MOST_LABELS = 160
#: Where along what is seen of a piece a label may be, best first.
_PLACES = (0.5, 0.35, 0.65, 0.2, 0.8)
#: Leaders: their directions, and their lengths in heights of a capital.
_ANGLES = np.arange(16) * (np.pi / 8) + np.pi / 16
_LENGTHS = (2.2, 3.5, 5.5, 8.0, 12.0)
#: What covering the drawing costs, and each height of a capital that a leader is long; a leader costs as such.
_COVER_COST, _LENGTH_COST, _LEADER_COST, _PLACE_COST, _SIDE_COST = 10.0, 0.06, 0.35, 0.05, 0.12
#: A piece leans more than it lies when the way across it goes so far sideways.
_UPRIGHT = 0.3
#: Words lie on their piece when this share of what they cover is the piece; words beside it stand off by this
#: many heights of a capital.
_ON_PIECE, _BESIDE = 0.97, 0.25
#: Points looked at between a piece and words beside it.
_STEPS = 48
#: A repeat is left out rather than cover more than this share of its rectangle.
_REPEAT_COVER = 0.06


@dataclass(frozen=True, eq=False)
class Seen:
    """What is seen of a piece: its index in the shed, the number of pixels, and at some places along it the
    middle of its width (p, 2) and half that width (p,); ``across`` (2,) points out of its axis to the
    side where a label is looked for first; in pixels. ``bearing``: words may lie on it; bolts they would hide.
    """

    piece: int
    pixels: int
    middle: Floats
    half: Floats
    across: Floats
    bearing: bool = True


def seen_pieces(
    shed: Shed, shot: Shot, projection: Projection, owners: Indices, *, close: bool
) -> list[Seen]:
    """Give what is seen of each piece that may be labelled.

    Args:
        shed: the building.
        shot: the drawn view.
        projection: from building axes to pixels of the picture.
        owners: (height, width) int, the piece seen at each pixel of the picture, -1 for none.
        close: whether fittings and bolts are labelled as well as members; what is highlighted always is.
    """
    least = _least_pixels(shed, shot, close=close)
    flat = owners.ravel()
    at = np.flatnonzero(flat >= 0)
    at = at[np.argsort(flat[at], kind="stable")]
    pieces, starts = np.unique(flat[at], return_index=True)
    found = []
    for piece, where in zip(pieces.tolist(), np.split(at, starts[1:]), strict=True):
        if len(where) >= least[piece]:
            points = np.stack([where % owners.shape[1], where // owners.shape[1]], axis=1) + 0.5
            found.append(_seen(shed, piece, points, projection))
    return found


def piece_labels(
    shed: Shed,
    seen: Sequence[Seen],
    room: Room,
    owners: Indices,
    shot: Shot,
    texts: Sequence[str],
    capital: float,
) -> list[Annotation]:
    """Give the labels of pieces and take their room.

    Args:
        shed: the building.
        seen: what is seen of each piece.
        room: what is free.
        owners: (height, width) int, the piece seen at each pixel of the picture, -1 for none.
        shot: the drawn view.
        texts: what to write on each piece of the shed.
        capital: height of a capital, pixels.
    """
    pale = shot.emphasis.pale
    order = sorted(seen, key=lambda each: (bool(pale[each.piece]), -each.pixels, each.piece))
    firsts: list[Seen] = []
    repeats: list[Seen] = []
    told: set[str] = set()
    for each in order:
        (repeats if texts[each.piece] in told else firsts).append(each)
        told.add(texts[each.piece])
    leaders: list[Annotation] = []
    words: list[Annotation] = []
    for each, first in [(each, True) for each in firsts] + [(each, False) for each in repeats]:
        if len(words) >= _MOST_LABELS:
            break
        label = Words(0.0, 0.0, texts[each.piece], capital, INK, halo=True)
        place = _best(each, label, room, owners, with_leaders=first)
        if place is None:
            continue
        centre, leader = place
        room.take(_rectangles(centre[None], _size(label))[0], leader)
        words.append(Words(float(centre[0]), float(centre[1]), label.text, capital, INK, halo=True))
        if leader is not None:
            x1, y1, x2, y2 = leader.tolist()
            weight = max(0.08 * capital, 0.7)
            leaders += [Stroke(x1, y1, x2, y2, weight), Stroke(x1, y1, x1, y1, 0.42 * capital)]
    return leaders + words


def _least_pixels(shed: Shed, shot: Shot, *, close: bool) -> Floats:
    """How many pixels each piece (n,) must show to be labelled; infinitely many for one that is not."""
    small = np.array([part.role.sort is not Sort.MEMBER for part in shed.parts], bool)[shed.pieces.part]
    least = np.where(small, _LEAST_SMALL_PIXELS if close else np.inf, _LEAST_PIXELS)
    return np.where(shot.emphasis.loud, _LEAST_PIXELS, least)


def _seen(shed: Shed, piece: int, points: Floats, projection: Projection) -> Seen:
    """What is seen of a piece at pixels (n, 2)."""
    motion: Placements = shed.pieces.placement[piece]
    part = shed.parts[shed.pieces.part[piece]]
    line = middle_line(part.body)
    ends = projection.points(line @ motion[:, :3].T + motion[:, 3])[:, :2]
    step = ends[1] - ends[0]
    size = float(np.linalg.norm(step))
    along = step / size if size > 1.0 else np.array([1.0, 0.0])
    across = np.array([-along[1], along[0]])
    # To the right of upright and leaning pieces and above level ones, so that the webs of a truss have their
    # labels on one side and each is nearest to its own.
    if (across[0] < 0) if abs(across[0]) > _UPRIGHT else (across[1] > 0):
        across = -across
    t, n = points @ along, points @ across
    middle, half = [], []
    for at in np.quantile(t, _PLACES):
        # A piece may be seen in bits: the nearest place where it is seen.
        nearest = t[np.abs(t - at).argmin()]
        slab = np.abs(t - nearest) <= 1.0
        low, high = float(n[slab].min()), float(n[slab].max())
        inside = np.flatnonzero(slab)
        best = inside[np.abs(n[inside] - (low + high) / 2).argmin()]
        middle.append(points[best])
        half.append((high - low) / 2 + 0.5)
    bearing = part.role.sort is not Sort.FASTENER
    return Seen(piece, len(points), np.array(middle), np.array(half), across, bearing)


def _best(
    each: Seen, label: Words, room: Room, owners: Indices, *, with_leaders: bool
) -> tuple[Floats, Floats | None] | None:
    """The middle (2,) of the best free place and the leader (4,) it needs; None when there is none."""
    size = _size(label)
    on = _on_the_piece(each, size, room, owners) if each.bearing else None
    if on is not None:
        return on, None
    middles, costs = _beside(each, size, label.capital)
    covered = room.covered(_rectangles(middles, size))
    free = room.free(_rectangles(middles, size)) & (with_leaders | (covered <= _REPEAT_COVER))
    free &= _next_to(each, middles, owners)
    costs = np.where(free, costs + _COVER_COST * covered, np.inf)
    near = int(costs.argmin())
    if with_leaders:
        far, starts, far_costs = _farther(each, size, label.capital)
        rectangles = _rectangles(far, size)
        leaders = np.hstack([starts, _entry(starts, far, size)])
        free = room.free(rectangles) & room.clear(leaders)
        far_costs = np.where(free, far_costs + _COVER_COST * room.covered(rectangles), np.inf)
        best = int(far_costs.argmin())
        if far_costs[best] < costs[near]:
            return far[best], leaders[best]
    return (middles[near], None) if np.isfinite(costs[near]) else None


def _on_the_piece(each: Seen, size: Floats, room: Room, owners: Indices) -> Floats | None:
    """The first free middle (2,) where the words lie wholly on what is seen of the piece, if any."""
    rectangles = _rectangles(each.middle, size)
    for middle, rectangle, free in zip(each.middle, rectangles, room.free(rectangles), strict=True):
        left, top, right, bottom = np.rint(rectangle).astype(int).tolist()
        if free and (owners[top:bottom, left:right] == each.piece).mean() > _ON_PIECE:
            found: Floats = middle
            return found
    return None


def _beside(each: Seen, size: Floats, capital: float) -> tuple[Floats, Floats]:
    """Middles (k, 2) right beside the piece, and what each place costs (k,)."""
    sides = np.array([each.across, -each.across])
    reach = each.half[:, None] + _BESIDE * capital + np.abs(sides) @ size / 2
    middles = each.middle[:, None] + sides * reach[:, :, None]
    costs: Floats = (np.arange(len(each.middle)) * _PLACE_COST)[:, None] + np.array([0.0, _SIDE_COST])
    return middles.reshape(-1, 2), costs.ravel()


def _next_to(each: Seen, middles: Floats, owners: Indices) -> NDArray[np.bool_]:
    """Whether nothing else lies between the piece and each middle (k, 2) beside it, two for each place."""
    starts = np.repeat(each.middle, 2, axis=0)
    steps = starts[:, None] + (middles - starts)[:, None] * np.linspace(0.0, 1.0, _STEPS)[:, None]
    column, row = (np.clip(steps[..., i].astype(np.int64), 0, owners.shape[1 - i] - 1) for i in (0, 1))
    between = owners[row, column]
    alone: NDArray[np.bool_] = ((between == each.piece) | (between < 0)).all(axis=1)
    return alone


def _farther(each: Seen, size: Floats, capital: float) -> tuple[Floats, Floats, Floats]:
    """Middles (k, 2) away from the piece, where their leaders start (k, 2), and what each costs (k,)."""
    place, angle, length = (
        grid.ravel() for grid in np.indices((len(each.middle), len(_ANGLES), len(_LENGTHS)))
    )
    away = np.stack([np.cos(_ANGLES), np.sin(_ANGLES)], axis=1)[angle]
    heights = np.array(_LENGTHS)[length]
    starts = each.middle[place]
    middles = starts + away * (heights * capital + each.half[place] + np.abs(away) @ size / 2)[:, None]
    costs: Floats = place * _PLACE_COST + _LEADER_COST + heights * _LENGTH_COST
    return middles, starts, costs


def _entry(starts: Floats, middles: Floats, size: Floats) -> Floats:
    """Where lines (k, 2) to the middles of rectangles reach their rims (k, 2)."""
    step = starts - middles
    share = (size / 2 / np.maximum(np.abs(step), 1e-9)).min(axis=1)
    rims: Floats = middles + step * np.minimum(share, 1.0)[:, None]
    return rims


def _rectangles(middles: Floats, size: Floats) -> Floats:
    """Rectangles (k, 4) of one size (2,) round middles (k, 2)."""
    return np.hstack([middles - size / 2, middles + size / 2])


def _size(label: Words) -> Floats:
    """Width and height of what words cover."""
    left, top, right, bottom = label.rectangle
    return np.array([right - left, bottom - top])
