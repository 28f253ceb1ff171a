"""Property sets and quantity sets: what a reader can ask of a part, a place, an assembly."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from shedbim.model.shed import AssemblyType, Part
from shedbim.sections.section import STEEL_DENSITY
from shedbim.writers.ifc.classes import ElementClass
from shedbim.writers.ifc.stepfile import StepFile
from shedbim.writers.ifc.text import FALSE, TRUE, label, listed, number, quoted, typed

__all__ = [
    "assembly_set",
    "common_set",
    "identifier",
    "one_property",
    "part_set",
    "property_set",
    "quantity_set",
    "relate_set",
]


def identifier(text: str) -> str:
    """Give a typed identifier."""
    return typed("IfcIdentifier", label(text))


def one_property(step: StepFile, name: str, value: str) -> str:
    """Write (or find) a property with one typed ``value``."""
    return step.share("IfcPropertySingleValue", Name=quoted(name), NominalValue=value)


def property_set(step: StepFile, name: str, scope: str, values: Mapping[str, str]) -> str:
    """Write a property set of typed ``values``; ``scope`` tells it from others of its name for good."""
    properties = listed(one_property(step, each, value) for each, value in values.items())
    return step.rooted("IfcPropertySet", f"{name}/{scope}", Name=quoted(name), HasProperties=properties)


def relate_set(step: StepFile, definition: str, name: str, objects: Sequence[str]) -> None:
    """Write that ``objects`` have a set; ``name`` is the stable name of the relation."""
    step.rooted(
        "IfcRelDefinesByProperties",
        f"defines/{name}",
        RelatedObjects=listed(objects),
        RelatingPropertyDefinition=definition,
    )


def common_set(step: StepFile, part: Part, element: ElementClass) -> str:
    """Write the standard set that all pieces of a class have."""
    values = {"Reference": identifier(part.mark), "LoadBearing": typed("IfcBoolean", TRUE)}
    values["IsExternal"] = typed("IfcBoolean", FALSE)
    return property_set(step, f"Pset_{element.noun}Common", part.mark, values)


def part_set(step: StepFile, part: Part) -> str:
    """Write the program's own set of a part."""
    texts = {"Section": part.bar.section.designation, "Grade": part.grade, "Finish": part.finish}
    values = {"Mark": identifier(part.mark), "Role": typed("IfcLabel", label(part.role.word))}
    values |= {name: typed("IfcLabel", label(text)) for name, text in texts.items()}
    return property_set(step, "Shedbim_Part", part.mark, values)


def assembly_set(step: StepFile, kind: AssemblyType) -> str:
    """Write the program's own set of equal assemblies."""
    values = {
        "Mark": identifier(kind.mark),
        "Kind": typed("IfcLabel", label(kind.kind)),
        "Made": typed("IfcLabel", label(kind.made)),
    }
    return property_set(step, "Shedbim_Assembly", kind.mark, values)


def quantity_set(step: StepFile, part: Part, element: ElementClass) -> str:
    """Write the base quantities of a part: lengths in m, areas in m², volumes in m³, masses in kg.

    Length is the saw length, long point to long point; gross is the bar before its ends are cut.
    """
    bar, section = part.bar, part.bar.section
    gross = section.area * bar.length
    quantities = (
        ("Length", "Length", bar.length / 1e3),
        ("Area", "CrossSectionArea", section.area / 1e6),
        ("Area", "OuterSurfaceArea", bar.surface / 1e6),
        ("Volume", "GrossVolume", gross / 1e9),
        ("Volume", "NetVolume", bar.volume / 1e9),
        ("Weight", "GrossWeight", gross * STEEL_DENSITY),
        ("Weight", "NetWeight", bar.mass),
    )
    listing = listed(
        step.share(f"IfcQuantity{kind}", **{"Name": quoted(name), f"{kind}Value": number(value)})
        for kind, name, value in quantities
    )
    name = "BaseQuantities" if step.schema.is_first else f"Qto_{element.noun}BaseQuantities"
    return step.rooted(
        "IfcElementQuantity",
        f"quantities/{part.mark}",
        Name=quoted(name),
        MethodOfMeasurement=quoted("BaseQuantities"),
        Quantities=listing,
    )
