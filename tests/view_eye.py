"""What an eye must see in the view, worked out anew: exact meshes of the pieces behind a depth buffer.

Nothing of the page is used but where its camera stands; the arithmetic of pictures is the schoolbook's:
a place falls on the picture where the line from the eye to it meets the picture.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from functools import cache
from math import cos, radians, sin, tan

import numpy as np
from numpy.typing import NDArray
from view_browser import Sight

from shedbim.model.shapes import Shape
from shedbim.model.shed import Shed
from shedbim.model.shells import shell
from shedbim.writers.pictures.extents import middle_line
from shedbim.writers.pictures.raster import Canvas

__all__ = ["EMPTY", "UNSURE", "Eye", "eye_of", "seen", "spots", "steady"]

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]
#: A plane a x + b y + c z + d in building axes; what makes it 0 or more stays.
Plane = tuple[float, float, float, float]

EMPTY, UNSURE = -1, -2
#: The page's whole angle of view, up and down, in degrees.
_ANGLE = 35.0


@dataclass(frozen=True, eq=False)
class Eye:
    """Where the camera stands: turn (3, 3) with rows right, down and away; target and distance in mm."""

    turn: Floats
    target: Floats
    distance: float
    parallel: bool
    width: int
    height: int

    def picture(self, places: Floats) -> Floats:
        """Carry places (..., 3), mm, to pixels of the canvas and a depth that is straight on the picture."""
        turned = (places - self.target) @ self.turn.T
        depth = turned[..., 2] + self.distance
        assert self.parallel or (depth > 0).all(), "a place lies behind the eye"
        reach = self.distance if self.parallel else depth
        pixels = self.height / (2 * tan(radians(_ANGLE / 2)) * reach)
        return np.stack(
            [
                self.width / 2 + turned[..., 0] * pixels,
                self.height / 2 + turned[..., 1] * pixels,
                depth if self.parallel else -1e9 / depth,
            ],
            axis=-1,
        )


def eye_of(sight: Sight) -> Eye:
    """The eye of a page. Yaw is the heading from y towards x, pitch looks down."""
    camera = sight.ask("shedView.camera")
    yaw, pitch = camera["yaw"], camera["pitch"]
    away = np.array([cos(pitch) * sin(yaw), cos(pitch) * cos(yaw), -sin(pitch)])
    right = np.array([cos(yaw), -sin(yaw), 0.0])
    _, _, width, height = sight.box()
    turn = np.stack([right, np.cross(away, right), away])
    return Eye(
        turn, np.array(camera["target"]), camera["distance"], camera["parallel"], round(width), round(height)
    )


def seen(eye: Eye, shed: Shed, shown: Iterable[int] | None = None, planes: Sequence[Plane] = ()) -> Ints:
    """The piece seen at each pixel (h, w), of ``shown`` ones and what planes leave.

    ``EMPTY`` stands where nothing is, and ``UNSURE`` where an axis runs, since very thin pieces may be drawn so.
    """
    pieces = np.arange(len(shed.pieces)) if shown is None else np.array(sorted(shown), np.int64)
    corners, owners = [], []
    for part in np.unique(shed.pieces.part[pieces]):
        ours = pieces[shed.pieces.part[pieces] == part]
        place = shed.pieces.placement[ours]
        local = _triangles(shed.parts[part].body)
        moved = np.einsum("nij,tvj->ntvi", place[:, :, :3], local) + place[:, None, None, :, 3]
        corners.append(moved.reshape(-1, 3, 3))
        owners.append(np.repeat(ours, len(local)))
    triangles, owner = np.concatenate(corners), np.concatenate(owners)
    for plane in planes:
        triangles, owner = _kept(triangles, owner, plane)
    flat = eye.picture(triangles)
    canvas = Canvas(eye.width, eye.height, float(flat[..., 2].min()) - 1e-3, float(flat[..., 2].max()) + 1e-3)
    canvas.triangles(flat, owner.astype(np.uint32))
    found = canvas.seen(len(shed.pieces))
    canvas.lines(eye.picture(_axes(shed, pieces)), pieces.astype(np.uint32))
    unsure = canvas.seen(len(shed.pieces)) != found
    return np.where(unsure, UNSURE, np.where(found == len(shed.pieces), EMPTY, found))


def steady(found: Ints, reach: int) -> NDArray[np.bool_]:
    """Whether all pixels within ``reach`` show the same piece; never near the border."""
    same = np.zeros(found.shape, bool)
    height, width = found.shape
    middle = found[reach : height - reach, reach : width - reach]
    inner = np.ones(middle.shape, bool)
    for down in range(2 * reach + 1):
        for across in range(2 * reach + 1):
            inner &= found[down : down + middle.shape[0], across : across + middle.shape[1]] == middle
    same[reach : height - reach, reach : width - reach] = inner
    return same


def spots(found: Ints, count: int, reach: int = 1) -> dict[int, tuple[int, int]]:
    """For ``count`` pieces, spread over all those seen steadily, a pixel (x, y) in the midst of each."""
    rows, columns = np.nonzero(steady(found, reach) & (found >= 0))
    pieces = found[rows, columns]
    chosen = np.unique(pieces)
    chosen = chosen[np.linspace(0, len(chosen) - 1, min(count, len(chosen))).astype(int)]
    result = {}
    for piece in chosen:
        which = np.flatnonzero(pieces == piece)
        at = which[len(which) // 2]
        result[int(piece)] = (int(columns[at]), int(rows[at]))
    return result


def _axes(shed: Shed, pieces: Ints) -> Floats:
    """The ends (n, 2, 3) of the axes of pieces in building axes."""
    place = shed.pieces.placement[pieces]
    lines = np.array([middle_line(part.body) for part in shed.parts])[shed.pieces.part[pieces]]
    return np.einsum("nij,ntj->nti", place[:, :, :3], lines) + place[:, None, :, 3]


@cache
def _triangles(shape: Shape) -> Floats:
    """Corners (t, 3, 3) of the mesh of a shape in its own frame."""
    mesh = shell(shape, 0.5)
    return mesh.points[mesh.triangles]


def _kept(triangles: Floats, owner: Ints, plane: Plane) -> tuple[Floats, Ints]:
    """Triangles (n, 3, 3) cut by a plane, and whose they are."""
    value = triangles @ np.array(plane[:3]) + plane[3]
    whole, cut = (value >= 0).all(axis=1), (value >= 0).any(axis=1) & (value < 0).any(axis=1)
    made, whose = [triangles[whole]], [owner[whole]]
    for triangle, heights, piece in zip(triangles[cut], value[cut], owner[cut], strict=True):
        loop = []
        for a, b in ((0, 1), (1, 2), (2, 0)):
            if heights[a] >= 0:
                loop.append(triangle[a])
            if (heights[a] >= 0) != (heights[b] >= 0):
                share = heights[a] / (heights[a] - heights[b])
                loop.append(triangle[a] + share * (triangle[b] - triangle[a]))
        made.append(np.array([[loop[0], loop[k], loop[k + 1]] for k in range(1, len(loop) - 1)]))
        whose.append(np.full(len(loop) - 2, piece))
    return np.concatenate(made), np.concatenate(whose)
