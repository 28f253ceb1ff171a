"""What a receiver finds in the written model files of the cast: bodies, where they lie, what they weigh.

Read by the library from the bytes as written; nothing is taken from the shed in memory.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache

import cast
import ifcopenshell
import ifcopenshell.geom
import ifcopenshell.util.element
import ifcopenshell.util.placement
import ifcopenshell.util.unit
import numpy as np
from manifold3d import Error, Manifold, Mesh

from shedbim.geometry.placements import Placements

__all__ = ["Model", "model", "opened", "weights"]

#: How finely arcs are cut: chords leave them by 0.1 mm at most, and turn by 0.1 rad at most. A round bar is
#: then a sixth of a hundredth too light, a building less than half of a thousandth.
_CHORD, _ANGLE = 1e-4, 0.1


@dataclass(frozen=True, eq=False)
class Model:
    """A model file in mm.

    Attributes:
        tags: the mark of each type.
        bodies: the solid of each type, in its own frame.
        names: the name of each piece.
        body: (n,) the type of each piece.
        placement: (n, 3, 4) where it lies.
    """

    tags: tuple[str, ...]
    bodies: tuple[Manifold, ...]
    names: tuple[str, ...]
    body: np.ndarray
    placement: Placements

    @property
    def volume(self) -> float:
        """Volume of all pieces, mm³."""
        return float(np.array([body.volume() for body in self.bodies])[self.body].sum())


@cache
def opened(name: str, schema: str = "IFC4") -> ifcopenshell.file:
    """Give the model file of a specimen as the library opens it."""
    return ifcopenshell.file.from_string(cast.model_bytes(name, schema).decode("ascii"))


@cache
def model(name: str, schema: str = "IFC4") -> Model:
    """Give the bodies and pieces of a specimen's model file."""
    file = opened(name, schema)
    to_mm = ifcopenshell.util.unit.calculate_unit_scale(file) * 1000
    settings = ifcopenshell.geom.settings()
    settings.set("mesher-linear-deflection", _CHORD)
    settings.set("mesher-angular-deflection", _ANGLE)
    types = [each for each in file.by_type("IfcElementType") if each.RepresentationMaps]
    bodies = tuple(_body(settings, each) for each in types)
    number = {each.id(): i for i, each in enumerate(types)}
    elements = [e for e in file.by_type("IfcElement") if e.Representation]
    kinds = [number[ifcopenshell.util.element.get_type(e).id()] for e in elements]
    known: dict[int, np.ndarray] = {}
    placement = np.array([_placement(e.ObjectPlacement, known) for e in elements])[:, :3]
    placement[:, :, 3] *= to_mm
    names = tuple(e.Name for e in elements)
    return Model(tuple(each.Tag for each in types), bodies, names, np.array(kinds), placement)


def _body(settings: ifcopenshell.geom.settings, kind: ifcopenshell.entity_instance) -> Manifold:
    """The closed solid of a type's body, mm; the library meshes in metres."""
    (held,) = [
        m for m in kind.RepresentationMaps if m.MappedRepresentation.RepresentationIdentifier == "Body"
    ]
    origin = held.MappingOrigin
    assert np.array_equal(ifcopenshell.util.placement.get_axis2placement(origin), np.eye(4))
    shape = ifcopenshell.geom.create_shape(settings, held.MappedRepresentation)
    points = np.array(shape.verts).reshape(-1, 3) * 1000
    solid = Manifold(Mesh(points.astype(np.float32), np.array(shape.faces, np.uint32).reshape(-1, 3)))
    assert solid.status() == Error.NoError, kind.Tag
    return solid


def _placement(local: ifcopenshell.entity_instance, known: dict[int, np.ndarray]) -> np.ndarray:
    """The placement (4, 4) in the building's axes, in the file's units; ``known`` holds what was read before."""
    within, outer = local.RelativePlacement, local.PlacementRelTo
    if within.id() not in known:
        known[within.id()] = ifcopenshell.util.placement.get_axis2placement(within)
    if outer is None:
        return known[within.id()]
    if outer.id() not in known:
        known[outer.id()] = _placement(outer, known)
    return known[outer.id()] @ known[within.id()]


def weights(name: str, schema: str = "IFC4") -> dict[str, float]:
    """Give the net weight that the quantities of each piece state, kg, by name."""
    file = opened(name, schema)
    by_type: dict[int, float] = {}
    found = {}
    for relation in file.by_type("IfcRelDefinesByProperties"):
        definition = relation.RelatingPropertyDefinition
        if not definition.is_a("IfcElementQuantity"):
            continue
        if definition.id() not in by_type:
            (weight,) = [q.WeightValue for q in definition.Quantities if q.Name == "NetWeight"]
            by_type[definition.id()] = weight
        for each in relation.RelatedObjects:
            assert each.Name not in found, f"two sets of quantities for {each.Name}"
            found[each.Name] = by_type[definition.id()]
    return found
