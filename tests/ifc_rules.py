"""Agreements and informal propositions of the standard body that hold for any model file, as checks of one."""

from __future__ import annotations

from collections import Counter

import ifcopenshell
import ifcopenshell.util.pset

__all__ = ["placed_once", "standard_sets", "unreached"]

Entity = ifcopenshell.entity_instance

#: What points at the thing it is about, and is reached from nothing.
_POINTING = (
    "IfcStyledItem",
    "IfcMaterialProperties",
    "IfcProfileProperties",
    "IfcCoordinateOperation",
    "IfcGeometricRepresentationSubContext",
)


def standard_sets(file: ifcopenshell.file, schema: str) -> set[str]:
    """Hold all sets of standard names against the templates (PSE001, PSE002, QTY001); give their names."""
    templates = ifcopenshell.util.pset.PsetQto(schema.removesuffix("_ADD2"))
    seen = set()
    for relation in file.by_type("IfcRelDefinesByProperties"):
        definition = relation.RelatingPropertyDefinition
        objects = [(each.is_a(), _predefined(each)) for each in relation.RelatedObjects]
        seen |= _standard(templates, definition, objects)
    for kind in file.by_type("IfcElementType"):
        for definition in kind.HasPropertySets or ():
            assert not definition.is_a("IfcElementQuantity")
            entity = kind.is_a().removesuffix("Type")
            seen |= _standard(templates, definition, [(entity, getattr(kind, "PredefinedType", None))])
    for entity in () if schema == "IFC2X3" else ("IfcMaterial", "IfcProfile"):
        about = "IfcMaterial" if entity == "IfcMaterial" else "IfcProfileDef"
        for each in file.by_type(f"{entity}Properties"):
            seen |= _standard(templates, each, [(about, None)])
    return seen


def _predefined(element: Entity) -> str | None:
    """The predefined type of an element, by its type where it has one."""
    kinds = [
        relation.RelatingType
        for relation in (getattr(element, "IsTypedBy", None) or getattr(element, "IsDefinedBy", ()) or ())
        if relation.is_a("IfcRelDefinesByType")
    ]
    found: str | None = getattr(kinds[0] if kinds else element, "PredefinedType", None)
    return found


def _standard(
    templates: ifcopenshell.util.pset.PsetQto, definition: Entity, objects: list[tuple[str, str | None]]
) -> set[str]:
    """Hold one set against its template; give its name where it is a standard one."""
    name = definition.Name
    if not name.startswith(("Pset_", "Qto_")):
        assert not name.lower().startswith("pset")
        return set()
    template = templates.get_by_name(name)
    assert template, name
    applicable = dict.fromkeys(template.ApplicableEntity.split(","))
    for entity, item in objects:
        # IfcElementComponent stands for its subtypes.
        general = {"IfcMechanicalFastener", "IfcDiscreteAccessory", "IfcFastener"}
        names = {entity} | ({"IfcElementComponent"} if entity in general else set())
        assert any(each in applicable or f"{each}/{item}" in applicable for each in names), (
            name,
            entity,
            item,
        )
    wanted = {each.Name: each for each in template.HasPropertyTemplates}
    if name.startswith("Qto_"):
        assert definition.MethodOfMeasurement == "BaseQuantities"
        kinds = {
            each.Name: each.is_a().replace("IfcQuantity", "Q_").upper() for each in definition.Quantities
        }
        assert kinds == {each: wanted[each].TemplateType for each in kinds}
        return {name}
    for each in getattr(definition, "HasProperties", None) or definition.Properties:
        measure = wanted[each.Name].PrimaryMeasureType
        assert measure in {None, each.NominalValue.is_a()}, (name, each.Name)
    return {name}


def unreached(file: ifcopenshell.file, schema: str) -> set[Entity]:
    """Give the entities that nothing with an id leads to (IFC106); styles and properties count by their object."""
    reached = {each for root in file.by_type("IfcRoot") for each in file.traverse(root)}
    for name in _POINTING:
        if schema != "IFC2X3" or name != "IfcCoordinateOperation":
            for each in file.by_type(name):
                reached |= set(file.traverse(each))
    return {each for each in file if each not in reached}


def placed_once(file: ifcopenshell.file) -> dict[Entity, Entity | None]:
    """Give for each element and grid the assembly that holds it, or None for the storey (SPS003, SPS005, SPS007).

    Each must stand in the tree exactly once.
    """
    places: Counter[Entity] = Counter()
    inside: dict[Entity, Entity | None] = {}
    for relation in file.by_type("IfcRelContainedInSpatialStructure"):
        places.update(relation.RelatedElements)
        inside |= dict.fromkeys(relation.RelatedElements)
    for relation in file.by_type("IfcRelAggregates"):
        if relation.RelatingObject.is_a("IfcElement"):
            places.update(relation.RelatedObjects)
            inside |= dict.fromkeys(relation.RelatedObjects, relation.RelatingObject)
    assert places.keys() == {*file.by_type("IfcElement"), *file.by_type("IfcGrid")}
    assert set(places.values()) == {1}
    return inside
