"""Triangles and lines turned into pixels behind a depth buffer, many at a time with numpy.

Frame: x pixels to the right, y pixels down, z mm away from the eye; pixel (i, j) has its centre at
(j + 0.5, i + 0.5). What is drawn carries a number, (n,) uint32: the canvas knows nothing of its meaning.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

__all__ = ["Canvas"]

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]
Numbers = NDArray[np.uint32]

#: Rows, samples or pixels worked on at once: bounds memory at some hundred megabytes.
_AT_ONCE = 2_000_000
_EMPTY = np.uint64(0xFFFFFFFFFFFFFFFF)
_DEPTH_STEPS = 4.0e9  # below 2³² - 1, which stands for nothing drawn
#: Samples of a line may be this many pitches apart and still be one stretch.
_GAP = 2.5


@dataclass(frozen=True, eq=False)
class _Walk:
    """Samples of lines, line by line: the line, the pixel, the depth in mm, the place on the line and half
    the pitch there as shares of its length; all (m,).
    """

    line: Ints
    pixel: Ints
    depth: Floats
    share: Floats
    half: Floats


class Canvas:
    """A picture being drawn: the number of what lies nearest at each pixel, and how dark an edge crosses it.

    One 64-bit value holds a pixel: depth above, number below, so that the least value is the nearest and the
    result does not depend on the order of drawing.
    """

    def __init__(self, width: int, height: int, near: float, far: float) -> None:
        self.width, self.height = width, height
        self._near = near
        self._step = max(far - near, 1e-6) / _DEPTH_STEPS
        self._nearest = np.full(width * height, _EMPTY, np.uint64)
        self._ink = np.zeros(width * height, np.float32)

    def triangles(self, corners: Floats, numbers: Numbers) -> None:
        """Draw triangles (n, 3, 3), picture frame, each with its number (n,)."""
        low, high = _least(corners[:, :, :2]), _greatest(corners[:, :, :2])
        seen = (high > 0).all(axis=1) & (low[:, 0] < self.width) & (low[:, 1] < self.height)
        # Walking along the shorter side of the surrounding box leaves the fewest spans.
        upright = high[:, 0] - low[:, 0] < high[:, 1] - low[:, 1]
        rows = seen & ~upright
        self._scan(corners[rows][:, :, [1, 0, 2]], numbers[rows], (self.height, self.width), (self.width, 1))
        columns = seen & upright
        self._scan(corners[columns], numbers[columns], (self.width, self.height), (1, self.width))

    def lines(self, ends: Floats, numbers: Numbers) -> None:
        """Draw lines (n, 2, 3), picture frame, one pixel wide, each with its number (n,)."""
        for walk in self._samples(ends):
            np.minimum.at(self._nearest, walk.pixel, self._packed(walk.depth, numbers[walk.line]))

    def ink(self, ends: Floats, strength: Floats, bias: float) -> None:
        """Darken lines (n, 2, 3) by ``strength`` (n,), 0 to 1, where nothing lies ``bias`` mm before them."""
        for walk in self._samples(ends):
            drawn = self._foremost(walk, bias)
            darker = strength[walk.line[drawn]].astype(np.float32)
            np.maximum.at(self._ink, walk.pixel[drawn], darker)

    def uncovered(self, ends: Floats, bias: float) -> tuple[Ints, Floats]:
        """Give the stretches of lines (n, 2, 3) before which nothing lies nearer by more than ``bias`` mm.

        Returns:
            The line of each stretch (m,), and where it begins and ends (m, 2) as shares of the line.
        """
        return self._stretches(ends, lambda walk: self._foremost(walk, bias))

    def of_number(self, ends: Floats, owner: Ints, owners: Ints) -> tuple[Ints, Floats]:
        """Give the stretches of lines (n, 2, 3) that run where their ``owner`` (n,) is seen.

        Args:
            ends: of the lines, picture frame.
            owner: what each line belongs to.
            owners: (f,) what each number that was drawn belongs to.

        Returns:
            As ``uncovered``.
        """
        lookup = np.append(owners, -1)

        def own(walk: _Walk) -> NDArray[np.bool_]:
            number = self._numbers(walk.pixel, len(owners))
            same: NDArray[np.bool_] = lookup[number] == owner[walk.line]
            return same

        return self._stretches(ends, own)

    def seen(self, empty: int) -> Ints:
        """Give the number seen at each pixel (height, width), and ``empty`` where nothing is."""
        return self._numbers(slice(None), empty).reshape(self.height, self.width)

    def pixels(self, colours: Numbers, background: int, ink: int, finer: int) -> NDArray[np.float32]:
        """Give the picture (height / finer, width / finer, 3), 0 to 255, each pixel the mean of a square.

        Args:
            colours: (f,) the colour of each number, 0xRRGGBB; the background and the edges likewise.
            background: the colour where nothing was drawn.
            ink: the colour of edges.
            finer: pixels of the canvas along a pixel of the picture; divides both sides.
        """
        table = np.append(colours, np.uint32(background)).astype(np.uint32)
        colour = table[self._numbers(slice(None), len(colours))]
        shape = self.height // finer, finer, self.width // finer, finer
        picture = np.empty((shape[0], shape[2], 3), np.float32)
        for channel, shift in enumerate((16, 8, 0)):
            fine = ((colour >> np.uint32(shift)) & np.uint32(0xFF)).astype(np.float32)
            fine += (np.float32((ink >> shift) & 0xFF) - fine) * self._ink
            square = fine.reshape(shape)
            # Adding slices is many times faster than a mean along short axes.
            total = sum(square[:, i, :, j] for i in range(finer) for j in range(finer))
            picture[:, :, channel] = total / np.float32(finer * finer)
        return picture

    def _numbers(self, pixel: Ints | slice, empty: int) -> Ints:
        """The numbers (m,) seen at pixels, ``empty`` where nothing is."""
        nearest = self._nearest[pixel]
        number = (nearest & np.uint64(0xFFFFFFFF)).astype(np.int64)
        return np.where(nearest == _EMPTY, empty, number)

    def _foremost(self, walk: _Walk, bias: float) -> NDArray[np.bool_]:
        """Whether nothing lies nearer than each sample (m,) by more than ``bias`` mm."""
        first: NDArray[np.bool_] = (
            self._packed(walk.depth - bias, np.zeros(1, np.uint32)) <= self._nearest[walk.pixel]
        )
        return first

    def _stretches(self, ends: Floats, shown: Callable[[_Walk], NDArray[np.bool_]]) -> tuple[Ints, Floats]:
        """The line (m,) and the shares (m, 2) of the stretches of lines (n, 2, 3) that are shown."""
        lines, shares = [np.zeros(0, np.int64)], [np.zeros((0, 2))]
        for walk in self._samples(ends):
            line, share, half = (each[shown(walk)] for each in (walk.line, walk.share, walk.half))
            if not len(line):
                continue
            # Gaps of a sample or two are grazing depths, not something that lies before the line.
            apart = (line[1:] != line[:-1]) | (share[1:] - share[:-1] > _GAP * (half[1:] + half[:-1]))
            first, last = np.append(True, apart), np.append(apart, True)
            lines.append(line[first])
            shares.append(np.stack([share[first] - half[first], share[last] + half[last]], axis=1))
        return np.concatenate(lines), np.clip(np.concatenate(shares), 0.0, 1.0)

    def _packed(self, depth: Floats, numbers: Numbers) -> NDArray[np.uint64]:
        """Depths (n,) in mm and numbers as sortable values (n,)."""
        steps = np.clip((depth - self._near) / self._step, 0.0, _DEPTH_STEPS).astype(np.uint64)
        packed: NDArray[np.uint64] = (steps << np.uint64(32)) | numbers.astype(np.uint64)
        return packed

    def _scan(
        self, corners: Floats, numbers: Numbers, size: tuple[int, int], stride: tuple[int, int]
    ) -> None:
        """Fill triangles (n, 3, 3) of (scan line, along it, depth), by the size and stride of both axes."""
        order = np.argsort(corners[:, :, 0], axis=1, kind="stable")
        corners = np.take_along_axis(corners, order[:, :, None], axis=1)
        first = np.clip(np.ceil(corners[:, 0, 0] - 0.5), 0, size[0]).astype(np.int64)
        last = np.clip(np.ceil(corners[:, 2, 0] - 0.5), 0, size[0]).astype(np.int64)
        counts = last - first
        crossed = counts > 0
        corners, numbers, first, counts = corners[crossed], numbers[crossed], first[crossed], counts[crossed]
        slopes, gradient = _slopes(corners)
        # A triangle seen almost edge-on would reach far beyond itself within a pixel: its depth is kept
        # within that of its corners.
        shallow, deep = _least(corners[:, :, 2]), _greatest(corners[:, :, 2])
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
                depth = corners[face, 0, 2] + gradient[face, 0] * (across + 0.5 - corners[face, 0, 0])
                depth += gradient[face, 1] * (along + 0.5 - corners[face, 0, 1])
                depth = np.minimum(np.maximum(depth, shallow[face]), deep[face])
                pixel = across * stride[0] + along * stride[1]
                np.minimum.at(self._nearest, pixel, self._packed(depth, numbers[face]))

    def _samples(self, ends: Floats) -> Iterator[_Walk]:
        """Walk lines (n, 2, 3) pixel by pixel inside the picture; a line is never cut between two walks."""
        index, stretch = _clipped(ends, self.width, self.height)
        start, step = ends[index, 0], ends[index, 1] - ends[index, 0]
        extent = np.abs(step[:, :2]) * (stretch[:, 1] - stretch[:, 0])[:, None]
        counts = np.ceil(np.maximum(extent[:, 0], extent[:, 1])).astype(np.int64) + 1
        pitch = (stretch[:, 1] - stretch[:, 0]) / counts
        for part in _slices(counts):
            line, within = _spread(counts[part])
            line += part.start
            share = stretch[line, 0] + (within + 0.5) * pitch[line]
            x = np.floor(start[line, 0] + step[line, 0] * share).astype(np.int64)
            y = np.floor(start[line, 1] + step[line, 1] * share).astype(np.int64)
            depth = start[line, 2] + step[line, 2] * share
            inside = (x >= 0) & (x < self.width) & (y >= 0) & (y < self.height)
            walk = index[line], y * self.width + x, depth, share, pitch[line] / 2
            yield _Walk(*(each[inside] for each in walk))


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


def _clipped(ends: Floats, width: int, height: int) -> tuple[Ints, Floats]:
    """Indices (m,) of lines (n, 2, 3) that enter the picture, and from where to where (m, 2) as shares."""
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
    return index, np.stack([enter, leave], axis=1)[index]


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


def _least(corners: Floats) -> Floats:
    """Least of three (n, 3, ...) -> (n, ...); many times faster than a minimum along a short axis."""
    least: Floats = np.minimum(np.minimum(corners[:, 0], corners[:, 1]), corners[:, 2])
    return least


def _greatest(corners: Floats) -> Floats:
    """Greatest of three (n, 3, ...) -> (n, ...)."""
    greatest: Floats = np.maximum(np.maximum(corners[:, 0], corners[:, 1]), corners[:, 2])
    return greatest
