"""Pieces and assemblies as elements, and the tree that holds each of them once.

An element's name is its key, its tag the mark. Pieces are numbered first in the file, those of a part in
one run, because everything else refers to them: small numbers make a small file.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.errors import ModelError
from shedbim.geometry.placements import relative
from shedbim.model.identity import Words, piece_words, word_ids
from shedbim.model.shed import Shed
from shedbim.writers.ifc.classes import assembly_class
from shedbim.writers.ifc.context import Contexts
from shedbim.writers.ifc.parts import Mapped, PartWriter, shape_representation
from shedbim.writers.ifc.placements import write_placements
from shedbim.writers.ifc.spatial import Storey
from shedbim.writers.ifc.stepfile import SLOT, StepFile, numbered
from shedbim.writers.ifc.text import NONE, enum, label, labels, listed, quoted

__all__ = ["Numbering", "number_pieces", "write_assemblies", "write_pieces", "write_tree"]

Integers = NDArray[np.int64]

_MAPPED = "MappedRepresentation"
_ELEMENT = {"GlobalId": f"'{SLOT}'", "ObjectPlacement": f"#{SLOT}"}


@dataclass(frozen=True, eq=False)
class Numbering:
    """Which entity each piece is.

    Attributes:
        order: (n,) the pieces in the order of their entities, which is that of their parts.
        starts: (p + 1,) where in ``order`` the pieces of each part begin, and the end.
        in_order: n references, in the order of ``order``.
        references: n references, in the order of the pieces.
        words: (n, 2) what the GlobalIds are made from, in the order of the pieces.
    """

    order: Integers
    starts: list[int]
    in_order: list[str]
    references: list[str]
    words: Words

    def of_part(self, part: int) -> list[str]:
        """Give the references of the pieces of a part."""
        return self.in_order[self.starts[part] : self.starts[part + 1]]


def number_pieces(shed: Shed) -> Numbering:
    """Give the pieces the numbers from 1, part by part.

    Raises:
        ModelError: when two pieces, two assemblies or two parts have the same name.
    """
    for what, names in (
        ("pieces", shed.pieces.keys),
        ("piece names", shed.pieces.names),
        ("assemblies", shed.assemblies.keys),
        ("assembly names", shed.assemblies.names),
        ("parts", [part.mark for part in shed.parts]),
    ):
        if len(set(names)) < len(names):
            raise ModelError(f"two {what} of one name")
    order = np.argsort(shed.pieces.part, kind="stable")
    ranks = np.empty_like(order)
    ranks[order] = np.arange(len(order))
    starts = np.concatenate([[0], np.cumsum(shed.quantities)]).tolist()
    in_order = [f"#{number}" for number in range(1, len(order) + 1)]
    words = piece_words(shed.project.id, shed.pieces.names)
    return Numbering(order, starts, in_order, [in_order[rank] for rank in ranks.tolist()], words)


def write_assemblies(step: StepFile, shed: Shed, storey: Storey) -> tuple[list[str], list[str]]:
    """Write the assemblies; give the references of the elements and of their placements."""
    groups = shed.assemblies
    if not len(groups):
        return [], []
    start, kind = write_placements(step, relative(groups.placement, groups.placement, groups.parent))
    ids = step.ids([f"assembly/{name}" for name in groups.names])
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
        classed = classes[type_]
        elements.append(
            step.add(
                "IfcElementAssembly",
                GlobalId=quoted(global_id),
                OwnerHistory=step.owner,
                Name=label(key),
                ObjectType=label(classed.named) if classed.named else NONE,
                ObjectPlacement=placements[-1],
                Tag=label(shed.assembly_types[type_].mark),
                AssemblyPlace=enum(classed.place),
                PredefinedType=enum(classed.item),
            )
        )
    return elements, placements


def write_pieces(
    step: StepFile, shed: Shed, numbering: Numbering, contexts: Contexts, outer: Sequence[str]
) -> None:
    """Write parts and pieces, part by part; ``outer``: placements of the assemblies, then the storey's."""
    pieces, order = shed.pieces, numbering.order.tolist()
    start, kinds = write_placements(
        step, relative(shed.assemblies.placement, pieces.placement, pieces.assembly)
    )
    keys = [pieces.keys[i] for i in order]
    # Index -1, a loose piece, leads to the last one: the storey's.
    owners = [outer[i] for i in pieces.assembly[numbering.order].tolist()]
    places = [f"#{start + kind}" for kind in kinds[numbering.order].tolist()]
    columns = (
        owners,
        places,
        numbered(1, len(keys)),
        word_ids(numbering.words[numbering.order]),
        labels(keys),
    )
    write_part_pieces = _write_owned_shapes if step.schema.is_first else _write_shared_shape
    parts = PartWriter(step, contexts)
    for part, first, last in zip(shed.parts, numbering.starts, numbering.starts[1:], strict=False):
        if first < last:
            mapped = parts.write(part, numbering.in_order[first:last])
            write_part_pieces(step, mapped, label(part.mark), [column[first:last] for column in columns])
    parts.finish()


def _write_shared_shape(step: StepFile, mapped: Mapped, tag: str, columns: Sequence[Sequence[str]]) -> None:
    """Write the pieces of a part, which share one shape; ``columns`` are those of ``write_pieces``."""
    shown = [
        shape_representation(step, each.context, each.identifier, _MAPPED, [each.item])
        for each in mapped.shown
    ]
    shape = step.add("IfcProductDefinitionShape", Representations=listed(shown))
    template = step.template("IfcLocalPlacement", "PlacementRelTo", "RelativePlacement")
    template += step.template(
        mapped.element.entity, "Name", **_ELEMENT, Representation=shape, Tag=tag, **mapped.attributes
    )
    owners, places, elements, ids, names = columns
    local = numbered(step.reserve(len(names)), len(names))
    step.fill(template, local, owners, places, elements, ids, names, local)


def _write_owned_shapes(step: StepFile, mapped: Mapped, tag: str, columns: Sequence[Sequence[str]]) -> None:
    """Write the pieces of a part, each with a shape of its own, as IFC2X3 wants it."""
    template = "".join(
        step.template(
            "IfcShapeRepresentation",
            ContextOfItems=each.context,
            RepresentationIdentifier=quoted(each.identifier),
            RepresentationType=quoted(_MAPPED),
            Items=listed([each.item]),
        )
        for each in mapped.shown
    )
    template += step.template(
        "IfcProductDefinitionShape", Representations=listed([f"#{SLOT}"] * len(mapped.shown))
    )
    template += step.template("IfcLocalPlacement", "PlacementRelTo", "RelativePlacement")
    template += step.template(
        mapped.element.entity,
        "Name",
        **_ELEMENT,
        Representation=f"#{SLOT}",
        Tag=tag,
        ObjectType=label(mapped.element.named or mapped.element.items[step.schema.name]),
        **mapped.attributes,
    )
    owners, places, elements, ids, names = columns
    count = len(names)
    shown = [numbered(step.reserve(count), count) for _ in mapped.shown]
    shape, local = (numbered(step.reserve(count), count) for _ in range(2))
    step.fill(template, *shown, shape, *shown, local, owners, places, elements, ids, names, local, shape)


def write_tree(
    step: StepFile,
    shed: Shed,
    storey: Storey,
    assemblies: Sequence[str],
    held: Sequence[tuple[Integers, Sequence[str]]],
    *,
    grid: str,
) -> None:
    """Write where each element belongs: in its assembly, or else in the storey.

    Args:
        assemblies: references of all.
        held: indices of assemblies (n,), -1 for none, and the n references of what each holds.
        grid: the reference of the grid.
    """
    loose = [grid]
    inside: list[list[str]] = [[] for _ in assemblies]
    for owners, references in ((shed.assemblies.parent, assemblies), *held):
        for owner, reference in zip(owners.tolist(), references, strict=True):
            (inside[owner] if owner >= 0 else loose).append(reference)
    step.rooted(
        "IfcRelContainedInSpatialStructure",
        "contained",
        RelatedElements=listed(loose),
        RelatingStructure=storey.itself,
    )
    filled = [i for i, members in enumerate(inside) if members]
    step.fill(
        step.template("IfcRelAggregates", "RelatingObject", GlobalId=f"'{SLOT}'", RelatedObjects=f"({SLOT})"),
        numbered(step.reserve(len(filled)), len(filled)),
        step.ids([f"aggregates/assembly/{shed.assemblies.names[i]}" for i in filled]),
        [assemblies[i] for i in filled],
        [",".join(inside[i]) for i in filled],
    )
