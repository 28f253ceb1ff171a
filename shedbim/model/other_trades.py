"""Models of other trades as they were read: elements, their surfaces, and where their origin lies on the map."""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from shedbim.geometry.placements import Placements

__all__ = ["MapPlace", "Mesh", "OtherElement", "OtherModel", "Remark"]


@dataclass(frozen=True)
class OtherElement:
    """One element of another trade's model, as that model names it; all of it is the other author's text.

    Attributes:
        guid: its GlobalId.
        kind: its class, for example ``IfcDuctSegment``; that of its type where its own says less.
        name: its Name, empty where it has none.
        is_service: whether it is a part of the services: ducts, pipes, cables and what hangs on them.
        file: name of the file that it is in.
    """

    guid: str
    kind: str
    name: str
    is_service: bool
    file: str


@dataclass(frozen=True, eq=False)
class Mesh:
    """A surface of triangles, closed or not: points (v, 3) mm, triangles (t, 3) indices into them."""

    points: NDArray[np.float64]
    triangles: NDArray[np.int64]


@dataclass(frozen=True)
class MapPlace:
    """Where the origin of a model lies on the map.

    Attributes:
        crs: name of the coordinate reference system; empty where the file names none.
        easting, northing, level: of the origin, mm.
        rotation: of the model's x axis from the map's east, anticlockwise, rad.
        scale: length on the map of a unit of length of the model; 1 but for the scale of a projection.
    """

    crs: str
    easting: float
    northing: float
    level: float
    rotation: float
    scale: float = 1.0


@dataclass(frozen=True)
class Remark:
    """What a reader of the findings must know of how a model was read: a code of findings, and a sentence."""

    code: str
    says: str


def _none() -> Placements:
    return np.zeros((0, 3, 4))


@dataclass(frozen=True, eq=False)
class OtherModel:
    """The model of another trade, in its own axes.

    Attributes:
        file: its name, without folders.
        elements: n elements that have a shape.
        meshes: distinct surfaces, each in its own frame.
        mesh: (n,) index into ``meshes``.
        placement: (n, 3, 4) of the mesh's frame in the model's axes, mm.
        place: where its origin lies; None where the file does not say.
        remarks: what was not read, and why.
    """

    file: str
    elements: tuple[OtherElement, ...] = ()
    meshes: tuple[Mesh, ...] = ()
    mesh: NDArray[np.int64] = field(default_factory=lambda: np.zeros(0, np.int64))
    placement: Placements = field(default_factory=_none)
    place: MapPlace | None = None
    remarks: tuple[Remark, ...] = ()
