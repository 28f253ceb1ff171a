"""What a receiver finds in the written model files of the cast: bodies, where they lie, what they weigh.

Read by the library from the bytes as written; nothing is taken from the shed in memory.
"""

from __future__ import annotations

from dataclasses import dataclass

import cast
import ifcopenshell
import ifcopenshell.geom
import ifcopenshell.util.element
import ifcopenshell.util.placement
import ifcopenshell.util.unit
import numpy as np
from keeping import kept
from manifold3d import Error, Manifold, Mesh, OpType

from shedbim.geometry.placements import Placements

__all__ = ["Model", "model", "opened", "read", "weights"]

#: How finely arcs are cut: chords leave them by 0.1 mm at most, and turn by so many rad at most. Fine: a round bar or
#: bolt is 0.37 % too light, a building less than half of a thousandth. Coarse: a third of the triangles; bars and
#: bolts lie inside their arcs, and the wall of a hole reaches 3 % of its radius into it at most, half a bolt's room.
#: Fine bodies are cut and drilled by the library itself; that takes it ten times as long as meshing what is cut and
#: the tools, so for coarse ones the tools are taken away here.
_CHORD, _FINE, _COARSE = 1e-4, 0.15, 0.5


@dataclass(frozen=True, eq=False)
class Model:
    """A model file in mm.

    Attributes:
        tags: the mark of the type of each body.
        bodies: the solid of each type, in its own frame; a group of bolts is one body.
        names: the name of each piece.
        body: (n,) the body of each piece.
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


@kept
def opened(name: str, schema: str = "IFC4") -> ifcopenshell.file:
    """Give the model file of a specimen as the library opens it."""
    return ifcopenshell.file.from_string(cast.model_bytes(name, schema).decode("ascii"))


@kept
def model(name: str, schema: str = "IFC4", *, fine: bool = False) -> Model:
    """Give the bodies and pieces of a specimen's model file."""
    return read(opened(name, schema), fine=fine)


def read(file: ifcopenshell.file, *, fine: bool = False) -> Model:
    """Give the bodies and pieces of a model file, arcs cut coarsely or finely.

    A piece shows the body of its type once, or several times where it is a group of bolts.
    """
    to_mm = ifcopenshell.util.unit.calculate_unit_scale(file) * 1000
    settings = ifcopenshell.geom.settings()
    settings.set("mesher-linear-deflection", _CHORD)
    settings.set("mesher-angular-deflection", _FINE if fine else _COARSE)
    drawn: dict[int, Manifold] = {}
    number: dict[tuple[int, ...], int] = {}
    tags, bodies, kinds = [], [], []
    elements = [e for e in file.by_type("IfcElement") if e.Representation]
    for element in elements:
        kind = ifcopenshell.util.element.get_type(element)
        items = _items(element)
        which = (kind.id(), *(item.id() for item in items))
        if which not in number:
            number[which] = len(bodies)
            if kind.id() not in drawn:
                drawn[kind.id()] = _body(settings, kind, whole=fine)
            places = [ifcopenshell.util.placement.get_mappeditem_transformation(item)[:3] for item in items]
            moved = [drawn[kind.id()].transform(_in_mm(place, to_mm)) for place in places]
            bodies.append(moved[0] if len(moved) == 1 else Manifold.compose(moved))
            tags.append(kind.Tag)
        kinds.append(number[which])
    known: dict[int, np.ndarray] = {}
    placement = np.array([_placement(e.ObjectPlacement, known) for e in elements])[:, :3]
    placement[:, :, 3] *= to_mm
    return Model(tuple(tags), tuple(bodies), tuple(e.Name for e in elements), np.array(kinds), placement)


def _items(element: ifcopenshell.entity_instance) -> list[ifcopenshell.entity_instance]:
    """The mapped items of an element's body: all show the body of its type."""
    kind = ifcopenshell.util.element.get_type(element)
    (shown,) = [r for r in element.Representation.Representations if r.RepresentationIdentifier == "Body"]
    maps = {held.id() for held in kind.RepresentationMaps}
    assert all(item.is_a("IfcMappedItem") and item.MappingSource.id() in maps for item in shown.Items)
    return list(shown.Items)


def _in_mm(place: np.ndarray, to_mm: float) -> np.ndarray:
    """A placement (3, 4) whose origin is in the file's units."""
    scaled = place.copy()
    scaled[:, 3] *= to_mm
    return scaled


def _body(
    settings: ifcopenshell.geom.settings, kind: ifcopenshell.entity_instance, *, whole: bool
) -> Manifold:
    """The closed solid of a type's body, mm, meshed by the library as a ``whole`` or what it is cut from."""
    (held,) = [
        m for m in kind.RepresentationMaps if m.MappedRepresentation.RepresentationIdentifier == "Body"
    ]
    origin = held.MappingOrigin
    assert np.array_equal(ifcopenshell.util.placement.get_axis2placement(origin), np.eye(4))
    shown = held.MappedRepresentation
    if whole or not any(item.is_a("IfcBooleanResult") for item in shown.Items):
        solid = _meshed(settings, shown)
    else:
        (item,) = shown.Items
        solid = _cut(settings, item)
    assert solid.status() == Error.NoError, kind.Tag
    return solid


def _meshed(settings: ifcopenshell.geom.settings, thing: ifcopenshell.entity_instance) -> Manifold:
    """The solid that the library makes of a representation or of an item of one, mm; it meshes in metres."""
    shape = ifcopenshell.geom.create_shape(settings, thing)
    points = np.array(shape.verts).reshape(-1, 3) * 1000
    mesh = Mesh(points.astype(np.float32), np.array(shape.faces, np.uint32).reshape(-1, 3))
    mesh.merge()  # what a boolean operation left, the library meshes face by face: corners there are not shared
    return Manifold(mesh)


def _cut(settings: ifcopenshell.geom.settings, item: ifcopenshell.entity_instance) -> Manifold:
    """What a chain of differences leaves of the solid that it begins with, mm."""
    tools, planes = [], []
    while item.is_a("IfcBooleanResult"):
        assert item.Operator == "DIFFERENCE"
        tool = item.SecondOperand
        if tool.is_a() == "IfcHalfSpaceSolid":
            planes.append(tool)
        else:
            tools.append(_meshed(settings, tool))
        item = item.FirstOperand
    solid = Manifold.batch_boolean([_meshed(settings, item), *tools], OpType.Subtract)
    to_mm = ifcopenshell.util.unit.calculate_unit_scale(item.file) * 1000
    for half in planes:
        place = ifcopenshell.util.placement.get_axis2placement(half.BaseSurface.Position)
        # What is taken away lies behind the plane, seen along its normal, where the flag agrees (ISO 16739).
        normal = place[:3, 2] if half.AgreementFlag else -place[:3, 2]
        solid = solid.trim_by_plane(normal.tolist(), float(normal @ place[:3, 3]) * to_mm)
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


@kept
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
