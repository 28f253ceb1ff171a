"""What a role is in each schema: class, predefined type, and a name where the list has none."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from shedbim.errors import ModelError
from shedbim.model.bars import Bar
from shedbim.model.plates import Plate
from shedbim.model.roles import Role, Sort
from shedbim.model.shapes import Shape
from shedbim.model.shed import AssemblyType
from shedbim.writers.ifc.schema import SCHEMAS

__all__ = ["BARS", "CLASSES", "AssemblyClass", "ElementClass", "assembly_class", "element_class"]


@dataclass(frozen=True)
class ElementClass:
    """How pieces of a role are classed.

    Attributes:
        entity: class of the occurrence; its type's is the same with ``Type`` behind.
        items: schema to the item of its enumeration of predefined types; IFC2X3 has none for fasteners.
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


def _plate(named: str, newest: str = "USERDEFINED") -> ElementClass:
    """Give a class of plates: only IFC4X3 tells them apart, and not all of them."""
    return _class("IfcPlate", "USERDEFINED", named, IFC2X3="SHEET", IFC4X3_ADD2=newest)


def _member(named: str) -> ElementClass:
    """Give a class of short bars that no schema has a word for."""
    return _class("IfcMember", "USERDEFINED", named, IFC2X3="MEMBER")


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
    Role.BASE_PLATE: _plate("BASE_PLATE", "BASE_PLATE"),
    Role.PACK: _plate("PACK"),
    Role.SHEAR_KEY: _plate("SHEAR_KEY"),
    # A COVER_PLATE is one that strengthens a flange.
    Role.CAP_PLATE: _plate("CAP_PLATE"),
    Role.END_PLATE: _plate("END_PLATE"),
    Role.FIN_PLATE: _plate("FIN_PLATE"),
    Role.HAUNCH: _plate("HAUNCH_PLATE"),
    Role.STIFFENER: _plate("STIFFENER_PLATE", "STIFFENER_PLATE"),
    Role.SEAT: _plate("SEAT_PLATE"),
    Role.GUSSET: _plate("GUSSET_PLATE", "GUSSET_PLATE"),
    Role.CLEAT: _plate("CLEAT"),
    Role.SPLICE_PLATE: _plate("SPLICE_PLATE", "SPLICE_PLATE"),
    Role.SLEEVE: _member("SLEEVE"),
    Role.STAY: _class("IfcMember", "BRACE"),
    Role.BOLTS: _class("IfcMechanicalFastener", "BOLT"),
    Role.ANCHORS: _class("IfcMechanicalFastener", "ANCHORBOLT"),
    Role.NUTS: _class("IfcMechanicalFastener", "USERDEFINED", "NUT"),
}

#: The class of roles that are plates in ``CLASSES`` where the piece is cut from a bar.
BARS: Mapping[Role, ElementClass] = {
    Role.SHEAR_KEY: _member("SHEAR_KEY"),
    Role.HAUNCH: _member("HAUNCH"),
    Role.CLEAT: _class("IfcDiscreteAccessory", "BRACKET"),
    Role.SEAT: _class("IfcDiscreteAccessory", "BRACKET"),
}

_ASSEMBLY_ITEMS = {"truss": "TRUSS", "frame": "RIGID_FRAME"}
_ASSEMBLY_PLACES = {"shop": "FACTORY", "site": "SITE"}
_WORDS = {role.word for role in Role}


def element_class(role: Role, shape: Shape) -> ElementClass:
    """Give the class of the pieces of a role that have such a shape.

    Raises:
        ModelError: when the tables lack the role.
    """
    if role not in CLASSES:
        raise ModelError(f"no class of elements for the role {role.word!r}")
    if role.sort is Sort.FITTING:
        usual = CLASSES[role]
        if isinstance(shape, Bar) and usual.entity == "IfcPlate":
            return BARS.get(role) or _member(_capitals(role.word))
        if isinstance(shape, Plate) and usual.entity != "IfcPlate":
            return _plate(_capitals(role.word))
    return CLASSES[role]


@dataclass(frozen=True)
class AssemblyClass:
    """How assemblies of a kind are classed, the same in all schemas.

    Attributes:
        item: predefined type.
        named: what it is where the predefined types have no word for it; else empty.
        place: where it is put together.
    """

    item: str
    named: str
    place: str


def assembly_class(kind: AssemblyType) -> AssemblyClass:
    """Give the class of assemblies; those that are neither truss nor frame are called after their main piece.

    Raises:
        ModelError: for a kind or place the tables lack.
    """
    known = kind.kind in _ASSEMBLY_ITEMS or kind.kind in _WORDS
    if not known or kind.made not in _ASSEMBLY_PLACES:
        raise ModelError(f"no class for an assembly of kind {kind.kind!r} made {kind.made!r}")
    item = _ASSEMBLY_ITEMS.get(kind.kind, "USERDEFINED")
    named = _capitals(kind.kind) if item == "USERDEFINED" else ""
    return AssemblyClass(item, named, _ASSEMBLY_PLACES[kind.made])


def _capitals(words: str) -> str:
    """Give words as the schemas spell the names of types: ``GABLE_POST``."""
    return words.upper().replace(" ", "_")
