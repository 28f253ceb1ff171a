"""Quantity sets: what a part measures, in m, m², m³ and kg, always of its true shape with every hole."""

from __future__ import annotations

from collections.abc import Iterator

from shedbim.model.bars import Bar
from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.plates import Plate
from shedbim.model.shed import Part
from shedbim.sections.section import STEEL_DENSITY
from shedbim.writers.ifc.classes import ElementClass
from shedbim.writers.ifc.stepfile import StepFile
from shedbim.writers.ifc.text import listed, number, quoted

__all__ = ["quantity_set"]

#: Classes of which the standard has base quantities; names and members are those of its templates.
_STANDARD = {"IfcColumn", "IfcMember", "IfcPlate"}

#: Kind, name and value of each quantity.
Quantities = Iterator[tuple[str, str, float]]


def quantity_set(step: StepFile, part: Part, element: ElementClass) -> str:
    """Write the quantities of a part."""
    listing = listed(
        step.share(f"IfcQuantity{kind}", **{"Name": quoted(name), f"{kind}Value": _text(kind, value)})
        for kind, name, value in _quantities(part)
    )
    own = f"Qto_{element.noun}BaseQuantities" if element.entity in _STANDARD else "Shedbim_Quantities"
    return step.rooted(
        "IfcElementQuantity",
        f"quantities/{part.mark}",
        Name=quoted("BaseQuantities" if step.schema.is_first else own),
        MethodOfMeasurement=quoted("BaseQuantities"),
        Quantities=listing,
    )


def _text(kind: str, value: float) -> str:
    return str(round(value)) if kind == "Count" else number(value)


def _quantities(part: Part) -> Quantities:
    shape = part.shape
    if isinstance(shape, Bar):
        return _of_bar(shape)
    return _of_plate(shape) if isinstance(shape, Plate) else _of_bolts(shape)


def _of_bar(bar: Bar) -> Quantities:
    """Length is the saw length, long point to long point; gross is the bar before anything is cut off."""
    section = bar.section
    gross = section.area * bar.length
    yield "Length", "Length", bar.length / 1e3
    yield "Area", "CrossSectionArea", section.area / 1e6
    yield "Area", "OuterSurfaceArea", bar.surface / 1e6
    yield "Volume", "GrossVolume", gross / 1e9
    yield "Volume", "NetVolume", bar.volume / 1e9
    yield "Weight", "GrossWeight", gross * STEEL_DENSITY
    yield "Weight", "NetWeight", bar.mass


def _of_plate(plate: Plate) -> Quantities:
    """Width is the thickness (ISO 16739-1, Qto_PlateBaseQuantities); gross is the plate before it is drilled."""
    outline = plate.outline
    gross = outline.outer.moments[0]
    yield "Length", "Width", plate.thickness / 1e3
    yield "Length", "Perimeter", outline.outer_perimeter / 1e3
    yield "Area", "GrossArea", gross / 1e6
    yield "Area", "NetArea", outline.area / 1e6
    yield "Volume", "GrossVolume", gross * plate.thickness / 1e9
    yield "Volume", "NetVolume", plate.volume / 1e9
    yield "Weight", "GrossWeight", gross * plate.thickness * STEEL_DENSITY
    yield "Weight", "NetWeight", plate.mass


def _of_bolts(group: BoltGroup) -> Quantities:
    yield "Count", "Count", group.count
    yield "Volume", "NetVolume", group.volume / 1e9
    yield "Weight", "NetWeight", group.mass
