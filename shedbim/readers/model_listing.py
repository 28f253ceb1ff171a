"""The elements of a model file listed, in a process of its own: ``python -m shedbim.readers.model_listing``.

The library that reads model files may end its process for what a hostile file holds: see ``meshing``. The lists are
left in a folder as ``state.json``, placements in mm as ``placement.npy``.
"""

from __future__ import annotations

import json
import sys
from collections import defaultdict
from hashlib import sha1
from math import isfinite
from pathlib import Path
from typing import Any

import numpy as np

from shedbim.readers.meshing import bound_memory
from shedbim.readers.model_shapes import Digests, Frames

__all__ = ["MOST_ELEMENTS", "main"]

#: More elements than this are refused.
MOST_ELEMENTS = 1_000_000
#: Elements after which the process says that it is at work.
_SAYS = 1000
#: Properties that name what a thing is made of, its quality and its finish, in whichever set.
_STOCK, _GRADE, _FINISH, _ROLE = ("Section", "Stock", "Thickness"), ("Grade",), ("Finish",), ("Role",)
_MASS, _SURFACE = ("NetWeight", "GrossWeight"), ("OuterSurfaceArea", "NetSurfaceArea", "GrossSurfaceArea")


def main(path: str, folder: str) -> None:
    """Leave the list of a model's elements in a folder; says what is wrong with the file on standard output."""
    bound_memory()
    import ifcopenshell  # noqa: PLC0415 - once the memory is bounded

    try:
        model = ifcopenshell.open(path)
        data, placement = _listed(model)
    except Exception as error:  # whatever the library says of a hostile file
        print("fault", (" ".join(str(error).split()) or type(error).__name__)[:200], flush=True)
        return
    np.save(Path(folder) / "placement.npy", placement, allow_pickle=False)
    text = json.dumps(data, ensure_ascii=False)
    (Path(folder) / "state.json").write_bytes(text.encode("utf-8", "replace"))
    print("end", flush=True)


def _listed(model: Any) -> tuple[dict[str, Any], Any]:
    """What the file tells, in plain values, and the placements (n, 3, 4)."""
    from ifcopenshell.util.unit import calculate_unit_scale  # noqa: PLC0415 - heavy, and this process alone needs it

    elements = [
        each
        for each in model.by_type("IfcElement")
        if each.Representation is not None and not each.is_a("IfcFeatureElement")
    ]
    if len(elements) > MOST_ELEMENTS:
        raise ValueError(
            f"it has {len(elements):,} elements with a shape, and at most {MOST_ELEMENTS:,} are read"
        )
    millimetres = float(calculate_unit_scale(model)) * 1000
    frames, digests = Frames(millimetres), Digests()
    known = _Known(model, millimetres)
    things: dict[tuple[Any, ...], int] = {}
    found: dict[str, list[Any]] = {name: [] for name in ("ids", "keys", "thing", "joints", "assembly")}
    placement, seen = [], set[str]()
    for number, element in enumerate(elements):
        if number % _SAYS == 0:
            print("done", number, flush=True)
        name = str(element.GlobalId)
        if name in seen:
            continue
        seen.add(name)
        thing = (*known.thing(element), digests.of(element.Representation)[:12])
        found["ids"].append(name)
        found["keys"].append(str(element.Name or ""))
        found["thing"].append(things.setdefault(thing, len(things)))
        found["joints"].append(f"{known.joints.get(element.id(), 0):x}")
        found["assembly"].append(known.held.get(element.id(), ""))
        placement.append(frames.of(element.ObjectPlacement))
    if not np.isfinite(placement).all():
        raise ValueError("an element lies nowhere: a number of its placement is none")
    projects = model.by_type("IfcProject")
    return {
        **found,
        "things": list(things),
        "project": str(projects[0].Name or "") if projects else "",
        "project_id": str(projects[0].GlobalId) if projects else "",
        "doubled": len(elements) - len(seen),
    }, np.array(placement, float).reshape(-1, 3, 4)


class _Known:
    """What relations of a model say of its elements, gone through once."""

    def __init__(self, model: Any, millimetres: float) -> None:
        self._millimetres = millimetres
        self._type: dict[int, Any] = {}
        self._sets: dict[int, list[Any]] = defaultdict(list)
        self._material: dict[int, Any] = {}
        self._said: dict[int, tuple[dict[str, str], dict[str, float]]] = {}
        self._kinds: dict[int, tuple[Any, str, tuple[Any, ...]]] = {}
        self._steel: dict[int, tuple[str, str]] = {}
        self.held: dict[int, str] = {}
        self.joints: dict[int, int] = defaultdict(int)
        for each in model.by_type("IfcRelDefinesByType"):
            for element in each.RelatedObjects:
                self._type[element.id()] = each.RelatingType
        for each in model.by_type("IfcRelDefinesByProperties"):
            for element in each.RelatedObjects:
                self._sets[element.id()].append(each.RelatingPropertyDefinition)
        for each in model.by_type("IfcRelAssociatesMaterial"):
            for element in each.RelatedObjects:
                self._material[element.id()] = each.RelatingMaterial
        for each in model.by_type("IfcRelAggregates"):
            if each.RelatingObject.is_a("IfcElementAssembly"):
                mark = str(each.RelatingObject.Tag or each.RelatingObject.Name or "")
                self.held |= {element.id(): mark for element in each.RelatedObjects}
        for each in model.by_type("IfcRelConnectsElements"):
            self._join(each)

    def _join(self, relation: Any) -> None:
        """Add a connection to the numbers of the two elements that it connects."""
        ends = [relation.RelatingElement, relation.RelatedElement]
        further = len(getattr(relation, "RealizingElements", None) or ())
        text = f"{relation.is_a()} {relation.Name} {[each.GlobalId for each in ends]} {further}"
        number = int.from_bytes(sha1(text.encode("utf-8", "surrogatepass")).digest()[:8], "big")
        for element in ends:
            self.joints[element.id()] = (self.joints[element.id()] + number) % 2**64

    def thing(self, element: Any) -> tuple[Any, ...]:
        """Mark, role, stock, grade, finish, mass, length, surface, and the digest of all properties."""
        number = element.id()
        kind, name, of_kind = self._kind(self._type.get(number))
        material = self._material.get(number) or (None if kind is None else self._material.get(kind.id()))
        values: dict[str, str] = {}
        amounts: dict[str, float] = {}
        for each in (*of_kind, *self._sets.get(number, ())):
            said, measured = self._told(each)
            values |= said
            amounts |= measured
        marks = (str(element.Tag or name), self.held.get(number, ""))
        return self._thing(element.is_a(), marks, values, amounts, self._made_of(material))

    def _kind(self, kind: Any) -> tuple[Any, str, tuple[Any, ...]]:
        """A type with its name and property sets; nothing for none."""
        if kind is None:
            return None, "", ()
        number = kind.id()
        if number not in self._kinds:
            self._kinds[number] = (kind, str(kind.Name or ""), tuple(kind.HasPropertySets or ()))
        return self._kinds[number]

    def _made_of(self, material: Any) -> tuple[str, str]:
        """Name of the profile and of the material."""
        if material is None:
            return "", ""
        number = material.id()
        if number not in self._steel:
            self._steel[number] = _made_of(material)
        return self._steel[number]

    def _told(self, each: Any) -> tuple[dict[str, str], dict[str, float]]:
        """The properties in a set as texts by set and name, and the quantities in it by name."""
        number = each.id()
        if number in self._said:
            return self._said[number]
        values, amounts = dict[str, str](), dict[str, float]()
        if each.is_a("IfcElementQuantity"):
            amounts = {
                one.Name: float(one[3])
                for one in each.Quantities
                if one.is_a("IfcPhysicalSimpleQuantity") and one[3] is not None and isfinite(one[3])
            }
        elif each.is_a("IfcPropertySet"):
            values = {
                f"{each.Name}/{one.Name}": str(_plain(one.NominalValue))
                for one in each.HasProperties
                if one.is_a("IfcPropertySingleValue") and one.NominalValue is not None
            }
        if number:
            self._said[number] = values, amounts
        return values, amounts

    def _thing(
        self,
        kind: str,
        marks: tuple[str, str],
        values: dict[str, str],
        amounts: dict[str, float],
        made_of: tuple[str, str],
    ) -> tuple[Any, ...]:
        """What is said of an element, put together; what names its marks or its stock is no property of its own."""
        short = {name.partition("/")[2]: value for name, value in values.items()}
        profile, steel = made_of
        stock, grade = _first(short, _STOCK) or profile, _first(short, _GRADE) or steel
        told = sorted(each for each in values.items() if each[1] not in (*marks, stock))
        role = _first(short, _ROLE) or kind.removeprefix("Ifc").lower()
        length = amounts.get("Length", 0.0) * self._millimetres
        mass, surface = (
            next((amounts[name] for name in names if name in amounts), 0.0) for names in (_MASS, _SURFACE)
        )
        digest = sha1(repr(told).encode("utf-8", "surrogatepass")).hexdigest()[:12]
        # Noise of the last digits makes no other thing.
        return (
            marks[0],
            role,
            stock,
            grade,
            _first(short, _FINISH),
            round(mass, 6),
            round(length, 4),
            round(surface, 6),
            digest,
        )


def _first(values: dict[str, str], names: tuple[str, ...]) -> str:
    return next((values[name] for name in names if values.get(name)), "")


def _plain(value: Any) -> Any:
    """The value of a property; a number without the noise of its last digits."""
    bare = getattr(value, "wrappedValue", value)
    return round(bare, 6) + 0.0 if isinstance(bare, float) else bare


def _made_of(material: Any) -> tuple[str, str]:
    """Name of the profile, and of the material, of whatever an element is associated with; empty where none is said."""
    if material is None:
        return "", ""
    if material.is_a("IfcMaterialProfileSetUsage"):
        material = material.ForProfileSet
    if material.is_a("IfcMaterialProfileSet"):
        parts = material.MaterialProfiles
        profiles = [each.Name or (each.Profile.ProfileName if each.Profile else "") or "" for each in parts]
        return ", ".join(profiles), ", ".join(str(each.Material.Name) for each in parts if each.Material)
    return "", str(getattr(material, "Name", None) or "")


if __name__ == "__main__":
    main(sys.argv[1], sys.argv[2])
