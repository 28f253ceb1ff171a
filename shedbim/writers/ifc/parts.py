"""Parts as types: one for each part, with the maps of its axis and its body, its material and its sets."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field

from shedbim.model.bars import Bar
from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.roles import Role
from shedbim.model.shapes import Shape
from shedbim.model.shed import Part
from shedbim.sections.section import Section
from shedbim.writers.ifc.bodies import body
from shedbim.writers.ifc.classes import ElementClass, element_class
from shedbim.writers.ifc.context import Contexts
from shedbim.writers.ifc.materials import material, profile_properties, profile_set, profile_usage
from shedbim.writers.ifc.placements import point
from shedbim.writers.ifc.profiles import profile
from shedbim.writers.ifc.properties import part_sets, relate_set
from shedbim.writers.ifc.quantities import quantity_set
from shedbim.writers.ifc.stepfile import StepFile
from shedbim.writers.ifc.text import enum, label, listed, metres, number, quoted
from shedbim.writers.palette import PALETTE

__all__ = ["Mapped", "PartWriter", "shape_representation"]


@dataclass(frozen=True)
class Shown:
    """A representation of the pieces of a part: its context, its identifier, and its mapped item."""

    context: str
    identifier: str
    item: str


@dataclass(frozen=True)
class Mapped:
    """What the pieces of a part refer to: their class and their representations, and what else each states."""

    element: ElementClass
    shown: tuple[Shown, ...]
    attributes: dict[str, str] = field(default_factory=dict)


class PartWriter:
    """Writes parts one after another, and at the end what several of them share."""

    def __init__(self, step: StepFile, contexts: Contexts) -> None:
        self._step = step
        self._contexts = contexts
        self._styles: dict[Role, str] = {}
        self._made_of: dict[tuple[Section | None, str], tuple[list[str], list[str]]] = {}

    def write(self, part: Part, pieces: Sequence[str]) -> Mapped:
        """Write a part and how ``pieces``, references to all its occurrences, are defined by it."""
        step, element = self._step, element_class(part.role, part.shape)
        maps, shown = self._representations(part)
        sets = part_sets(step, part, element)
        # IFC2X3 lists the standard sets for occurrences only; later schemas let pieces inherit a type's.
        inherited = {} if step.schema.is_first else {"HasPropertySets": listed(sets.values())}
        sizes = _nominal_sizes(part.shape)
        # Later schemas deprecate the sizes of occurrences in favour of the type's.
        own, of_type = (sizes, {}) if step.schema.is_first else ({}, sizes)
        kind = step.rooted(
            element.entity + "Type",
            f"type/{part.mark}",
            Name=label(part.mark),
            RepresentationMaps=listed(maps),
            Tag=label(part.mark),
            **_predefined(step, element),
            **inherited,
            **of_type,
        )
        step.rooted(
            "IfcRelDefinesByType", f"typed/{part.mark}", RelatedObjects=listed(pieces), RelatingType=kind
        )
        if step.schema.is_first:
            for name, made in sets.items():
                relate_set(step, made, f"{name}/{part.mark}", pieces)
        relate_set(step, quantity_set(step, part, element), f"quantities/{part.mark}", pieces)
        section = part.shape.section if isinstance(part.shape, Bar) else None
        occurrences, types = self._made_of.setdefault((section, part.grade), ([], []))
        occurrences.extend(pieces)
        types.append(kind)
        return Mapped(element, shown, own)

    def _representations(self, part: Part) -> tuple[list[str], tuple[Shown, ...]]:
        """Write the maps of a part; give them, and what its pieces show of them."""
        maps, shown, contexts = [], [], self._contexts
        if isinstance(part.body, Bar):
            maps.append(self._map([self._axis(part.body)], "Axis", "Curve3D", contexts.axis))
            shown.append(Shown(contexts.axis, "Axis", self._mapped(maps[-1])))
        bodied = body(self._step, part.body)
        for item in bodied.items:
            self._colour(item, part.role)
        maps.append(self._map(bodied.items, "Body", bodied.kind, contexts.body))
        shown.append(Shown(contexts.body, "Body", self._mapped(maps[-1])))
        return maps, tuple(shown)

    def _axis(self, bar: Bar) -> str:
        """Write the centroid axis of a bar, from steel to steel."""
        first, last = bar.axis
        ends = [point(self._step, first, 0.0, 0.0), point(self._step, last, 0.0, 0.0)]
        return self._step.add("IfcPolyline", Points=listed(ends))

    def _map(self, items: Sequence[str], identifier: str, kind: str, context: str) -> str:
        """Write a representation and the map that a type holds it by."""
        shown = shape_representation(self._step, context, identifier, kind, items)
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
        sections = dict.fromkeys(section for section, _ in self._made_of if section)
        outlined = {each: profile_properties(step, each, profile(step, each)) for each in sections}
        for (section, grade), (pieces, types) in self._made_of.items():
            if section is None:
                self._relate_material(f"solid/{grade}", [*pieces, *types], steels[grade])
                continue
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


def _predefined(step: StepFile, element: ElementClass) -> dict[str, str]:
    """Give what a type states of its kind, in the words the schema has for it."""
    item = element.items[step.schema.name]
    if not step.schema.has(element.entity + "Type", "PredefinedType"):
        return {"ElementType": label(element.named or item)}
    named = {"ElementType": label(element.named)} if element.named else {}
    return {"PredefinedType": enum(item), **named}


def _nominal_sizes(shape: Shape) -> dict[str, str]:
    """Give the nominal sizes of fasteners; nuts have no length."""
    if not isinstance(shape, BoltGroup):
        return {}
    item = shape.fastener
    sizes = {"NominalDiameter": item.diameter, "NominalLength": item.length}
    return {name: metres(value) for name, value in sizes.items() if value > 0}


def shape_representation(
    step: StepFile, context: str, identifier: str, kind: str, items: Sequence[str]
) -> str:
    """Write a representation of ``items``."""
    return step.add(
        "IfcShapeRepresentation",
        ContextOfItems=context,
        RepresentationIdentifier=quoted(identifier),
        RepresentationType=quoted(kind),
        Items=listed(items),
    )
