"""A picture put together, before it becomes a file: what is drawn, and what is written over it and where."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.model.shed import Shed
from shedbim.writers.pictures.annotations import (
    QUIET,
    Annotation,
    Balloon,
    Rectangle,
    Words,
    capital_height,
)
from shedbim.writers.pictures.boxes import piece_corners
from shedbim.writers.pictures.grid_lines import GridLine, balloons, grid_lines, written_grid
from shedbim.writers.pictures.letters import width as width_of
from shedbim.writers.pictures.piece_labels import piece_labels, seen_pieces
from shedbim.writers.pictures.placing import Room
from shedbim.writers.pictures.projection import Border, Projection, View, fitted
from shedbim.writers.pictures.scale_bar import scale_bar, scale_size
from shedbim.writers.pictures.shot import FINER, Shot, shoot
from shedbim.writers.pictures.tints import Emphasis

__all__ = ["LABELS", "Composition", "compose"]

Floats = NDArray[np.float64]
Indices = NDArray[np.int64]

#: What can be written on a picture; each but the first also brings the grid lines and a scale.
LABELS = ("none", "grid", "marks", "keys")


@dataclass(frozen=True, eq=False)
class Composition:
    """A picture of ``width`` x ``height`` pixels: the drawn view, what is written over it, its caption."""

    width: int
    height: int
    shot: Shot
    projection: Projection
    annotations: tuple[Annotation, ...]
    caption: str


def compose(
    shed: Shed,
    view: View,
    pieces: Indices | None = None,
    *,
    width: int = 1600,
    height: int = 1000,
    labels: str = "none",
    caption: str = "",
    emphasis: Emphasis | None = None,
) -> Composition:
    """Put a picture of a shed, or of some of its pieces, together.

    Args:
        shed: the building.
        view: from where it is seen and what fills the picture.
        pieces: (n,) int, indices of the pieces drawn; None for all.
        width: of the picture, pixels.
        height: of the picture, pixels.
        labels: one of ``LABELS``.
        caption: written in the lower left corner; shortened where it is too long.
        emphasis: which pieces stand out; None for none.
    """
    chosen = np.arange(len(shed.pieces)) if pieces is None else np.asarray(pieces, np.int64)
    emphasis = emphasis or Emphasis(shed, np.zeros(0, np.int64))
    capital = capital_height(width, height)
    corners = piece_corners(shed, chosen).reshape(-1, 3) if len(chosen) else np.zeros((1, 3))
    with_grid = labels != "none" and view.box is None and len(chosen) > 0
    strip = 3.0 * capital if caption or labels != "none" else 0.0
    projection, rows = _fitted(shed, view, corners, (width, height), capital, strip, with_grid=with_grid)
    shot = shoot(shed, projection, chosen, width, height, emphasis)
    written: list[Annotation] = written_grid(rows, projection, capital, shot)
    if labels == "none" and not caption:
        return Composition(width, height, shot, projection, (), "")
    owners = np.append(shot.owners, -1)[shot.canvas.seen(len(shot.owners))[::FINER, ::FINER]]
    room = Room(owners >= 0)
    for each in written:
        if isinstance(each, Balloon):
            room.take(np.array(each.rectangle))
    title = _caption(caption, width, height, capital)
    if title is not None:
        room.take(np.array(title.rectangle))
    scale: list[Annotation] = []
    if labels != "none" and len(chosen):
        place = _emptiest_corner(room, scale_size(projection, capital), capital)
        room.take(np.array(place))
        scale = scale_bar(projection, capital, place)
    if labels in ("marks", "keys"):
        # A view that looks into a box is a close-up; in all others small things would bury the members.
        seen = seen_pieces(shed, shot, projection, owners, close=view.box is not None)
        written += piece_labels(shed, seen, room, owners, shot, _texts(shed, labels), capital)
    written += scale + ([title] if title is not None else [])
    return Composition(width, height, shot, projection, tuple(written), caption)


def _fitted(
    shed: Shed,
    view: View,
    corners: Floats,
    size: tuple[int, int],
    capital: float,
    strip: float,
    *,
    with_grid: bool,
) -> tuple[Projection, list[list[GridLine]]]:
    """The projection that leaves room for the grid's balloons and a strip at the foot, and the grid lines."""
    width, height = size
    projection = fitted(view, corners, width, height, (0.0, 0.0, 0.0, strip))
    if not with_grid:
        return projection, []
    rows = grid_lines(shed.grid, corners.min(axis=0), corners.max(axis=0), projection)
    drawn = projection.points(corners)[:, :2]
    rims = [balloon.rectangle for balloon, _ in balloons(rows, projection, capital) if balloon is not None]
    # Balloons stand off by pixels, whatever the scale: how far they reach beyond the building stays the same.
    reach = np.array([[*drawn.min(axis=0), *drawn.max(axis=0)], *rims])
    low, high = reach[0, :2] - reach[:, :2].min(axis=0), reach[:, 2:].max(axis=0) - reach[0, 2:]
    border: Border = (float(low[0]), float(low[1]), float(high[0]), float(high[1]) + strip)
    return fitted(view, corners, width, height, border), rows


def _texts(shed: Shed, labels: str) -> Sequence[str]:
    """What is written on each piece."""
    if labels == "keys":
        return shed.pieces.keys
    return [shed.parts[part].mark for part in shed.pieces.part.tolist()]


def _caption(text: str, width: int, height: int, capital: float) -> Words | None:
    """The caption in the lower left corner."""
    if not text:
        return None
    most = width - 4 * capital
    if width_of(text, capital) > most:
        while text and width_of(f"{text}…", capital) > most:
            text = text[:-1]
        text = f"{text.rstrip()}…"
    return Words(
        1.5 * capital + width_of(text, capital) / 2, height - 1.7 * capital, text, capital, QUIET, halo=True
    )


def _emptiest_corner(room: Room, size: tuple[float, float], capital: float) -> Rectangle:
    """Where the scale goes: the corner, beginning at the lower right, where it covers least."""
    side, up = size
    left, right = capital, room.width - side - capital
    top, bottom = capital, room.height - up - 1.2 * capital
    places = np.array(
        [
            [x, y, x + side, y + up]
            for x, y in ((right, bottom), (right, top), (left, top), (left, bottom - 2 * capital))
        ]
    )
    cost = room.covered(places) + ~room.free(places)
    x1, y1, x2, y2 = places[int(cost.argmin())].tolist()
    return x1, y1, x2, y2
