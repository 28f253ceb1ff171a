"""Keys as property sets: split so that sets are shared, or whole, a set for each piece.

A key is ``<line or bay>/<rest>``. One set holds the line and is shared by all that stands on it, one holds
the place, the rest of the key, and is shared by what stands in that place on any line.
"""

from __future__ import annotations

from collections.abc import Sequence

from shedbim.model.shed import Shed
from shedbim.writers.ifc.elements import Numbering
from shedbim.writers.ifc.properties import assembly_set, identifier, one_property, property_set, relate_set
from shedbim.writers.ifc.stepfile import BETWEEN, SLOT, StepFile, numbered
from shedbim.writers.ifc.text import labels, quoted

__all__ = ["write_assembly_sets", "write_full_keys", "write_split_keys"]


def write_assembly_sets(step: StepFile, shed: Shed, assemblies: Sequence[str]) -> None:
    """Write what equal assemblies share; ``assemblies`` are the references of all."""
    members: list[list[str]] = [[] for _ in shed.assembly_types]
    for type_, reference in zip(shed.assemblies.type.tolist(), assemblies, strict=True):
        members[type_].append(reference)
    for kind, references in zip(shed.assembly_types, members, strict=True):
        if not references:
            continue
        relate_set(step, assembly_set(step, kind), f"assembly/{kind.mark}", references)
        if not step.schema.is_first:
            values = {"Reference": identifier(kind.mark)}
            common = property_set(step, "Pset_ElementAssemblyCommon", kind.mark, values)
            relate_set(step, common, f"assembly common/{kind.mark}", references)


def write_split_keys(step: StepFile, shed: Shed, numbering: Numbering, assemblies: Sequence[str]) -> None:
    """Write the sets ``Shedbim_Line`` and ``Shedbim_Place`` of all pieces and assemblies."""
    lines: dict[str, list[str]] = {}
    places: dict[tuple[str, str], list[str]] = {}
    marks = _assembly_marks(shed)
    own = [shed.assembly_types[type_].mark for type_ in shed.assemblies.type.tolist()]
    for keys, held, references in (
        (shed.assemblies.keys, own, assemblies),
        (shed.pieces.keys, marks, numbering.references),
    ):
        for key, mark, reference in zip(keys, held, references, strict=True):
            line, _, place = key.partition("/")
            lines.setdefault(line, []).append(reference)
            places.setdefault((place, mark), []).append(reference)
    for line, members in lines.items():
        made = property_set(step, "Shedbim_Line", line, {"Line": identifier(line)})
        relate_set(step, made, f"line/{line}", members)
    for (place, mark), members in places.items():
        values = {name: identifier(text) for name, text in (("Place", place), ("AssemblyMark", mark)) if text}
        if values:
            scope = f"{mark}{BETWEEN}{place}"
            relate_set(step, property_set(step, "Shedbim_Place", scope, values), f"place/{scope}", members)


def write_full_keys(step: StepFile, shed: Shed, numbering: Numbering) -> None:
    """Write a set ``Shedbim_Piece`` for each piece: its key, and its assembly's key and mark."""
    keys = shed.pieces.keys
    extra = {
        index: "".join(
            f",{one_property(step, name, identifier(text))}"
            for name, text in (("AssemblyKey", key), ("AssemblyMark", shed.assembly_types[type_].mark))
        )
        for index, (key, type_) in enumerate(
            zip(shed.assemblies.keys, shed.assemblies.type.tolist(), strict=True)
        )
    }
    count = len(keys)
    template = step.template(
        "IfcPropertySingleValue", Name=quoted("Key"), NominalValue=f"IFCIDENTIFIER({SLOT})"
    )
    template += step.template(
        "IfcPropertySet",
        GlobalId=f"'{SLOT}'",
        Name=quoted("Shedbim_Piece"),
        HasProperties=f"(#{SLOT}{SLOT})",
    )
    template += step.template(
        "IfcRelDefinesByProperties",
        GlobalId=f"'{SLOT}'",
        RelatedObjects=f"({SLOT})",
        RelatingPropertyDefinition=f"#{SLOT}",
    )
    properties, sets, relations = (numbered(step.reserve(count), count) for _ in range(3))
    set_ids = step.ids([f"Shedbim_Piece/{key}" for key in keys])
    relation_ids = step.ids([f"defines/piece/{key}" for key in keys])
    more = [extra.get(owner, "") for owner in shed.pieces.assembly.tolist()]
    step.fill(
        template, properties, labels(keys), sets, set_ids, properties, more,
        relations, relation_ids, numbering.references, sets,
    )  # fmt: skip


def _assembly_marks(shed: Shed) -> list[str]:
    """Give the mark of the assembly each piece is made into in the shop, empty where it is none."""
    kinds = [shed.assembly_types[type_] for type_ in shed.assemblies.type.tolist()]
    # The last of these is for index -1: a loose piece.
    marks = [kind.mark if kind.made == "shop" else "" for kind in kinds] + [""]
    return [marks[owner] for owner in shed.pieces.assembly.tolist()]
