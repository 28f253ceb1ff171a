"""Model files of services, written with the general library for model files: somebody else's files.

Elements are given in the axes of the seed store, in metres; a setting says how the file is written and placed.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import cos, radians, sin
from typing import Any
from uuid import UUID, uuid5

import ifcopenshell
import ifcopenshell.guid

Point = tuple[float, float, float]

#: The scope of the ids, made once.
_SCOPE = UUID("9a0b4c36-6c1d-4e57-9d0a-3f5f0c2a7b18")
_STAMP = "2026-01-01T00:00:00"
#: Grid A/1 of the seed store at floor level on the map, m, and the turn of its x axis from the map's east.
_GRID, _TURN = (512_340.0, 5_403_120.0, 212.35), radians(14.0)
#: Classes that IFC2X3 does not have, and the class that it has instead, with a type that says more.
_FIRST = {
    "IfcDuctSegment": "IfcFlowSegment",
    "IfcPipeSegment": "IfcFlowSegment",
    "IfcDuctFitting": "IfcFlowFitting",
}


@dataclass(frozen=True)
class Run:
    """A straight element: class, its predefined type, name, section in m, and its two ends in the axes of the shed, m.

    The section is one number for a round one, its diameter, or width and height.
    """

    kind: str
    predefined: str
    name: str
    section: tuple[float, ...]
    start: Point
    end: Point


@dataclass(frozen=True)
class Bend:
    """A round elbow of 90 degrees: its diameter, the radius of its middle line, its start and its two directions."""

    kind: str
    predefined: str
    name: str
    section: tuple[float, ...]
    radius: float
    start: Point
    along: Point
    towards: Point


@dataclass(frozen=True)
class Setting:
    """How a file is written.

    Attributes:
        schema: of the file.
        milli: whether its unit of length is the millimetre; that of the map stays the metre.
        crs: coordinate reference system; None leaves the place on the map out, and the axes are those of the shed.
        origin: of the model on the map, m.
        turn: of the model's x axis from the map's east, rad.
        scale: of the map conversion as it is written; None for not at all.
        factor: what all lengths are multiplied by, as a mistake would.
    """

    schema: str = "IFC4"
    milli: bool = False
    crs: str | None = "EPSG:25832"
    origin: Point = (512_300.0, 5_403_100.0, 200.0)
    turn: float = 0.0
    scale: float | None = None
    factor: float = 1.0

    @property
    def unit(self) -> float:
        """Units of length in a metre."""
        return self.factor * (1000.0 if self.milli else 1.0)

    def point(self, at: Point) -> Point:
        """A point of the shed in the model's axes, m."""
        if self.crs is None:
            return at
        x, y = _turned(at, _TURN)
        away = (_GRID[0] + x - self.origin[0], _GRID[1] + y - self.origin[1])
        return (*_turned(away, -self.turn), _GRID[2] + at[2] - self.origin[2])

    def way(self, along: Point) -> Point:
        """A direction of the shed in the model's axes."""
        return along if self.crs is None else (*_turned(along, _TURN - self.turn), along[2])


def _turned(at: tuple[float, ...], angle: float) -> tuple[float, float]:
    return at[0] * cos(angle) - at[1] * sin(angle), at[0] * sin(angle) + at[1] * cos(angle)


class Maker:
    """Entities of one file, with ids that are the same each time."""

    def __init__(self, setting: Setting) -> None:
        self.setting = setting
        self.file = ifcopenshell.file(schema=setting.schema)
        self.unit = setting.unit

    def make(self, entity: str, **values: Any) -> Any:
        """An entity."""
        return self.file.create_entity(entity, **values)

    def rooted(self, entity: str, key: str, **values: Any) -> Any:
        """An entity with a GlobalId."""
        guid = ifcopenshell.guid.compress(uuid5(_SCOPE, f"{entity} {key}").hex)
        return self.make(entity, GlobalId=guid, **values)

    def point(self, *at: float) -> Any:
        """A point given in m."""
        return self.make("IfcCartesianPoint", Coordinates=tuple(round(each * self.unit, 6) for each in at))

    def direction(self, *at: float) -> Any:
        """A direction."""
        return self.make("IfcDirection", DirectionRatios=tuple(round(each, 9) for each in at))

    def axes(self, origin: Point = (0, 0, 0), z: Point = (0, 0, 1), x: Point = (1, 0, 0)) -> Any:
        """A placement in space, its origin in m."""
        return self.make(
            "IfcAxis2Placement3D",
            Location=self.point(*origin),
            Axis=self.direction(*z),
            RefDirection=self.direction(*x),
        )

    def placed(self, within: Any, axes: Any) -> Any:
        """A placement within another."""
        return self.make("IfcLocalPlacement", PlacementRelTo=within, RelativePlacement=axes)


def _frame(maker: Maker) -> tuple[Any, Any]:
    """The storey, and the context of bodies, with all above them."""
    prefix = "MILLI" if maker.setting.milli else None
    units = [maker.make("IfcSIUnit", UnitType="LENGTHUNIT", Prefix=prefix, Name="METRE")]
    units += [
        maker.make("IfcSIUnit", UnitType=kind, Name=name)
        for kind, name in (
            ("AREAUNIT", "SQUARE_METRE"), ("VOLUMEUNIT", "CUBIC_METRE"), ("PLANEANGLEUNIT", "RADIAN"),
        )
    ]  # fmt: skip
    model = maker.make(
        "IfcGeometricRepresentationContext",
        ContextType="Model",
        CoordinateSpaceDimension=3,
        Precision=1e-5,
        WorldCoordinateSystem=maker.axes(),
    )
    body = maker.make(
        "IfcGeometricRepresentationSubContext",
        ContextIdentifier="Body",
        ContextType="Model",
        ParentContext=model,
        TargetView="MODEL_VIEW",
    )
    upper = project = maker.rooted(
        "IfcProject",
        "project",
        Name="Services of the seed store",
        RepresentationContexts=[model],
        UnitsInContext=maker.make("IfcUnitAssignment", Units=units),
    )
    placement = None
    for entity in ("IfcSite", "IfcBuilding", "IfcBuildingStorey"):
        placement = maker.placed(placement, maker.axes())
        name = {"IfcBuildingStorey": "Roof services"}.get(entity, entity.removeprefix("Ifc"))
        found = maker.rooted(entity, entity, Name=name, ObjectPlacement=placement, CompositionType="ELEMENT")
        maker.rooted("IfcRelAggregates", entity, RelatingObject=upper, RelatedObjects=[found])
        upper = found
    _place(maker, model, project)
    return upper, body


def _place(maker: Maker, model: Any, project: Any) -> None:
    """The place on the map: entities, or in IFC2X3 the property sets of the user guide for geo-referencing."""
    setting = maker.setting
    if setting.crs is None:
        return
    values: dict[str, float] = dict(
        zip(("Eastings", "Northings", "OrthogonalHeight"), setting.origin, strict=True)
    )
    values |= {"XAxisAbscissa": cos(setting.turn), "XAxisOrdinate": sin(setting.turn)}
    if setting.scale is not None:
        values["Scale"] = setting.scale
    if setting.schema != "IFC2X3":
        metre = maker.make("IfcSIUnit", UnitType="LENGTHUNIT", Name="METRE")
        crs = maker.make("IfcProjectedCRS", Name=setting.crs, MapUnit=metre)
        maker.make("IfcMapConversion", SourceCRS=model, TargetCRS=crs, **values)
        return
    for name, inside in (
        ("ePset_MapConversion", {k: maker.make("IfcReal", wrappedValue=v) for k, v in values.items()}),
        ("ePset_ProjectedCRS", {"Name": maker.make("IfcLabel", wrappedValue=setting.crs)}),
    ):
        made = [maker.make("IfcPropertySingleValue", Name=k, NominalValue=v) for k, v in inside.items()]
        told = maker.rooted("IfcPropertySet", name, Name=name, HasProperties=made)
        maker.rooted(
            "IfcRelDefinesByProperties", name, RelatedObjects=[project], RelatingPropertyDefinition=told
        )


def _element(maker: Maker, made: Run | Bend, storey: Any, body: Any) -> Any:
    """One element with its body, placed in the storey."""
    start = maker.setting.point(made.start)
    way: dict[str, Any]
    if isinstance(made, Run):
        end = maker.setting.point(made.end)
        length = sum((b - a) ** 2 for a, b in zip(start, end, strict=True)) ** 0.5
        along = tuple((b - a) / length for a, b in zip(start, end, strict=True))
        across = (1.0, 0.0, 0.0) if abs(along[2]) > 0.9 else (along[1], -along[0], 0.0)
        way = {"ExtrudedDirection": maker.direction(0.0, 0.0, 1.0), "Depth": round(length * maker.unit, 6)}
    else:
        along, across = maker.setting.way(made.along), maker.setting.way(made.towards)
        # The section's x leads to the middle of the bend; it turns about the axis there, towards it.
        axis = maker.make(
            "IfcAxis1Placement",
            Location=maker.point(made.radius, 0.0, 0.0),
            Axis=maker.direction(0.0, 1.0, 0.0),
        )
        way = {"Axis": axis, "Angle": radians(90.0)}
    item = maker.make(
        "IfcExtrudedAreaSolid" if isinstance(made, Run) else "IfcRevolvedAreaSolid",
        SweptArea=_profile(maker, made.section),
        Position=maker.axes(),
        **way,
    )
    shape = maker.make(
        "IfcShapeRepresentation",
        ContextOfItems=body,
        RepresentationIdentifier="Body",
        RepresentationType="SweptSolid",
        Items=[item],
    )
    values = {
        "Name": made.name,
        "ObjectPlacement": maker.placed(storey.ObjectPlacement, maker.axes(start, along, across)),
        "Representation": maker.make("IfcProductDefinitionShape", Representations=[shape]),
    }
    if maker.setting.schema != "IFC2X3":
        return maker.rooted(made.kind, made.name, PredefinedType=made.predefined, **values)
    element = maker.rooted(_FIRST[made.kind], made.name, **values)
    kind = maker.rooted(f"{made.kind}Type", made.name, Name=made.name, PredefinedType="NOTDEFINED")
    maker.rooted("IfcRelDefinesByType", made.name, RelatedObjects=[element], RelatingType=kind)
    return element


def _profile(maker: Maker, section: tuple[float, ...]) -> Any:
    """The profile of a section."""
    unit, values = maker.unit, {"ProfileType": "AREA"}
    # IFC2X3 needs it.
    values["Position"] = maker.make("IfcAxis2Placement2D", Location=maker.point(0.0, 0.0))
    if len(section) == 1:
        return maker.make("IfcCircleProfileDef", Radius=section[0] / 2 * unit, **values)
    width, height = section
    return maker.make("IfcRectangleProfileDef", XDim=width * unit, YDim=height * unit, **values)


def services_text(elements: tuple[Run | Bend, ...], setting: Setting, name: str) -> str:
    """The text of a model file with the elements."""
    maker = Maker(setting)
    storey, body = _frame(maker)
    made = [_element(maker, each, storey, body) for each in elements]
    if made:
        maker.rooted(
            "IfcRelContainedInSpatialStructure", "all", RelatingStructure=storey, RelatedElements=made
        )
    header = maker.file.header
    header.file_description.description = ("ViewDefinition [DesignTransferView]",)
    header.file_name.name = name
    header.file_name.time_stamp = _STAMP
    for field in ("preprocessor_version", "originating_system"):
        setattr(header.file_name, field, "services_model.py")
    return maker.file.to_string()
