"""Where a model file says that its origin lies on the map."""

from __future__ import annotations

from collections.abc import Mapping
from math import atan2, hypot, isfinite
from typing import Any

__all__ = ["map_place"]

#: A scale within this of the ratio of the units, or of 1, is that and the scale of a projection.
_PROJECTED = 0.01


def map_place(model: Any) -> dict[str, Any] | None:
    """Give the fields of a ``MapPlace``, or None where the file says nothing.

    IFC4 and later have entities for it (ISO 16739-1, IfcMapConversion and IfcProjectedCRS); IFC2X3 has the property
    sets of buildingSMART's user guide for geo-referencing, on the project or the site.

    Args:
        model: an ``ifcopenshell.file``.

    Raises:
        ValueError: when what the file says cannot be meant.
    """
    first = model.schema == "IFC2X3"
    said = _from_sets(model) if first else _from_entities(model)
    if said is None:
        return None
    unit = _unit(model, None)
    map_unit = said.get("unit") or unit
    numbers = [_number(said.get(name), 0.0) for name in ("Eastings", "Northings", "OrthogonalHeight")]
    across, up = _number(said.get("XAxisAbscissa"), 1.0), _number(said.get("XAxisOrdinate"), 0.0)
    scale = _scale(_number(said.get("Scale"), 1.0), unit / map_unit)
    if not all(map(isfinite, [*numbers, across, up])) or hypot(across, up) == 0:
        raise ValueError("its place on the map is no number")
    if scale is None:
        raise ValueError(f"its map conversion has a scale of {said['Scale']}, which its units do not explain")
    easting, northing, level = (number * map_unit * 1000.0 for number in numbers)
    return {
        "crs": str(said.get("crs") or ""),
        "easting": easting,
        "northing": northing,
        "level": level,
        "rotation": atan2(up, across),
        "scale": scale,
    }


def _scale(given: float, units: float) -> float | None:
    """The scale of the projection from what the file gives: with the ratio of the units in it, or without it."""
    for ratio in (units, 1.0):
        if abs(given / ratio - 1.0) < _PROJECTED:
            return given / ratio
    return None


def _from_entities(model: Any) -> Mapping[str, Any] | None:
    """What the first operation from the model's axes to the map says."""
    operations = model.by_type("IfcMapConversion")
    if not operations:
        return None
    operation = operations[0]
    _hold_unmoved(operation.SourceCRS)
    said = operation.get_info(recursive=False)
    target = operation.TargetCRS
    unit = getattr(target, "MapUnit", None)
    return {**said, "crs": target.Name, "unit": _unit(model, unit) if unit is not None else 0.0}


def _hold_unmoved(context: Any) -> None:
    """Refuse a context whose axes are moved: the standard leaves open on which side of the map's offset that counts."""
    system = getattr(context, "WorldCoordinateSystem", None)
    if system is None:
        return
    turned = getattr(system, "RefDirection", None)
    if any(system.Location.Coordinates) or (turned is not None and any(turned.DirectionRatios[1:])):
        raise ValueError("its axes are moved both by its map conversion and by its world coordinate system")


def _from_sets(model: Any) -> Mapping[str, Any] | None:
    """What the property sets for the map say; their names are spelt in several ways."""
    said: dict[str, Any] = {}
    for relation in model.by_type("IfcRelDefinesByProperties"):
        related = relation.RelatingPropertyDefinition
        name = (related.Name or "").lower()
        if name not in ("epset_mapconversion", "epset_projectedcrs") or not related.is_a("IfcPropertySet"):
            continue
        for each in related.HasProperties:
            value = getattr(each, "NominalValue", None)
            if value is None:
                continue
            said["crs" if name.endswith("crs") and each.Name == "Name" else each.Name] = value.wrappedValue
    return said if "Eastings" in said and "Northings" in said else None


def _unit(model: Any, named: Any) -> float:
    """A unit of length in metres: the one given, or that of the project."""
    from ifcopenshell.util import unit  # noqa: PLC0415 - heavy, and only a model of another trade needs it

    return float(unit.calculate_unit_scale(model) if named is None else unit.get_unit_scale(named))


def _number(value: Any, otherwise: float) -> float:
    """A number as the file gives it; ``otherwise`` where it gives none."""
    if isinstance(value, int | float) and not isinstance(value, bool):
        return float(value)
    return otherwise
