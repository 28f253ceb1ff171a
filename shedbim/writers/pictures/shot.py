"""All pieces of a view drawn on a canvas: what is seen at each pixel, and of which piece and colour it is.

A face is all of a piece's surface that has one normal: the unit that is coloured, and that carries a number on
the canvas.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from shedbim.geometry.placements import Placements
from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.roles import Sort
from shedbim.model.shed import Part, Shed
from shedbim.writers.coarse import coarse
from shedbim.writers.pictures.boxes import piece_corners
from shedbim.writers.pictures.extents import chord_error, depth, middle_line
from shedbim.writers.pictures.meshes import Mesh, shape_mesh
from shedbim.writers.pictures.projection import Projection
from shedbim.writers.pictures.raster import Canvas
from shedbim.writers.pictures.tints import Emphasis, shades, tints

__all__ = ["FINER", "Batch", "Shot", "part_mesh", "shoot"]

Floats = NDArray[np.float64]
Indices = NDArray[np.int64]

#: Each pixel of a picture is 2 x 2 pixels of the canvas.
FINER = 2
#: A bar whose section is no deeper than this many pixels of the canvas is drawn with its axis as a line and
#: without edges, which would cover it all.
_SLENDER_PIXELS = 4.0
#: A fitting or a bolt head smaller than this, pixels of the canvas, is left out: a building seen from afar has
#: tens of thousands of them and shows none. So are holes.
_LEAST_PIXELS = 2.0
#: Triangles of one batch: bounds memory.
_AT_ONCE = 400_000


@dataclass(frozen=True, eq=False)
class Batch:
    """Pieces of one part: the part, its mesh, the face of each triangle (t,), the normal of each face (g, 3),
    the pieces (n,) and their placements (n, 3, 4).
    """

    part: Part
    mesh: Mesh
    face: Indices
    normals: Floats
    pieces: Indices
    placements: Placements

    @cached_property
    def areas(self) -> Floats:
        """The area (g,) of each face, mm²."""
        a, b, c = np.moveaxis(self.mesh.points[self.mesh.triangles], 1, 0)
        area = np.linalg.norm(np.cross(b - a, c - a), axis=1) / 2
        areas: Floats = np.bincount(self.face, weights=area, minlength=len(self.normals)).astype(float)
        return areas

    def of(self, rows: NDArray[np.bool_]) -> Batch:
        """Only some of the pieces, chosen by a flag (n,) for each."""
        return replace(self, pieces=self.pieces[rows], placements=self.placements[rows])

    def depth(self, projection: Projection) -> float:
        """The size that edges fade by, pixels of the projection."""
        return depth(self.part.body) * projection.scale

    def slender(self, projection: Projection) -> bool:
        """Whether its pieces are so thin on the canvas that they are drawn without edges."""
        return self.depth(projection) <= _SLENDER_PIXELS

    def facing(self, projection: Projection) -> NDArray[np.bool_]:
        """Whether each face of each piece (n, g) is turned to the eye."""
        turned: NDArray[np.bool_] = self.turned(projection)[:, :, 2] < 0
        return turned

    def turned(self, projection: Projection) -> Floats:
        """The normals (n, g, 3) seen from the eye."""
        normals: Floats = self.normals @ np.swapaxes(projection.turn @ self.placements[:, :, :3], 1, 2)
        return normals

    def shown_edges(self, projection: Projection) -> tuple[Indices, Floats]:
        """The row of the piece (m,) and the ends (m, 2, 3), canvas, of edges with a side turned to the eye."""
        facing = self.facing(projection)
        sides = self.face[self.mesh.sides]
        row, edge = np.nonzero(facing[:, sides[:, 0]] | facing[:, sides[:, 1]])
        points = projection.placed(self.placements, self.mesh.points)
        return row, points[row[:, None], self.mesh.edges[edge]]


@dataclass(frozen=True, eq=False)
class Shot:
    """A view drawn.

    Attributes:
        projection: from building axes to pixels of the canvas, which are ``FINER`` times finer than those of
            the picture.
        canvas: with all faces on it; what is drawn carries the number of its face.
        colours: (f,) 0xRRGGBB, of each face.
        owners: (f,) int, index in the shed of the piece of each face.
        batches: the pieces, part by part.
        emphasis: which of them stand out.
    """

    projection: Projection
    canvas: Canvas
    colours: NDArray[np.uint32]
    owners: Indices
    batches: tuple[Batch, ...]
    emphasis: Emphasis

    @property
    def bias(self) -> float:
        """An edge is sampled up to a pixel beside its own surface: as much depth is allowed, mm."""
        return 1.5 / self.projection.scale


def shoot(
    shed: Shed, projection: Projection, pieces: Indices, width: int, height: int, emphasis: Emphasis
) -> Shot:
    """Draw pieces of a shed.

    Args:
        shed: the building.
        projection: from building axes to pixels of the picture.
        pieces: (n,) int, indices of the pieces drawn; may be none.
        width: of the picture, pixels.
        height: of the picture, pixels.
        emphasis: which pieces stand out.
    """
    fine = projection.finer(FINER)
    pieces = pieces[_large_enough(shed, fine, emphasis)[pieces]]
    depths = piece_corners(shed, pieces) @ fine.turn[2] if len(pieces) else np.zeros(1)
    canvas = Canvas(width * FINER, height * FINER, float(depths.min()), float(depths.max()))
    batches = tuple(_batches(shed, pieces, _LEAST_PIXELS / fine.scale))
    colours, owners, base = [np.zeros(0, np.uint32)], [np.zeros(0, np.int64)], 0
    all_tints = tints(shed, emphasis)
    for batch in batches:
        _draw(canvas, fine, batch, base)
        colours.append(shades(all_tints[batch.pieces], batch.turned(fine)).ravel())
        owners.append(np.repeat(batch.pieces, len(batch.normals)))
        base += len(owners[-1])
    return Shot(fine, canvas, np.concatenate(colours), np.concatenate(owners), batches, emphasis)


def part_mesh(part: Part, least_hole: float = 0.0) -> Mesh:
    """Give the mesh of a part, as coarse as a picture allows, without holes narrower than ``least_hole`` mm."""
    shape = coarse(part.body, least_hole)
    return shape_mesh(shape, chord_error(shape))


def _large_enough(shed: Shed, projection: Projection, emphasis: Emphasis) -> NDArray[np.bool_]:
    """Which pieces of a shed (n,) are drawn: all members, and of the others those that can be seen or shall be."""
    by_part = np.array(
        [
            part.role.sort is Sort.MEMBER or depth(part.body) * projection.scale >= _LEAST_PIXELS
            for part in shed.parts
        ],
        bool,
    )
    drawn: NDArray[np.bool_] = by_part[shed.pieces.part] | emphasis.loud
    return drawn


def _batches(shed: Shed, pieces: Indices, least_hole: float) -> Iterator[Batch]:
    """Cut pieces (n,) into those of one part, and those into runs of about ``_AT_ONCE`` triangles."""
    if not len(pieces):
        return
    part = shed.pieces.part[pieces]
    order = np.argsort(part, kind="stable")
    kinds, starts = np.unique(part[order], return_index=True)
    for kind, rows in zip(kinds.tolist(), np.split(order, starts[1:]), strict=True):
        mesh = part_mesh(shed.parts[kind], least_hole)
        normals, face = np.unique(mesh.normals.round(6) + 0.0, axis=0, return_inverse=True)
        step = max(_AT_ONCE // len(mesh.triangles), 1)
        for begin in range(0, len(rows), step):
            some = pieces[rows[begin : begin + step]]
            yield Batch(shed.parts[kind], mesh, face.ravel(), normals, some, shed.pieces.placement[some])


def _draw(canvas: Canvas, projection: Projection, batch: Batch, base: int) -> None:
    """Draw the triangles that face the eye, and the edges between them, or the axis, as lines of the same face.

    The lines keep sheets and bars thinner than a pixel whole, where triangles miss the pixels' centres.
    """
    mesh, count = batch.mesh, len(batch.normals)
    turned = batch.turned(projection)
    facing = turned[:, :, 2] < 0
    points = projection.placed(batch.placements, mesh.points)
    row, triangle = np.nonzero(facing[:, batch.face])
    canvas.triangles(
        points[row[:, None], mesh.triangles[triangle]], _numbers(base, count, row, batch.face[triangle])
    )
    if batch.slender(projection):
        # Between the bolts of a group there is nothing that a line could stand for.
        if isinstance(batch.part.body, BoltGroup):
            return
        axis = projection.placed(batch.placements, middle_line(batch.part.body))
        canvas.lines(axis, _numbers(base, count, np.arange(len(axis)), turned[:, :, 2].argmin(axis=1)))
        return
    one, other = batch.face[mesh.sides].T
    row, edge = np.nonzero(facing[:, one] | facing[:, other])
    side = np.where(facing[row, one[edge]], one[edge], other[edge])
    canvas.lines(points[row[:, None], mesh.edges[edge]], _numbers(base, count, row, side))


def _numbers(base: int, faces: int, row: Indices, face: Indices) -> NDArray[np.uint32]:
    """The numbers (m,) on the canvas of faces (m,) of pieces in rows (m,)."""
    return (base + row * faces + face).astype(np.uint32)
