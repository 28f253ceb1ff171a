"""Groups: bracing and secondary steel, which are looked at together."""

from __future__ import annotations

from collections.abc import Mapping

from shedbim.model.roles import Role
from shedbim.model.shed import Shed
from shedbim.writers.ifc.elements import Numbering
from shedbim.writers.ifc.stepfile import StepFile
from shedbim.writers.ifc.text import label, listed

__all__ = ["GROUPS", "write_groups"]

#: Roles that are looked at together, by the name of their group.
GROUPS: Mapping[str, tuple[Role, ...]] = {
    "roof bracing": (Role.ROOF_BRACE,),
    "wall bracing": (Role.WALL_BRACE,),
    "struts and ties": (Role.STRUT, Role.EAVES_STRUT, Role.VALLEY_STRUT, Role.TIE),
    "secondary steel": (Role.PURLIN, Role.SIDE_RAIL, Role.GABLE_RAIL, Role.SAG_BAR),
}


def write_groups(step: StepFile, shed: Shed, numbering: Numbering) -> None:
    """Write the groups that have any pieces."""
    for name, roles in GROUPS.items():
        parts = [i for i, part in enumerate(shed.parts) if part.role in roles]
        members = [reference for part in parts for reference in numbering.of_part(part)]
        if not members:
            continue
        group = step.rooted("IfcGroup", f"group/{name}", Name=label(name))
        step.rooted(
            "IfcRelAssignsToGroup", f"grouped/{name}", RelatedObjects=listed(members), RelatingGroup=group
        )
