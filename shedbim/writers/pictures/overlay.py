"""Strokes, words and balloons drawn over pixels, their rims softened."""

from __future__ import annotations

from collections.abc import Iterable

import numpy as np
from numpy.typing import NDArray

from shedbim.writers.pictures import letters
from shedbim.writers.pictures.annotations import INK, PAPER, Annotation, Balloon, Stroke, Words

__all__ = ["CHAIN", "HALO_WEIGHT", "chain", "draw_over"]

Pixels = NDArray[np.float32]
Segment = tuple[float, float, float, float]

#: Dash, gap, dot and gap of a chain line, in widths of the line (ISO 128-2 line type 04, a long-dashed dotted
#: line; the lengths are shortened to what a screen shows).
CHAIN = (16.0, 5.0, 2.0, 5.0)
#: Width of the strokes of letters, and of the white round them, as shares of the height of a capital.
_LETTER_WEIGHT, HALO_WEIGHT = 0.135, 0.62


def draw_over(pixels: Pixels, annotations: Iterable[Annotation]) -> None:
    """Draw annotations over a picture (height, width, 3), 0 to 255, in place."""
    for each in annotations:
        if isinstance(each, Stroke):
            parts = chain(each) if each.chain else [(each.x1, each.y1, each.x2, each.y2)]
            _lines(pixels, parts, each.width, each.colour)
        elif isinstance(each, Balloon):
            _balloon(pixels, each)
        else:
            _words(pixels, each)


def chain(stroke: Stroke) -> list[Segment]:
    """Cut a stroke into the dashes and dots of a chain line."""
    length = float(np.hypot(stroke.x2 - stroke.x1, stroke.y2 - stroke.y1))
    cuts, at, turn = [], 0.0, 0
    while at < length:
        step = CHAIN[turn % 4] * stroke.width
        if turn % 2 == 0:
            cuts.append((at / length, min((at + step) / length, 1.0)))
        at, turn = at + step, turn + 1
    dx, dy = stroke.x2 - stroke.x1, stroke.y2 - stroke.y1
    return [(stroke.x1 + dx * a, stroke.y1 + dy * a, stroke.x1 + dx * b, stroke.y1 + dy * b) for a, b in cuts]


def _words(pixels: Pixels, words: Words) -> None:
    """Draw words, first the white round them."""
    left = words.x - letters.width(words.text, words.capital) / 2
    foot = words.y + words.capital / 2
    parts = [
        (left + a[0], foot + a[1], left + b[0], foot + b[1])
        for run in letters.strokes(words.text, words.capital)
        for a, b in zip(run[:-1].tolist(), run[1:].tolist(), strict=True)
    ]
    if words.halo:
        _lines(pixels, parts, HALO_WEIGHT * words.capital, PAPER)
    _lines(pixels, parts, max(_LETTER_WEIGHT * words.capital, 1.0), words.colour)


def _balloon(pixels: Pixels, balloon: Balloon) -> None:
    """Draw the frame as a thick dark line with a thinner white one in it, then the label."""
    reach = balloon.half - balloon.radius
    axis = [(balloon.x - reach, balloon.y, balloon.x + reach, balloon.y)]
    rim = max(0.1 * balloon.capital, 1.0)
    _lines(pixels, axis, 2 * balloon.radius, INK)
    _lines(pixels, axis, 2 * (balloon.radius - rim), PAPER)
    _words(pixels, Words(balloon.x, balloon.y, balloon.text, balloon.capital))


def _lines(pixels: Pixels, parts: list[Segment], width: float, colour: int) -> None:
    """Draw round-ended lines of one colour as one shape: where they overlap they are no darker."""
    if not parts:
        return
    ends = np.array(parts, float)
    reach = width / 2 + 1.0
    high, wide, _ = pixels.shape
    left, top = np.floor(np.minimum(ends[:, :2], ends[:, 2:]) - reach).astype(int).clip(0).T
    right, bottom = np.ceil(np.maximum(ends[:, :2], ends[:, 2:]) + reach).astype(int).T
    right, bottom = np.minimum(right, wide), np.minimum(bottom, high)
    x0, y0, x1, y1 = int(left.min()), int(top.min()), int(right.max()), int(bottom.max())
    if x0 >= x1 or y0 >= y1:
        return
    cover = np.zeros((y1 - y0, x1 - x0), np.float32)
    corners = np.stack([left, top, right, bottom], axis=1)
    for (ax, ay, bx, by), (x_from, y_from, x_to, y_to) in zip(ends.tolist(), corners.tolist(), strict=True):
        if x_from >= x_to or y_from >= y_to:
            continue
        x = np.arange(x_from, x_to, dtype=np.float32)[None, :] + np.float32(0.5 - ax)
        y = np.arange(y_from, y_to, dtype=np.float32)[:, None] + np.float32(0.5 - ay)
        dx, dy = bx - ax, by - ay
        along = np.clip((x * dx + y * dy) / max(dx * dx + dy * dy, 1e-9), 0.0, 1.0)
        distance = np.hypot(x - along * dx, y - along * dy)
        view = cover[y_from - y0 : y_to - y0, x_from - x0 : x_to - x0]
        np.maximum(view, np.clip(width / 2 + 0.5 - distance, 0.0, min(width, 1.0)), out=view)
    ink = np.array([(colour >> shift) & 0xFF for shift in (16, 8, 0)], np.float32)
    under = pixels[y0:y1, x0:x1]
    under += (ink - under) * cover[:, :, None]
