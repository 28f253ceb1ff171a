"""The spatial tree: project, site, building, one storey; and the grid that stands on it."""

from __future__ import annotations

from dataclasses import dataclass
from math import cos, sin

from shedbim.model.shed import Georeference, Grid, Shed
from shedbim.writers.ifc.context import Contexts
from shedbim.writers.ifc.placements import point
from shedbim.writers.ifc.properties import property_set, relate_set
from shedbim.writers.ifc.stepfile import StepFile
from shedbim.writers.ifc.text import NONE, TRUE, enum, label, listed, number, quoted, typed
from shedbim.writers.imprint import CAUTIONS

__all__ = ["Storey", "write_grid", "write_spatial"]

#: Grid lines run on beyond the outermost ones by so much, mm: room for their labels.
_OVERHANG = 3000.0


@dataclass(frozen=True)
class Storey:
    """References to the storey and to its placement."""

    itself: str
    placement: str


def write_spatial(step: StepFile, shed: Shed, contexts: Contexts, units: str) -> Storey:
    """Write project, site, building and storey with what the project states of itself."""
    info = shed.project
    project = step.rooted(
        "IfcProject",
        "project",
        Name=label(info.number or info.name),
        LongName=label(info.name),
        RepresentationContexts=listed([contexts.model]),
        UnitsInContext=units,
    )
    level = number((shed.georeference.level if shed.georeference else 0.0) / 1000)
    upper, placement = project, NONE
    found = {}
    for entity, name, more in (
        ("IfcSite", "Site", {"RefElevation": level}),
        ("IfcBuilding", info.name, {}),
        # IFC4X3 deprecates the elevation: the placement says it.
        (
            "IfcBuildingStorey",
            "Ground floor",
            {} if step.schema.name == "IFC4X3_ADD2" else {"Elevation": "0."},
        ),
    ):
        placement = step.add(
            "IfcLocalPlacement", PlacementRelTo=placement, RelativePlacement=contexts.unmoved
        )
        found[entity] = step.rooted(
            entity,
            entity,
            Name=label(name),
            ObjectPlacement=placement,
            CompositionType=enum("ELEMENT"),
            **more,
        )
        step.rooted(
            "IfcRelAggregates",
            f"aggregates/{entity}",
            RelatingObject=upper,
            RelatedObjects=f"({found[entity]})",
        )
        upper = found[entity]
    _write_statements(step, shed, project, found["IfcSite"], found["IfcBuilding"])
    return Storey(upper, placement)


def _write_statements(step: StepFile, shed: Shed, project: str, site: str, building: str) -> None:
    """Write what the project, the site and the building say in property sets."""
    issue = {"Number": shed.project.number, "Revision": shed.project.revision}
    texts = {name: typed("IfcLabel", label(text)) for name, text in issue.items() if text}
    if texts:
        relate_set(step, property_set(step, "Shedbim_Issue", "project", texts), "issue", [project])
    if shed.georeference and step.schema.is_first:
        _write_map_sets(step, shed.georeference, [project, site])
    notes = {
        "Cautions": CAUTIONS,
        "Notes": shed.notes,
        "Defaults": [f"{field}: {value}" for field, value in shed.defaults],
    }
    lists = [
        step.share(
            "IfcPropertyListValue",
            Name=quoted(name),
            ListValues=listed(typed("IfcText", quoted(line)) for line in lines),
        )
        for name, lines in notes.items()
        if lines
    ]
    if lists:
        basis = step.rooted(
            "IfcPropertySet", "Shedbim_Basis", Name=quoted("Shedbim_Basis"), HasProperties=listed(lists)
        )
        relate_set(step, basis, "basis", [building])


def _write_map_sets(step: StepFile, georeference: Georeference, objects: list[str]) -> None:
    """Write where the building stands on the map in IFC2X3, which has no entity for it.

    The sets and their names are those of the standard body's user guide for geo-referencing.
    """
    lengths = {
        "Eastings": georeference.easting,
        "Northings": georeference.northing,
        "OrthogonalHeight": georeference.level,
    }
    values = {name: typed("IfcLengthMeasure", number(value / 1000)) for name, value in lengths.items()}
    values["XAxisAbscissa"] = typed("IfcReal", number(cos(georeference.rotation)))
    values["XAxisOrdinate"] = typed("IfcReal", number(sin(georeference.rotation)))
    values["Scale"] = typed("IfcReal", number(1.0))
    relate_set(step, property_set(step, "ePSet_MapConversion", "site", values), "map conversion", objects)
    crs = {"Name": typed("IfcLabel", label(georeference.crs))}
    relate_set(step, property_set(step, "ePSet_ProjectedCRS", "site", crs), "map", objects)


def write_grid(step: StepFile, grid: Grid, contexts: Contexts, storey: Storey) -> str:
    """Write the grid, its lines labelled and drawn in its own plane; give its reference."""
    left, right = grid.x[0] - _OVERHANG, grid.x[-1] + _OVERHANG
    front, back = grid.y[0] - _OVERHANG, grid.y[-1] + _OVERHANG
    lettered = [(tag, (x, front), (x, back)) for tag, x in zip(grid.letters, grid.x, strict=True)]
    numbered = [(tag, (left, y), (right, y)) for tag, y in zip(grid.numbers, grid.y, strict=True)]
    curves: list[str] = []
    axes: list[list[str]] = []
    for lines in (lettered, numbered):
        axes.append([])
        for tag, start, end in lines:
            curves.append(step.add("IfcPolyline", Points=listed([point(step, *start), point(step, *end)])))
            axes[-1].append(step.add("IfcGridAxis", AxisTag=label(tag), AxisCurve=curves[-1], SameSense=TRUE))
    footprint = step.add(
        "IfcShapeRepresentation",
        ContextOfItems=contexts.footprint,
        RepresentationIdentifier=quoted("FootPrint"),
        RepresentationType=quoted("GeometricCurveSet"),
        Items=listed([step.add("IfcGeometricCurveSet", Elements=listed(curves))]),
    )
    kind = {} if step.schema.is_first else {"PredefinedType": enum("RECTANGULAR")}
    return step.rooted(
        "IfcGrid",
        "grid",
        Name=quoted("Grid"),
        ObjectPlacement=step.add(
            "IfcLocalPlacement", PlacementRelTo=storey.placement, RelativePlacement=contexts.unmoved
        ),
        Representation=step.add("IfcProductDefinitionShape", Representations=listed([footprint])),
        UAxes=listed(axes[0]),
        VAxes=listed(axes[1]),
        **kind,
    )
