"""Parts as types: one for each part, with the maps of its axis and its body, its material and its sets."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from shedbim.model.bars import Bar
from shedbim.model.roles import Role
from shedbim.model.shed import Part
from shedbim.sections.section import Section
from shedbim.writers.ifc.bodies import body
from shedbim.writers.ifc.classes import ElementClass, element_class
from shedbim.writers.ifc.context import Contexts
from shedbim.writers.ifc.materials import material, profile_properties, profile_set, profile_usage
from shedbim.writers.ifc.placements import point
from shedbim.writers.ifc.profiles import profile
from shedbim.writers.ifc.properties import common_set, part_set, quantity_set, relate_set
from shedbim.writers.ifc.stepfile import StepFile
from shedbim.writers.ifc.text import enum, label, listed, number, quoted
from shedbim.writers.palette import PALETTE

__all__ = ["Mapped", "PartWriter", "shape_representation"]


@dataclass(frozen=True)
class Mapped:
    """What the pieces of a part refer to: their class, and the mapped items of their axis and their body."""

    element: ElementClass
    axis: str
    body: str


class PartWriter:
    """Writes parts one after another, and at the end what several of them share."""

    def __init__(self, step: StepFile, contexts: Contexts) -> None:
        self._step = step
        self._contexts = contexts
        self._styles: dict[Role, str] = {}
        self._made_of: dict[tuple[Section, str], tuple[list[str], list[str]]] = {}

    def write(self, part: Part, pieces: Sequence[str]) -> Mapped:
        """Write a part and how ``pieces``, references to all its occurrences, are defined by it."""
        step, element = self._step, element_class(part.role)
        axis = self._map(self._axis(part.bar), "Axis", "Curve3D", self._contexts.axis)
        bodied = body(step, part.bar, profile(step, part.bar.section))
        self._colour(bodied.item, part.role)
        solid = self._map(bodied.item, "Body", bodied.kind, self._contexts.body)
        sets = {"common": common_set(step, part, element), "part": part_set(step, part)}
        # IFC2X3 lists the standard sets for occurrences only; later schemas let pieces inherit a type's.
        inherited = {} if step.schema.is_first else {"HasPropertySets": listed(sets.values())}
        kind = step.rooted(
            element.entity + "Type",
            f"type/{part.mark}",
            Name=label(part.mark),
            RepresentationMaps=listed([axis, solid]),
            Tag=label(part.mark),
            ElementType=label(element.named) if element.named else "$",
            PredefinedType=enum(element.items[step.schema.name]),
            **inherited,
        )
        step.rooted(
            "IfcRelDefinesByType", f"typed/{part.mark}", RelatedObjects=listed(pieces), RelatingType=kind
        )
        if step.schema.is_first:
            for name, made in sets.items():
                relate_set(step, made, f"{name}/{part.mark}", pieces)
        relate_set(step, quantity_set(step, part, element), f"quantities/{part.mark}", pieces)
        occurrences, types = self._made_of.setdefault((part.bar.section, part.grade), ([], []))
        occurrences.extend(pieces)
        types.append(kind)
        return Mapped(element, self._mapped(axis), self._mapped(solid))

    def _axis(self, bar: Bar) -> str:
        """Write the centroid axis of a bar, from steel to steel."""
        first, last = bar.axis
        ends = [point(self._step, first, 0.0, 0.0), point(self._step, last, 0.0, 0.0)]
        return self._step.add("IfcPolyline", Points=listed(ends))

    def _map(self, item: str, identifier: str, kind: str, context: str) -> str:
        """Write a representation of one item and the map that a type holds it by."""
        shown = shape_representation(self._step, context, identifier, kind, item)
        return self._step.add(
            "IfcRepresentationMap", MappingOrigin=self._contexts.unmoved, MappedRepresentation=shown
        )

    def _mapped(self, source: str) -> str:
        """Write the one use of a map: unmoved, unturned, unscaled."""
        return self._step.add("IfcMappedItem", MappingSource=source, MappingTarget=self._contexts.unchanged)

    def _colour(self, item: str, role: Role) -> None:
        """Write that a body has the colour of its role."""
        if role not in self._styles:
            red, green, blue = (number(value / 255) for value in PALETTE[role])
            colour = self._step.add("IfcColourRgb", Red=red, Green=green, Blue=blue)
            shading = self._step.add("IfcSurfaceStyleShading", SurfaceColour=colour)
            style = self._step.add(
                "IfcSurfaceStyle", Name=label(role.word), Side=enum("BOTH"), Styles=listed([shading])
            )
            if self._step.schema.is_first:
                style = self._step.add("IfcPresentationStyleAssignment", Styles=listed([style]))
            self._styles[role] = style
        self._step.add("IfcStyledItem", Item=item, Styles=listed([self._styles[role]]))

    def finish(self) -> None:
        """Write the materials and how all pieces and types written so far are made of them."""
        step = self._step
        steels = {
            grade: material(step, grade) for grade in dict.fromkeys(grade for _, grade in self._made_of)
        }
        outlined: dict[Section, str] = {}
        for section in dict.fromkeys(section for section, _ in self._made_of):
            outlined[section] = profile_properties(step, section, profile(step, section))
        for (section, grade), (pieces, types) in self._made_of.items():
            name = f"{section.designation}/{grade}"
            if step.schema.is_first:
                self._relate_material(f"occurrences/{name}", [*pieces, *types], steels[grade])
                step.rooted(
                    "IfcRelAssociatesProfileProperties",
                    f"profile/{name}",
                    RelatedObjects=listed(pieces),
                    RelatingProfileProperties=outlined[section],
                )
                continue
            profiles = profile_set(step, section, grade, profile(step, section), steels[grade])
            self._relate_material(f"types/{name}", types, profiles)
            self._relate_material(f"occurrences/{name}", pieces, profile_usage(step, profiles))

    def _relate_material(self, name: str, objects: Sequence[str], made_of: str) -> None:
        """Write what ``objects`` are made of."""
        step = self._step
        step.rooted(
            "IfcRelAssociatesMaterial",
            f"material/{name}",
            RelatedObjects=listed(objects),
            RelatingMaterial=made_of,
        )


def shape_representation(step: StepFile, context: str, identifier: str, kind: str, item: str) -> str:
    """Write a representation of one item."""
    return step.add(
        "IfcShapeRepresentation",
        ContextOfItems=context,
        RepresentationIdentifier=quoted(identifier),
        RepresentationType=quoted(kind),
        Items=listed([item]),
    )
