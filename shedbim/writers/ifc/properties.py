"""Property sets: what a reader can ask of a part, a place, an assembly."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from shedbim.model.bars import Bar
from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.plates import Plate
from shedbim.model.shed import AssemblyType, Part
from shedbim.writers.ifc.classes import ElementClass
from shedbim.writers.ifc.stepfile import StepFile
from shedbim.writers.ifc.text import FALSE, TRUE, label, listed, metres, quoted, typed

__all__ = [
    "assembly_set",
    "count",
    "identifier",
    "one_property",
    "part_sets",
    "property_set",
    "relate_set",
    "size",
    "word",
]


def identifier(text: str) -> str:
    """Give a typed identifier."""
    return typed("IfcIdentifier", label(text))


def word(text: str) -> str:
    """Give a typed label."""
    return typed("IfcLabel", label(text))


def count(number: int) -> str:
    """Give a typed number of things."""
    return typed("IfcCountMeasure", str(number))


def size(length: float) -> str:
    """Give a typed length above zero, of ``length`` mm, in metres."""
    return typed("IfcPositiveLengthMeasure", metres(length))


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


def part_sets(step: StepFile, part: Part, element: ElementClass) -> dict[str, str]:
    """Write the sets that all pieces of a part share; give them by a word for each."""
    sets = {"common": _common_set(step, part, element), "part": _part_set(step, part)}
    if isinstance(part.shape, BoltGroup):
        sets["fasteners"] = _fastener_set(step, part, part.shape)
        sets["fastener"] = _standard_fastener_set(step, part, part.shape, element)
    return {name: made for name, made in sets.items() if made}


def _common_set(step: StepFile, part: Part, element: ElementClass) -> str:
    """Write the standard set that all pieces of a class have; empty where the schema has none."""
    values = {"Reference": identifier(part.mark)}
    if element.entity in {"IfcMechanicalFastener", "IfcDiscreteAccessory"}:
        known = not step.schema.is_first
        return property_set(step, "Pset_ElementComponentCommon", part.mark, values) if known else ""
    values |= {"LoadBearing": typed("IfcBoolean", TRUE), "IsExternal": typed("IfcBoolean", FALSE)}
    return property_set(step, f"Pset_{element.noun}Common", part.mark, values)


def _part_set(step: StepFile, part: Part) -> str:
    """Write the program's own set of a part."""
    shape = part.shape
    values = {"Mark": identifier(part.mark), "Role": word(part.role.word)}
    if isinstance(shape, Bar):
        values["Section"] = word(shape.section.designation)
    elif isinstance(shape, Plate):
        length, width = shape.size
        values["Plate"] = word(f"PL {shape.thickness:g}x{width:.10g}x{length:.10g}")
    else:
        values["Fastener"] = word(shape.fastener.designation)
    values |= {"Grade": word(part.grade), "Finish": word(part.finish)}
    if not isinstance(shape, BoltGroup) and shape.holes:
        values["Holes"] = count(len(shape.holes))
    if isinstance(shape, Bar) and shape.pressed != (None, None):
        values["PressedEnds"] = count(sum(end is not None for end in shape.pressed))
    return property_set(step, "Shedbim_Part", part.mark, values)


def _fastener_set(step: StepFile, part: Part, group: BoltGroup) -> str:
    """Write the program's own set of a bolt group."""
    item = group.fastener
    under_head, under_nut = item.washers
    values = {
        "Count": count(group.count),
        "Grade": word(item.grade),
        "NominalDiameter": size(item.diameter),
        "NominalLength": size(item.length) if item.length else "",
        "Grip": size(item.grip),
        "WashersUnderHead": count(under_head),
        "WashersUnderNut": count(under_nut),
        "NutsEach": count(item.nuts),
    }
    return property_set(step, "Shedbim_Fasteners", part.mark, {k: v for k, v in values.items() if v})


def _standard_fastener_set(step: StepFile, part: Part, group: BoltGroup, element: ElementClass) -> str:
    """Write the standard set of bolts or anchors, numbers being those of one of them; empty where there is none."""
    item, kind = group.fastener, element.items[step.schema.name]
    if step.schema.is_first or kind == "USERDEFINED":
        return ""
    if kind == "ANCHORBOLT":
        values = {"AnchorBoltLength": size(item.length), "AnchorBoltDiameter": size(item.diameter)}
        return property_set(step, "Pset_MechanicalFastenerAnchorBolt", part.mark, values)
    values = {
        "ThreadDiameter": size(item.diameter),
        "NutsCount": count(item.nuts),
        "WashersCount": count(sum(item.washers)),
    }
    return property_set(step, "Pset_MechanicalFastenerBolt", part.mark, values)


def assembly_set(step: StepFile, kind: AssemblyType) -> str:
    """Write the program's own set of equal assemblies."""
    values = {
        "Mark": identifier(kind.mark),
        "Kind": word(kind.kind),
        "Made": word(kind.made),
    }
    return property_set(step, "Shedbim_Assembly", kind.mark, values)
