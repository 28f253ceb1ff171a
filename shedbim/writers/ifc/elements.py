"""Pieces and assemblies as elements, and the tree that holds each of them once.

An element's name is its key, its tag the mark. Pieces are numbered first in the file, those of a part in
one run, because everything else refers to them: small numbers make a small file.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.errors import ModelError
from shedbim.model.identity import piece_ids
from shedbim.model.shed import Shed
from shedbim.writers.ifc.classes import assembly_class
from shedbim.writers.ifc.context import Contexts
from shedbim.writers.ifc.parts import Mapped, PartWriter, shape_representation
from shedbim.writers.ifc.placements import relative, write_placements
from shedbim.writers.ifc.spatial import Storey
from shedbim.writers.ifc.stepfile import StepFile
from shedbim.writers.ifc.text import enum, label, listed, quoted

__all__ = ["Numbering", "number_pieces", "write_assemblies", "write_pieces", "write_tree"]

Integers = NDArray[np.int64]

#: A piece to be written: its number, its owner's placement, the number it lies at, its GlobalId, its name.
Row = tuple[int, str, int, str, str]

_MAPPED = "MappedRepresentation"
_ELEMENT_SLOTS = {"GlobalId": "'%s'", "Name": "%s", "ObjectPlacement": "#%d"}
_ENTITIES = 4  # of a piece besides itself where it has a shape of its own


@dataclass(frozen=True, eq=False)
class Numbering:
    """Which entity each piece is.

    Attributes:
        order: (n,) the pieces in the order of their entities, which is that of their parts.
            starts: (p + 1,) where in ``order`` the pieces of each part begin, and the end.
        references: n texts, in the order of the pieces.
    """

    order: Integers
    starts: list[int]
    references: list[str]

    def of_part(self, part: int) -> list[int]:
        """Give the pieces of a part."""
        found: list[int] = self.order[self.starts[part] : self.starts[part + 1]].tolist()
        return found


def number_pieces(shed: Shed) -> Numbering:
    """Give the pieces the numbers from 1, part by part.

    Raises:
        ModelError: when two pieces, two assemblies or two parts have the same name.
    """
    for what, names in (
        ("pieces", shed.pieces.keys),
        ("assemblies", shed.assemblies.keys),
        ("parts", [part.mark for part in shed.parts]),
    ):
        if len(set(names)) < len(names):
            raise ModelError(f"two {what} of one name")
    order = np.argsort(shed.pieces.part, kind="stable")
    numbers = np.empty(len(order), np.int64)
    numbers[order] = np.arange(1, len(order) + 1)
    starts = np.concatenate([[0], np.cumsum(shed.quantities)]).tolist()
    return Numbering(order, starts, [f"#{number}" for number in numbers.tolist()])


def write_assemblies(step: StepFile, shed: Shed, storey: Storey) -> tuple[list[str], list[str]]:
    """Write the assemblies; give the references of the elements and of their placements."""
    groups = shed.assemblies
    if not len(groups):
        return [], []
    start, kind = write_placements(step, relative(groups.placement, groups.placement, groups.parent))
    ids = step.ids([f"assembly/{key}" for key in groups.keys])
    classes = [assembly_class(each) for each in shed.assembly_types]
    elements: list[str] = []
    placements: list[str] = []
    rows = zip(groups.keys, ids, groups.type.tolist(), groups.parent.tolist(), kind.tolist(), strict=True)
    for key, global_id, type_, parent, which in rows:
        placements.append(
            step.add(
                "IfcLocalPlacement",
                PlacementRelTo=storey.placement if parent < 0 else placements[parent],
                RelativePlacement=f"#{start + which}",
            )
        )
        item, place = classes[type_]
        elements.append(
            step.add(
                "IfcElementAssembly",
                GlobalId=quoted(global_id),
                OwnerHistory=step.owner,
                Name=label(key),
                ObjectPlacement=placements[-1],
                Tag=label(shed.assembly_types[type_].mark),
                AssemblyPlace=enum(place),
                PredefinedType=enum(item),
            )
        )
    return elements, placements


def write_pieces(
    step: StepFile,
    shed: Shed,
    numbering: Numbering,
    contexts: Contexts,
    placements: Sequence[str],
    storey: Storey,
) -> None:
    """Write parts and pieces, part by part; ``placements`` are those of the assemblies."""
    pieces = shed.pieces
    start, kinds = write_placements(
        step, relative(shed.assemblies.placement, pieces.placement, pieces.assembly)
    )
    kind = kinds.tolist()
    # The last of these is the storey's, which is where index -1 leads.
    outer = [*placements, storey.placement]
    owners = [outer[assembly] for assembly in pieces.assembly.tolist()]
    names = [label(key) for key in pieces.keys]
    ids = piece_ids(shed.project.id, pieces.keys)
    parts = PartWriter(step, contexts)
    for index, part in enumerate(shed.parts):
        members = numbering.of_part(index)
        if not members:
            continue
        mapped = parts.write(part, [numbering.references[i] for i in members])
        numbers = range(numbering.starts[index] + 1, numbering.starts[index + 1] + 1)
        rows = [
            (number, owners[i], start + kind[i], ids[i], names[i])
            for number, i in zip(numbers, members, strict=True)
        ]
        lines = _owned_shapes if step.schema.is_first else _shared_shape
        step.write(lines(step, contexts, mapped, label(part.mark), rows))
    parts.finish()


def _shared_shape(
    step: StepFile, contexts: Contexts, mapped: Mapped, tag: str, rows: Sequence[Row]
) -> Iterator[str]:
    """Give the lines of the pieces of a part, which share one shape."""
    shape = step.add(
        "IfcProductDefinitionShape",
        Representations=listed(
            shape_representation(step, context, identifier, _MAPPED, item)
            for context, identifier, item in _representations(contexts, mapped)
        ),
    )
    line = _local_line(step) + step.template(
        mapped.element.entity, _ELEMENT_SLOTS, Representation=shape, Tag=tag
    )
    first = step.reserve(len(rows))
    for local, (number, owner, placement, global_id, name) in enumerate(rows, first):
        yield line % (local, owner, placement, number, global_id, name, local)


def _owned_shapes(
    step: StepFile, contexts: Contexts, mapped: Mapped, tag: str, rows: Sequence[Row]
) -> Iterator[str]:
    """Give the lines of the pieces of a part, each with a shape of its own, as IFC2X3 wants it."""
    held = "".join(
        step.template(
            "IfcShapeRepresentation",
            {},
            ContextOfItems=context,
            RepresentationIdentifier=quoted(identifier),
            RepresentationType=quoted(_MAPPED),
            Items=listed([item]),
        )
        for context, identifier, item in _representations(contexts, mapped)
    )
    shape = step.template("IfcProductDefinitionShape", {"Representations": "(#%d,#%d)"})
    element = step.template(
        mapped.element.entity,
        _ELEMENT_SLOTS | {"Representation": "#%d"},
        Tag=tag,
        ObjectType=label(mapped.element.named or mapped.element.items[step.schema.name]),
    )
    line = held + shape + _local_line(step) + element
    first = step.reserve(_ENTITIES * len(rows))
    for at, (number, owner, placement, global_id, name) in enumerate(rows):
        axis = first + _ENTITIES * at
        body, whole, local = axis + 1, axis + 2, axis + 3
        yield line % (
            axis,
            body,
            whole,
            axis,
            body,
            local,
            owner,
            placement,
            number,
            global_id,
            name,
            local,
            whole,
        )


def _local_line(step: StepFile) -> str:
    """Give the template of a piece's placement: its number, its owner's reference, the number it lies at."""
    return step.template("IfcLocalPlacement", {"PlacementRelTo": "%s", "RelativePlacement": "#%d"})


def _representations(contexts: Contexts, mapped: Mapped) -> tuple[tuple[str, str, str], ...]:
    """Give context, identifier and item of each representation of a piece."""
    return (contexts.axis, "Axis", mapped.axis), (contexts.body, "Body", mapped.body)


def write_tree(
    step: StepFile, shed: Shed, storey: Storey, pieces: Sequence[str], assemblies: Sequence[str], grid: str
) -> None:
    """Write where each element belongs: in its assembly, or else in the storey."""
    loose = [grid]
    inside: list[list[str]] = [[] for _ in assemblies]
    for owners, references in ((shed.assemblies.parent, assemblies), (shed.pieces.assembly, pieces)):
        for owner, reference in zip(owners.tolist(), references, strict=True):
            (inside[owner] if owner >= 0 else loose).append(reference)
    step.rooted(
        "IfcRelContainedInSpatialStructure",
        "contained",
        RelatedElements=listed(loose),
        RelatingStructure=storey.itself,
    )
    line = step.template(
        "IfcRelAggregates", {"GlobalId": "'%s'", "RelatingObject": "%s", "RelatedObjects": "(%s)"}
    )
    filled = [i for i, members in enumerate(inside) if members]
    ids = step.ids([f"aggregates/assembly/{shed.assemblies.keys[i]}" for i in filled])
    first = step.reserve(len(filled))
    step.write(
        line % (first + at, global_id, assemblies[i], ",".join(inside[i]))
        for at, (i, global_id) in enumerate(zip(filled, ids, strict=True))
    )
