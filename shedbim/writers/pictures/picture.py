"""A picture of a shed as PNG bytes: flat-shaded pieces with dark edges on white, hidden surfaces removed."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

from shedbim.geometry.placements import Placements
from shedbim.model.shed import Part, Shed
from shedbim.writers.palette import PALETTE
from shedbim.writers.pictures.boxes import piece_corners
from shedbim.writers.pictures.meshes import Mesh, bar_mesh
from shedbim.writers.pictures.png import png
from shedbim.writers.pictures.projection import Projection, View, fitted
from shedbim.writers.pictures.raster import Canvas

__all__ = ["part_mesh", "picture"]

Floats = NDArray[np.float64]

#: Each pixel of the picture is the mean of 2 x 2 pixels that are drawn.
_FINER = 2
#: Arcs become chords this far off, mm, and no further than this share of a section's radius, so that the
#: chords of a thin round bar do not turn so sharply that they are drawn as edges.
_CHORD_ERROR, _CHORD_SHARE = 1.0, 0.02
_BACKGROUND, _INK = 0xFFFFFF, 0x202830
#: Where the light stands seen from the eye: over the left shoulder (right, down, away).
_LIGHT = np.array([-0.40, -0.62, -0.68]) / np.linalg.norm([-0.40, -0.62, -0.68])
_AMBIENT = 0.58
#: Edges are full dark on a section that is this many drawn pixels deep, and fade with smaller ones, so
#: that a building seen from afar does not go black.
_FULL_INK_PIXELS = 40.0
_FULL_INK, _LEAST_INK = 0.85, 0.10
#: A bar whose section is no deeper than this many drawn pixels is drawn with its axis as a line.
_SLENDER_PIXELS = 2.0
#: Triangles of one batch: bounds memory.
_AT_ONCE = 400_000


def picture(
    shed: Shed, view: View, *, pieces: NDArray[np.int64] | None = None, width: int = 1600, height: int = 1000
) -> bytes:
    """Give the PNG picture of a shed, or of some of its pieces, in parallel projection.

    Args:
        shed: the building.
        view: from where it is seen and what fills the picture.
        pieces: (n,) int, indices of the pieces drawn; None for all.
        width: of the picture, pixels.
        height: of the picture, pixels.
    """
    chosen = np.arange(len(shed.pieces)) if pieces is None else pieces
    if not len(chosen):
        return png(np.full((height, width, 3), 255, np.uint8))
    corners = piece_corners(shed, chosen)
    projection = fitted(view, corners.reshape(-1, 3), width * _FINER, height * _FINER)
    depths = corners @ projection.turn[2]
    canvas = Canvas(width * _FINER, height * _FINER, float(depths.min()), float(depths.max()))
    batches = [
        (shed.parts[part], part_mesh(shed.parts[part]), shed.pieces.placement[chosen[rows]])
        for part, rows in _rows_by_part(shed.pieces.part[chosen])
    ]
    for part, mesh, placements in batches:
        for some in _batches(placements, len(mesh.triangles)):
            _draw_faces(canvas, projection, part, mesh, some)
    for part, mesh, placements in batches:
        for some in _batches(placements, len(mesh.triangles)):
            _draw_edges(canvas, projection, part, mesh, some)
    fine = canvas.pixels(_BACKGROUND, _INK)
    mean = fine.reshape(height, _FINER, width, _FINER, 3).mean(axis=(1, 3))
    return png(np.rint(mean).astype(np.uint8))


def part_mesh(part: Part) -> Mesh:
    """Give the mesh of a part, as coarse as a picture allows."""
    section = part.bar.section
    return bar_mesh(part.bar, min(_CHORD_ERROR, _CHORD_SHARE * min(section.width, section.height) / 2))


def _rows_by_part(part: NDArray[np.int64]) -> Iterator[tuple[int, NDArray[np.int64]]]:
    """Each part that occurs, and the rows where it does."""
    order = np.argsort(part, kind="stable")
    kinds, starts = np.unique(part[order], return_index=True)
    yield from zip(kinds.tolist(), np.split(order, starts[1:]), strict=True)


def _batches(placements: Placements, triangles: int) -> Iterator[Placements]:
    """Cut placements (n, 3, 4) into runs of about ``_AT_ONCE`` triangles."""
    step = max(_AT_ONCE // triangles, 1)
    for begin in range(0, len(placements), step):
        yield placements[begin : begin + step]


def _turned_normals(projection: Projection, mesh: Mesh, placements: Placements) -> Floats:
    """Normals (n, t, 3) of the triangles, seen from the eye."""
    normals: Floats = mesh.normals @ np.swapaxes(projection.turn @ placements[:, :, :3], 1, 2)
    return normals


def _draw_faces(
    canvas: Canvas, projection: Projection, part: Part, mesh: Mesh, placements: Placements
) -> None:
    """Draw the triangles that face the eye, and the edges between them as lines of the same colour.

    The lines keep sheets and bars thinner than a pixel whole, where triangles miss the pixels' centres.
    """
    normals = _turned_normals(projection, mesh, placements)
    points = projection.placed(placements, mesh.points)
    colours = _shades(PALETTE[part.role], normals)
    facing = normals[:, :, 2] < 0
    piece, triangle = np.nonzero(facing)
    canvas.triangles(points[piece[:, None], mesh.triangles[triangle]], colours[piece, triangle])
    side = np.where(facing[:, mesh.sides[:, 0]], mesh.sides[:, 0], mesh.sides[:, 1])
    piece, edge = np.nonzero(np.take_along_axis(facing, side, axis=1))
    canvas.lines(points[piece[:, None], mesh.edges[edge]], colours[piece, side[piece, edge]])
    if _depth_in_pixels(projection, part) <= _SLENDER_PIXELS:
        axis = projection.placed(placements, np.array([[0.0, 0, 0], [part.bar.length, 0, 0]]))
        foremost = normals[:, :, 2].argmin(axis=1)
        canvas.lines(axis, colours[np.arange(len(axis)), foremost])


def _draw_edges(
    canvas: Canvas, projection: Projection, part: Part, mesh: Mesh, placements: Placements
) -> None:
    """Darken the edges of which at least one side faces the eye."""
    facing = _turned_normals(projection, mesh, placements)[:, :, 2] < 0
    points = projection.placed(placements, mesh.points)
    piece, edge = np.nonzero(facing[:, mesh.sides].any(axis=2))
    strength = max(_FULL_INK * min(_depth_in_pixels(projection, part) / _FULL_INK_PIXELS, 1.0), _LEAST_INK)
    # An edge is sampled up to a pixel beside its own surface: as much depth is allowed.
    bias = 1.5 / projection.scale
    canvas.ink(points[piece[:, None], mesh.edges[edge]], np.full(len(piece), strength), bias)


def _depth_in_pixels(projection: Projection, part: Part) -> float:
    """The greater side of a part's section, drawn pixels."""
    section = part.bar.section
    return max(section.width, section.height) * projection.scale


def _shades(colour: tuple[int, int, int], normals: Floats) -> NDArray[np.uint32]:
    """The colour 0xRRGGBB (n, t) of surfaces by their normals (n, t, 3)."""
    light = _AMBIENT + (1 - _AMBIENT) * np.clip(normals @ _LIGHT, 0.0, 1.0)
    red, green, blue = (np.rint(light * channel).astype(np.uint32) for channel in colour)
    shades: NDArray[np.uint32] = (red << np.uint32(16)) | (green << np.uint32(8)) | blue
    return shades
