"""What is seen of a shot as vectors: faces as polygons, slender bars as thick lines, edges as thin ones.

What lies behind something is left out, as found on the canvas; all coordinates are pixels of the picture.
"""

from __future__ import annotations

from collections import defaultdict
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.model.bars import Bar
from shedbim.writers.pictures.main_faces import despeckled, main_faces
from shedbim.writers.pictures.picture import edge_strength
from shedbim.writers.pictures.regions import outlines
from shedbim.writers.pictures.shot import FINER, Batch, Shot

__all__ = ["Vectors", "vectors"]

Floats = NDArray[np.float64]
Indices = NDArray[np.int64]

#: A piece no wider than this on the picture, pixels, and at least so many times as long, is one thick line.
_SLENDER, _LONGER = 6.0, 2.0
#: Widths of lines, strengths of edges and mixed colours are rounded to steps, so that many share one path.
_WIDTH_STEP, _STRENGTH_STEP, _COLOUR_STEP = 0.25, 0.05, 4
_LEAST_WIDTH = 0.5
#: How far a bar goes on behind what hides it, in widths of its own.
_BEHIND = 0.5
#: Edges fainter than this would be specks on small pieces, and half of the file.
_LEAST_STRENGTH = 0.2
#: A stretch of an edge shorter than this, pixels, is noise of the depths.
_LEAST_STRETCH = 0.75
#: A broken edge is more in the way of a line than of pixels: it may lie so much farther behind a surface.
_BIAS = 2.0


@dataclass(frozen=True, eq=False)
class Vectors:
    """What is seen, grouped by how it is drawn.

    Attributes:
        faces: by colour 0xRRGGBB the closed polygons (n, 2); holes run the other way round.
        bars: by colour and width, pixels, the lines (n, 4) x1, y1, x2, y2; to be drawn in this order, under the
            faces.
        edges: by strength, 0 to 1, the lines (n, 4).
    """

    faces: dict[int, list[Floats]]
    bars: dict[tuple[int, float], Floats]
    edges: dict[float, Floats]


def vectors(shot: Shot) -> Vectors:
    """Give what is seen of a shot."""
    seen = shot.canvas.seen(len(shot.owners))
    drawn_as = main_faces(seen, shot.owners)
    slender = np.zeros(int(shot.owners.max(initial=-1)) + 1, bool)
    bars: dict[tuple[int, float], list[Floats]] = defaultdict(list)
    edges: dict[float, list[Floats]] = defaultdict(list)
    base = 0
    for batch in shot.batches:
        ends, width = _axes(batch, shot)
        length = np.hypot(*(ends[:, 1, :2] - ends[:, 0, :2]).T) / FINER
        thin = (width <= _SLENDER) & (length >= np.maximum(_LONGER * width, 1.0))
        thin &= isinstance(batch.part.body, Bar)
        slender[batch.pieces[thin]] = True
        own = shot.colours[base : base + len(batch.pieces) * len(batch.normals)]
        base += len(own)
        colour = _mean_colours(own.reshape(len(batch.pieces), -1), batch, shot)
        _add_bars(bars, shot, batch.of(thin), colour[thin], ends[thin], width[thin])
        _add_edges(edges, shot, batch.of(~thin))
    filled = np.append(np.where(slender[shot.owners], -1, drawn_as[:-1]), -1)
    faces: dict[int, list[Floats]] = defaultdict(list)
    for number, points in outlines(despeckled(filled[seen])):
        faces[int(shot.colours[number])].append(points / FINER)
    return Vectors(
        dict(faces),
        _from_behind({key: np.concatenate(lines) for key, lines in bars.items()}),
        {key: np.concatenate(lines) for key, lines in sorted(edges.items())},
    )


def _mean_colours(colours: NDArray[np.uint32], batch: Batch, shot: Shot) -> Indices:
    """The mean colour (n,) of pieces by the colours (n, g) of their faces and the areas these turn to the eye.

    What hides them does not count, so that equal pieces side by side have one colour.
    """
    weight = np.clip(-batch.turned(shot.projection)[:, :, 2], 0.0, None) * batch.areas
    weight /= np.maximum(weight.sum(axis=1, keepdims=True), 1e-12)
    mixed = np.zeros(len(colours), np.int64)
    for shift in (16, 8, 0):
        channel = (weight * ((colours >> np.uint32(shift)) & np.uint32(0xFF))).sum(axis=1)
        steps = np.rint(channel / _COLOUR_STEP).astype(np.int64)
        mixed |= np.minimum(steps * _COLOUR_STEP, 255) << shift
    return mixed


def _from_behind(bars: dict[tuple[int, float], Floats]) -> dict[tuple[int, float], Floats]:
    """Lines (n, 4) by key, what lies farther away on the whole first, from lines with their depth (n, 5)."""
    order = sorted(bars, key=lambda key: (-float(bars[key][:, 4].mean()), key))
    return {key: bars[key][:, :4] for key in order}


def _axes(batch: Batch, shot: Shot) -> tuple[Floats, Floats]:
    """The middle lines of bars (n, 2, 3), canvas, and how wide each is seen (n,), pixels of the picture."""
    (_, low_y, low_z), (length, high_y, high_z) = batch.part.body.box
    y, z = (low_y + high_y) / 2, (low_z + high_z) / 2
    ends = shot.projection.placed(batch.placements, np.array([[0.0, y, z], [length, y, z]]))
    step = ends[:, 1, :2] - ends[:, 0, :2]
    along = step / np.maximum(np.hypot(*step.T), 1e-9)[:, None]
    across = np.stack([-along[:, 1], along[:, 0]], axis=1)
    turned = shot.projection.turn[:2] @ batch.placements[:, :, 1:3] * (shot.projection.scale / FINER)
    spread = np.abs(np.einsum("ni,nij->nj", across, turned)) @ np.array([high_y - low_y, high_z - low_z])
    return ends, spread


def _add_bars(
    bars: dict[tuple[int, float], list[Floats]],
    shot: Shot,
    batch: Batch,
    colour: Indices,
    ends: Floats,
    width: Floats,
) -> None:
    """Add what is seen of pieces with middle lines (n, 2, 3), so wide (n,), in their colours (n,)."""
    row, shares = shot.canvas.of_number(ends, batch.pieces, shot.owners)
    # A bar that passes behind something goes on a little, so that no gap is left where it passes aslant.
    length = np.hypot(*(ends[row, 1, :2] - ends[row, 0, :2]).T) / FINER
    more = (_BEHIND * width[row] / np.maximum(length, 1e-9))[:, None] * (-1.0, 1.0)
    inside = (shares > 0.0) & (shares < 1.0)
    shares = np.clip(shares + np.where(inside, more, 0.0), 0.0, 1.0)
    lines, depth = _stretches(ends, row, shares), ends[row, :, 2].mean(axis=1)
    # What is seen for less than its width would be a dot.
    long = _lengths(lines) >= np.maximum(width[row], _LEAST_STRETCH)
    row, lines, depth = row[long], lines[long], depth[long]
    colour = colour[row]
    steps = np.maximum(np.rint(width[row] / _WIDTH_STEP).astype(np.int64), round(_LEAST_WIDTH / _WIDTH_STEP))
    for key in np.unique(np.stack([colour, steps], axis=1), axis=0).tolist():
        own = (colour == key[0]) & (steps == key[1])
        bars[key[0], key[1] * _WIDTH_STEP].append(np.column_stack([lines[own], depth[own]]))


def _add_edges(edges: dict[float, list[Floats]], shot: Shot, batch: Batch) -> None:
    """Add what is seen of the edges of pieces."""
    full = edge_strength(batch.depth(shot.projection))
    if full < _LEAST_STRENGTH or not len(batch.pieces):
        return
    row, ends = batch.shown_edges(shot.projection)
    strength = full * shot.emphasis.strength(batch.pieces)
    index, shares = shot.canvas.uncovered(ends, _BIAS * shot.bias)
    lines = _stretches(ends, index, shares)
    long = _lengths(lines) >= _LEAST_STRETCH
    steps = np.maximum(np.rint(strength[row[index]] / _STRENGTH_STEP).astype(np.int64), 1)
    for step in np.unique(steps[long]).tolist():
        edges[round(step * _STRENGTH_STEP, 2)].append(lines[long & (steps == step)])


def _stretches(ends: Floats, index: Indices, shares: Floats) -> Floats:
    """Stretches (m, 4), pixels of the picture, of lines (n, 2, 3) on the canvas."""
    start, step = ends[index, 0, :2], ends[index, 1, :2] - ends[index, 0, :2]
    found: Floats = np.hstack([start + step * shares[:, :1], start + step * shares[:, 1:]]) / FINER
    return found


def _lengths(lines: Floats) -> Floats:
    """Lengths (n,) of lines (n, 4)."""
    length: Floats = np.hypot(lines[:, 2] - lines[:, 0], lines[:, 3] - lines[:, 1])
    return length
