"""Models of other trades made of boxes and tubes, without a file, in the axes of a shed without a place on the map."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from manifold3d import Manifold

from shedbim.model.other_trades import Mesh, OtherElement, OtherModel

Point = tuple[float, float, float]

FILE = "others.ifc"


def mesh_of(body: Manifold) -> Mesh:
    """The surface of a solid."""
    raw = body.to_mesh64()
    points, triangles = np.asarray(raw.vert_properties, float)[:, :3], np.asarray(raw.tri_verts, np.int64)
    return Mesh(points, triangles)


def model_of(meshes: Sequence[Mesh], kind: str, *, is_service: bool = True, name: str = "one") -> OtherModel:
    """A model of elements of one class."""
    count = len(meshes)
    names = [OtherElement(f"{k:022d}", kind, f"{name} {k + 1}", is_service, FILE) for k in range(count)]
    placement = np.tile(np.eye(3, 4), (count, 1, 1))
    return OtherModel(FILE, tuple(names), tuple(meshes), np.arange(count), placement)


def box_mesh(low: Point, high: Point) -> Mesh:
    """The surface of a box."""
    return mesh_of(Manifold.cube(np.subtract(high, low).tolist()).translate(list(low)))


def box_model(
    low: Point, high: Point, kind: str = "IfcDuctSegment", *, is_service: bool = True
) -> OtherModel:
    """A model of one box."""
    return model_of([box_mesh(low, high)], kind, is_service=is_service)


def tube_along(y: tuple[float, float], x: float, z: float, diameter: float, kind: str) -> OtherModel:
    """A model of one round bar along the building, drawn round a circle so that none of it is left out."""
    segments = 180
    radius = diameter / 2 / np.cos(np.pi / segments)
    bar = Manifold.cylinder(y[1] - y[0], radius, radius, segments).rotate([-90.0, 0.0, 0.0])
    return model_of([mesh_of(bar.translate([x, y[0], z]))], kind)
