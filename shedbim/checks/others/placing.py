"""Models of other trades in the axes of the building, by what both say of their place on the map."""

from __future__ import annotations

from dataclasses import dataclass, replace
from math import cos, hypot, sin

import numpy as np
from numpy.typing import NDArray

from shedbim.checks.clash.boxes import boxes_around
from shedbim.checks.others.bodies import local_boxes
from shedbim.geometry.placements import Placements, compose, inverse
from shedbim.model.other_trades import MapPlace, Mesh, OtherModel, Remark
from shedbim.model.shed import Georeference, Shed

__all__ = ["Placed", "placed"]

Floats = NDArray[np.float64]

#: What lies farther from the building than this is not part of it, mm.
_FAR = 1e6
#: A unit is wrong where an element is so many times as large as the building, or the whole model smaller than this, mm:
#: units are mistaken by a factor of 304 at least (mm for ft).
_TOO_LARGE, _TOO_SMALL = 100.0, 100.0


@dataclass(frozen=True, eq=False)
class Placed:
    """A model in building axes, or an empty one where it cannot be placed.

    Attributes:
        model: with what it had, its meshes to the scale of the shed.
        placement: (n, 3, 4) of its elements in building axes, mm.
        remarks: those of the model, and what its place and size tell.
    """

    model: OtherModel
    placement: Placements
    remarks: tuple[Remark, ...]


def placed(model: OtherModel, shed: Shed) -> Placed:
    """Give a model in the axes of a shed."""
    ours, theirs = shed.georeference, model.place
    remarks = list(model.remarks)
    if not model.elements:
        return Placed(model, model.placement, tuple(remarks))
    if ours is None or theirs is None:
        who = (
            "neither it nor the shed has"
            if ours is None and theirs is None
            else f"{'it' if ours else 'the shed'} has not"
        )
        said = f"{model.file} lies on the shed origin to origin, for {who} a place on the map"
        remarks.append(Remark("other-own-origin", said))
        placement = model.placement
    elif theirs.crs and not _same(ours.crs, theirs.crs):
        said = f"{model.file} was not looked at: it is placed in {theirs.crs}, the shed in {ours.crs}"
        empty = replace(model, elements=(), meshes=(), mesh=model.mesh[:0], placement=model.placement[:0])
        return Placed(empty, empty.placement, (*remarks, Remark("other-unplaced", said)))
    else:
        model = _scaled(model, theirs.scale)
        placement = compose(_on_map(ours, theirs), model.placement)
    remarks += _whereabouts(model, placement, shed)
    return Placed(model, placement, tuple(remarks))


def _same(ours: str, theirs: str) -> bool:
    """Whether two names of a coordinate reference system are one, blanks and capitals aside."""
    return "".join(ours.split()).casefold() == "".join(theirs.split()).casefold()


def _scaled(model: OtherModel, scale: float) -> OtherModel:
    """The model with the lengths that it has on the map."""
    if scale == 1.0:
        return model
    meshes = tuple(Mesh(mesh.points * scale, mesh.triangles) for mesh in model.meshes)
    placement = model.placement.copy()
    placement[:, :, 3] *= scale
    return replace(model, meshes=meshes, placement=placement)


def _on_map(ours: Georeference, theirs: MapPlace) -> Placements:
    """The placement (3, 4) of a model's axes in those of the shed."""
    shed = _turned(ours.rotation, (ours.easting, ours.northing, ours.level))
    other = _turned(theirs.rotation, (theirs.easting, theirs.northing, theirs.level))
    return compose(inverse(shed), other)


def _turned(angle: float, origin: tuple[float, float, float]) -> Placements:
    """The placement (3, 4) at an origin, turned about z."""
    c, s = cos(angle), sin(angle)
    return np.array([[c, -s, 0.0, origin[0]], [s, c, 0.0, origin[1]], [0.0, 0.0, 1.0, origin[2]]])


def _whereabouts(model: OtherModel, placement: Placements, shed: Shed) -> list[Remark]:
    """What the place and the size of a model tell."""
    low, high = boxes_around(local_boxes(model.meshes)[model.mesh], placement)
    whole = float(np.linalg.norm(high.max(axis=0) - low.min(axis=0)))
    largest = float(np.linalg.norm(high - low, axis=1).max())
    first, last = shed.pieces.placement[:, :, 3].min(axis=0), shed.pieces.placement[:, :, 3].max(axis=0)
    if whole < _TOO_SMALL or largest > _TOO_LARGE * hypot(*(last - first)):
        size = (
            f"is {whole / 1000:,.3g} m from end to end"
            if whole < _TOO_SMALL
            else f"has an element of {largest / 1e6:,.3g} km"
        )
        return [Remark("other-far-away", f"{model.file} {size}: its unit of length is hardly right")]
    away = np.linalg.norm(np.maximum(np.maximum(first - high, low - last), 0.0), axis=1)
    far = int((away > _FAR).sum())
    if not far:
        return []
    said = (
        f"{far:,} of the {len(away):,} elements of {model.file} lie more than {_FAR / 1e6:g} km from the shed"
    )
    return [Remark("other-far-away", f"{said}, the farthest {away.max() / 1e6:,.1f} km")]
