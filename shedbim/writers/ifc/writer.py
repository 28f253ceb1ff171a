"""A Shed as the bytes of a model file, from the header to the end."""

from __future__ import annotations

from typing import BinaryIO

from shedbim.model.shed import Shed
from shedbim.writers.ifc.context import end_lines, header_lines, write_contexts, write_owner, write_units
from shedbim.writers.ifc.elements import number_pieces, write_assemblies, write_pieces, write_tree
from shedbim.writers.ifc.groups import write_groups
from shedbim.writers.ifc.joints import write_joints
from shedbim.writers.ifc.keys import write_assembly_sets, write_full_keys, write_split_keys
from shedbim.writers.ifc.schema import schema as schema_named
from shedbim.writers.ifc.spatial import write_grid, write_spatial
from shedbim.writers.ifc.stepfile import StepFile
from shedbim.writers.ifc.welds import write_welds

__all__ = ["write"]


def write(
    shed: Shed,
    sink: BinaryIO,
    *,
    schema: str = "IFC4",
    timestamp: str = "1970-01-01T00:00:00",
    full_keys: bool = False,
    shop_joints: bool = False,
) -> None:
    """Write a building as an open BIM model in the ISO 10303-21 text format; equal input gives equal bytes.

    Args:
        shed: the building.
        sink: takes the bytes, a part of the file at a time.
        schema: ``IFC4``, ``IFC4X3_ADD2`` or ``IFC2X3``.
        timestamp: ISO 8601, as the header states it.
        full_keys: give each piece a property set with its whole key, not sets shared by line and place.
        shop_joints: also write the joints within assemblies made in the shop that no fitting or weld
            realizes. They make a large file a sixth larger, and the assembly says that its pieces are one.

    Raises:
        ModelError: for another schema, or a building that breaks its own promises.
    """
    numbering = number_pieces(shed)
    step = StepFile(sink, schema_named(schema), shed.project.id, first=len(shed.pieces) + 1)
    step.write(header_lines(schema, timestamp))
    if step.schema.is_first:
        step.owner = write_owner(step, timestamp)
    metre, units = write_units(step)
    contexts = write_contexts(step, shed.georeference, metre)
    storey = write_spatial(step, shed, contexts, units)
    grid = write_grid(step, shed.grid, contexts, storey)
    assemblies, placements = write_assemblies(step, shed, storey)
    write_pieces(step, shed, numbering, contexts, [*placements, storey.placement])
    welds = write_welds(step, shed, numbering)
    held = ((shed.pieces.assembly, numbering.references), (welds.owner, welds.references))
    write_tree(step, shed, storey, assemblies, held, grid=grid)
    write_assembly_sets(step, shed, assemblies)
    if full_keys:
        write_full_keys(step, shed, numbering)
    else:
        write_split_keys(step, shed, numbering, assemblies)
    write_groups(step, shed, numbering)
    write_joints(step, shed, numbering, welds, shop_joints=shop_joints)
    step.write(end_lines())
    step.flush()
