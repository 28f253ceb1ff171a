"""What a mesh model says of itself: where it comes from, which building it is, where that stands."""

from __future__ import annotations

from math import degrees
from typing import Any

from shedbim.model.shed import Shed
from shedbim.writers.glb.text import compact
from shedbim.writers.imprint import CAUTIONS, Imprint

__all__ = ["asset", "root_extras"]


def asset(shed: Shed, imprint: Imprint) -> str:
    """Give the text of the asset: format, program, time stamp, digest, notes and cautions."""
    extras: dict[str, Any] = {
        "time_stamp": imprint.stamp,
        "description_sha256": imprint.digest,
        "defaults": [{"field": field, "value": value} for field, value in shed.defaults],
        "notes": list(shed.notes),
        "cautions": list(CAUTIONS),
    }
    return compact({"version": "2.0", "generator": f"shedbim {imprint.version}", "extras": extras})


def root_extras(shed: Shed) -> str:
    """Give the text of the extras of the root: project, grid and, where it is known, the place on the map.

    Grid and map are told and not applied: 32-bit floats far from the origin would blur the meshes.
    """
    project, grid, place = shed.project, shed.grid, shed.georeference
    extras: dict[str, Any] = {
        "project": {
            "id": project.id,
            "name": project.name,
            "number": project.number,
            "revision": project.revision,
        },
        "axes": "below this node x runs across from line A, y along from line 1, z up from floor level; metres",
        "grid": {
            "letters": list(grid.letters),
            "x_m": [_metres(x) for x in grid.x],
            "numbers": list(grid.numbers),
            "y_m": [_metres(y) for y in grid.y],
        },
    }
    if place is not None:
        extras["georeference"] = {
            "crs": place.crs,
            "easting_m": _metres(place.easting),
            "northing_m": _metres(place.northing),
            "level_m": _metres(place.level),
            "rotation_deg": round(degrees(place.rotation), 9),
        }
    return compact(extras)


def _metres(length: float) -> float:
    """A length in mm as metres, to the micrometre."""
    return round(length / 1000, 6)
