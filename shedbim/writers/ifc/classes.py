"""What a role is in each schema: class, predefined type, and a name where the list has none."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from shedbim.errors import ModelError
from shedbim.model.roles import Role
from shedbim.model.shed import AssemblyType
from shedbim.writers.ifc.schema import SCHEMAS

__all__ = ["CLASSES", "ElementClass", "assembly_class", "element_class"]


@dataclass(frozen=True)
class ElementClass:
    """How pieces of a role are classed.

    Attributes:
        entity: class of the occurrence; its type's is the same with ``Type`` behind.
        items: schema to the item of its enumeration of predefined types.
        named: what the piece is where that enumeration has no word for it; else empty.
    """

    entity: str
    items: Mapping[str, str]
    named: str = ""

    @property
    def noun(self) -> str:
        """The class as names of standard property and quantity sets hold it: ``Member``."""
        return self.entity.removeprefix("Ifc")


def _class(entity: str, item: str, named: str = "", **other: str) -> ElementClass:
    """Give a class with one item in all schemas but those in ``other``."""
    return ElementClass(entity, {schema: other.get(schema, item) for schema in SCHEMAS}, named)


#: Items are those of ISO 16739-1 and of IFC2X3; no schema has a word for a rail, only IFC4X3 one for ties.
CLASSES: Mapping[Role, ElementClass] = {
    Role.COLUMN: _class("IfcColumn", "COLUMN"),
    Role.GABLE_POST: _class("IfcColumn", "COLUMN"),
    Role.RAFTER: _class("IfcMember", "RAFTER"),
    Role.GABLE_RAFTER: _class("IfcMember", "RAFTER"),
    Role.TOP_CHORD: _class("IfcMember", "CHORD"),
    Role.BOTTOM_CHORD: _class("IfcMember", "CHORD"),
    Role.DIAGONAL: _class("IfcMember", "BRACE"),
    Role.POST: _class("IfcMember", "POST"),
    Role.PURLIN: _class("IfcMember", "PURLIN"),
    Role.SIDE_RAIL: _class("IfcMember", "USERDEFINED", "SIDERAIL", IFC2X3="MEMBER"),
    Role.GABLE_RAIL: _class("IfcMember", "USERDEFINED", "GABLERAIL", IFC2X3="MEMBER"),
    Role.EAVES_STRUT: _class("IfcMember", "STRUT"),
    Role.VALLEY_STRUT: _class("IfcMember", "STRUT"),
    Role.STRUT: _class("IfcMember", "STRUT"),
    Role.ROOF_BRACE: _class("IfcMember", "BRACE"),
    Role.WALL_BRACE: _class("IfcMember", "BRACE"),
    Role.TIE: _class("IfcMember", "STRUT", IFC4X3_ADD2="TIEBAR"),
    Role.SAG_BAR: _class("IfcMember", "USERDEFINED", "SAGROD", IFC2X3="MEMBER", IFC4X3_ADD2="TIEBAR"),
}

_ASSEMBLY_ITEMS = {"truss": "TRUSS", "frame": "RIGID_FRAME"}
_ASSEMBLY_PLACES = {"shop": "FACTORY", "site": "SITE"}


def element_class(role: Role) -> ElementClass:
    """Give the class of a role's pieces.

    Raises:
        ModelError: when the table lacks the role.
    """
    if role not in CLASSES:
        raise ModelError(f"no class of elements for the role {role.word!r}")
    return CLASSES[role]


def assembly_class(kind: AssemblyType) -> tuple[str, str]:
    """Give the predefined type and the place of assembly, the same in all schemas.

    Raises:
        ModelError: for a kind or place the tables lack.
    """
    if kind.kind not in _ASSEMBLY_ITEMS or kind.made not in _ASSEMBLY_PLACES:
        raise ModelError(f"no class for an assembly of kind {kind.kind!r} made {kind.made!r}")
    return _ASSEMBLY_ITEMS[kind.kind], _ASSEMBLY_PLACES[kind.made]
