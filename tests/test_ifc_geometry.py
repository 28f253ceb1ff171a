"""The written model, meshed finely by the library, beside the model's own exact solids."""

from __future__ import annotations

from functools import cache

import ifc_models
import ifcopenshell.geom
import ifcopenshell.util.placement
import ifcopenshell.util.shape
import numpy as np
import pytest
import specimens

from shedbim.geometry.placements import apply
from shedbim.model.solids import solid
from shedbim.sections.section import STEEL_DENSITY
from shedbim.writers.ifc import SCHEMAS

SHED = specimens.shed()


@cache
def meshes(schema: str) -> dict[str, tuple[np.ndarray, float]]:
    """Corner points (k, 3) in the building's axes and volume of each piece, mm and mm³."""
    settings = ifcopenshell.geom.settings()
    settings.set("use-world-coords", True)
    settings.set("mesher-linear-deflection", 1e-4)
    settings.set("mesher-angular-deflection", 0.05)
    file = ifc_models.model(schema)
    elements = [*file.by_type("IfcMember"), *file.by_type("IfcColumn")]
    found = {}
    shapes = ifcopenshell.geom.iterator(settings, file, include=elements)
    assert shapes.initialize()
    while True:
        shape = shapes.get()
        points = ifcopenshell.util.shape.get_vertices(shape.geometry) * 1000
        found[file.by_id(shape.id).Name] = points, ifcopenshell.util.shape.get_volume(shape.geometry) * 1e9
        if not shapes.next():
            return found


@pytest.mark.parametrize("schema", SCHEMAS)
def test_every_piece_has_the_volume_and_so_the_mass_of_its_part(schema: str) -> None:
    volumes = meshes(schema)
    assert volumes.keys() == set(SHED.pieces.keys)
    for key, part in zip(SHED.pieces.keys, SHED.pieces.part, strict=True):
        bar = SHED.parts[part].bar
        assert volumes[key][1] == pytest.approx(bar.volume, rel=1e-3), key
    assert sum(volume for _, volume in volumes.values()) * STEEL_DENSITY == pytest.approx(SHED.mass, rel=1e-3)


@pytest.mark.parametrize("schema", SCHEMAS)
def test_every_piece_fills_the_box_of_its_own_solid(schema: str) -> None:
    found = meshes(schema)
    points = [np.array(solid(part.bar, 1e-3).to_mesh().vert_properties[:, :3], float) for part in SHED.parts]
    for key, part, place in zip(SHED.pieces.keys, SHED.pieces.part, SHED.pieces.placement, strict=True):
        wanted = apply(place, points[part])
        # 0.05 mm: coordinates are written to 0.01 mm, arcs are meshed within 0.1 mm and seldom reach a face.
        np.testing.assert_allclose(found[key][0].min(axis=0), wanted.min(axis=0), atol=0.05, err_msg=key)
        np.testing.assert_allclose(found[key][0].max(axis=0), wanted.max(axis=0), atol=0.05, err_msg=key)


@pytest.mark.parametrize("schema", SCHEMAS)
def test_the_placement_of_every_piece_is_that_of_the_shed(schema: str) -> None:
    file = ifc_models.model(schema)
    elements = ifc_models.by_name(file, "IfcElement")
    for keys, places in (
        (SHED.pieces.keys, SHED.pieces.placement),
        (SHED.assemblies.keys, SHED.assemblies.placement),
    ):
        for key, place in zip(keys, places, strict=True):
            matrix = ifcopenshell.util.placement.get_local_placement(elements[key].ObjectPlacement)
            np.testing.assert_allclose(matrix[:3, :3], place[:, :3], atol=1e-9, err_msg=key)
            # Rounded once for the assembly and once for the piece within it.
            np.testing.assert_allclose(matrix[:3, 3] * 1000, place[:, 3], atol=0.02, err_msg=key)
