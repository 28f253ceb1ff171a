"""Triangles and lines turned into pixels behind a depth buffer, many at a time with numpy.

Frame: x pixels to the right, y pixels down, z mm away from the eye; pixel (i, j) has its centre at
(j + 0.5, i + 0.5). Colours are (n,) uint32, 0xRRGGBB.
"""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

__all__ = ["Canvas"]

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]
Colours = NDArray[np.uint32]

#: Rows, samples or pixels worked on at once: bounds memory at some hundred megabytes.
_AT_ONCE = 2_000_000
_EMPTY = np.uint64(0xFFFFFFFFFFFFFFFF)
_DEPTH_STEPS = 4.0e9  # below 2³² - 1, which stands for nothing drawn


class Canvas:
    """A picture being drawn: what lies nearest at each pixel, and how dark an edge crosses it.

    One 64-bit number holds a pixel: depth above, colour below, so that the least number is the nearest
    colour and the result does not depend on the order of drawing.
    """

    def __init__(self, width: int, height: int, near: float, far: float) -> None:
        self.width, self.height = width, height
        self._near = near
        self._step = max(far - near, 1e-6) / _DEPTH_STEPS
        self._nearest = np.full(width * height, _EMPTY, np.uint64)
        self._ink = np.zeros(width * height, np.float32)

    def triangles(self, corners: Floats, colours: Colours) -> None:
        """Draw triangles (n, 3, 3), picture frame, each in its colour (n,)."""
        low, high = corners[:, :, :2].min(axis=1), corners[:, :, :2].max(axis=1)
        seen = ((high > 0) & (low < (self.width, self.height))).all(axis=1)
        # Walking along the shorter side of the surrounding box leaves the fewest spans.
        size = high - low
        upright = size[:, 0] < size[:, 1]
        rows = seen & ~upright
        self._scan(corners[rows][:, :, [1, 0, 2]], colours[rows], (self.height, self.width), (self.width, 1))
        columns = seen & upright
        self._scan(corners[columns], colours[columns], (self.width, self.height), (1, self.width))

    def lines(self, ends: Floats, colours: Colours) -> None:
        """Draw lines (n, 2, 3), picture frame, one pixel wide, each in its colour (n,)."""
        for line, pixel, depth in self._samples(ends):
            np.minimum.at(self._nearest, pixel, self._packed(depth, colours[line]))

    def ink(self, ends: Floats, strength: Floats, bias: float) -> None:
        """Darken lines (n, 2, 3) by ``strength`` (n,), 0 to 1, where nothing lies ``bias`` mm before them."""
        for line, pixel, depth in self._samples(ends):
            drawn = self._packed(depth - bias, np.zeros(1, np.uint32)) <= self._nearest[pixel]
            np.maximum.at(self._ink, pixel[drawn], strength[line[drawn]].astype(np.float32))

    def pixels(self, background: int, ink: int) -> NDArray[np.float32]:
        """Give the picture (height, width, 3), 0 to 255; the background and the edges as 0xRRGGBB."""
        packed = np.where(self._nearest == _EMPTY, np.uint64(background), self._nearest & np.uint64(0xFFFFFF))
        colour = _channels(packed.astype(np.uint32))
        mixed = colour + (_channels(np.array([ink], np.uint32)) - colour) * self._ink[:, None]
        return mixed.reshape(self.height, self.width, 3)

    def _packed(self, depth: Floats, colours: Colours) -> NDArray[np.uint64]:
        """Depths (n,) in mm and colours as sortable numbers (n,)."""
        steps = np.clip((depth - self._near) / self._step, 0.0, _DEPTH_STEPS).astype(np.uint64)
        packed: NDArray[np.uint64] = (steps << np.uint64(32)) | colours.astype(np.uint64)
        return packed

    def _scan(
        self, corners: Floats, colours: Colours, size: tuple[int, int], stride: tuple[int, int]
    ) -> None:
        """Fill triangles (n, 3, 3) of (scan line, along it, depth), by the size and stride of both axes."""
        order = np.argsort(corners[:, :, 0], axis=1, kind="stable")
        corners = np.take_along_axis(corners, order[:, :, None], axis=1)
        first = np.clip(np.ceil(corners[:, 0, 0] - 0.5), 0, size[0]).astype(np.int64)
        last = np.clip(np.ceil(corners[:, 2, 0] - 0.5), 0, size[0]).astype(np.int64)
        counts = last - first
        crossed = counts > 0
        corners, colours, first, counts = corners[crossed], colours[crossed], first[crossed], counts[crossed]
        slopes, gradient = _slopes(corners)
        for part in _slices(counts):
            owner, within = _spread(counts[part])
            owner += part.start
            line = first[owner] + within
            enter, leave = _span(corners[owner], slopes[owner], line.astype(np.float64) + 0.5)
            begin = np.clip(np.ceil(enter - 0.5), 0, size[1]).astype(np.int64)
            lengths = np.clip(np.ceil(leave - 0.5), 0, size[1]).astype(np.int64) - begin
            filled = lengths > 0
            owner, line, begin, lengths = owner[filled], line[filled], begin[filled], lengths[filled]
            for run in _slices(lengths):
                span, along = _spread(lengths[run])
                span += run.start
                face, across, along = owner[span], line[span], begin[span] + along
                depth = _depth(corners[face], gradient[face], across, along)
                pixel = across * stride[0] + along * stride[1]
                np.minimum.at(self._nearest, pixel, self._packed(depth, colours[face]))

    def _samples(self, ends: Floats) -> Iterator[tuple[Ints, Ints, Floats]]:
        """Walk lines (n, 2, 3) pixel by pixel inside the picture: which line, which pixel and its depth."""
        index, ends = _clipped(ends, self.width, self.height)
        step = ends[:, 1] - ends[:, 0]
        counts = np.ceil(np.abs(step[:, :2]).max(axis=1)).astype(np.int64) + 1
        for part in _slices(counts):
            line, within = _spread(counts[part])
            line += part.start
            points = ends[line, 0] + step[line] * ((within + 0.5) / counts[line])[:, None]
            x, y = np.floor(points[:, 0]).astype(np.int64), np.floor(points[:, 1]).astype(np.int64)
            inside = (x >= 0) & (x < self.width) & (y >= 0) & (y < self.height)
            yield index[line[inside]], (y * self.width + x)[inside], points[inside, 2]


def _slopes(corners: Floats) -> tuple[Floats, Floats]:
    """Slopes of the sides 0-2, 0-1, 1-2 (n, 3) of triangles sorted by scan line, and of the depth (n, 2)."""
    d = np.stack(
        [corners[:, 2] - corners[:, 0], corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 1]], axis=1
    )
    level = d[:, :, 0] == 0
    slopes = np.where(level, 0.0, d[:, :, 1] / np.where(level, 1.0, d[:, :, 0]))
    (a1, b1, z1), (a2, b2, z2) = d[:, 1].T, d[:, 0].T
    area = a1 * b2 - a2 * b1
    flat = area == 0
    area = np.where(flat, 1.0, area)
    gradient = np.stack([(z1 * b2 - z2 * b1) / area, (a1 * z2 - a2 * z1) / area], axis=1)
    return slopes, np.where(flat[:, None], 0.0, gradient)


def _span(corners: Floats, slopes: Floats, line: Floats) -> tuple[Floats, Floats]:
    """Where scan lines (m,) enter and leave sorted triangles (m, 3, 3)."""
    long = corners[:, 0, 1] + slopes[:, 0] * (line - corners[:, 0, 0])
    before = line < corners[:, 1, 0]
    origin = np.where(before[:, None], corners[:, 0, :2], corners[:, 1, :2])
    short = origin[:, 1] + np.where(before, slopes[:, 1], slopes[:, 2]) * (line - origin[:, 0])
    return np.minimum(long, short), np.maximum(long, short)


def _depth(corners: Floats, gradient: Floats, across: Ints, along: Ints) -> Floats:
    """Depth (m,) at the centres of pixels on triangles (m, 3, 3), kept within each triangle's own depths.

    A triangle seen almost edge-on would otherwise reach far beyond itself within a pixel.
    """
    origin = corners[:, 0]
    beside = np.stack([across, along], axis=1) + 0.5 - origin[:, :2]
    depth = origin[:, 2] + (gradient * beside).sum(axis=1)
    kept: Floats = np.clip(depth, corners[:, :, 2].min(axis=1), corners[:, :, 2].max(axis=1))
    return kept


def _clipped(ends: Floats, width: int, height: int) -> tuple[Ints, Floats]:
    """Indices (m,) and the stretches (m, 2, 3) of lines (n, 2, 3) that fall inside the picture."""
    start, step = ends[:, 0], ends[:, 1] - ends[:, 0]
    enter, leave = np.zeros(len(ends)), np.ones(len(ends))
    for axis, limit in ((0, width), (1, height)):
        d = step[:, axis]
        level = d == 0
        safe = np.where(level, 1.0, d)
        t = np.sort(np.stack([(0 - start[:, axis]) / safe, (limit - start[:, axis]) / safe]), axis=0)
        outside = level & ((start[:, axis] < 0) | (start[:, axis] > limit))
        enter = np.where(level, enter, np.maximum(enter, t[0]))
        leave = np.where(outside, -1.0, np.where(level, leave, np.minimum(leave, t[1])))
    index = np.flatnonzero(enter <= leave)
    stretch = np.stack([enter, leave], axis=1)[index]
    return index, start[index][:, None, :] + step[index][:, None, :] * stretch[:, :, None]


def _slices(counts: Ints) -> Iterator[slice]:
    """Cut rows into runs whose counts add up to ``_AT_ONCE``, or to one row's count where that is more."""
    total = np.concatenate([[0], np.cumsum(counts)])
    begin = 0
    while begin < len(counts):
        end = max(int(np.searchsorted(total, total[begin] + _AT_ONCE, side="right")) - 1, begin + 1)
        yield slice(begin, end)
        begin = end


def _spread(counts: Ints) -> tuple[Ints, Ints]:
    """Repeat each row by its count: the row (m,), and the running number within the row (m,)."""
    owner = np.repeat(np.arange(len(counts)), counts)
    start = np.cumsum(counts) - counts
    return owner, np.arange(len(owner)) - start[owner]


def _channels(colours: Colours) -> NDArray[np.float32]:
    """Red, green and blue (n, 3), 0 to 255."""
    return np.stack([(colours >> shift) & 0xFF for shift in (16, 8, 0)], axis=1).astype(np.float32)
