"""The frame of a model file: header, owner, units, and the contexts that representations belong to."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from datetime import UTC, datetime
from math import cos, sin

from shedbim.model.shed import Georeference
from shedbim.version import __version__
from shedbim.writers.ifc.placements import axis2placement, direction, point
from shedbim.writers.ifc.stepfile import StepFile
from shedbim.writers.ifc.text import enum, label, listed, number, quoted

__all__ = ["Contexts", "end_lines", "header_lines", "write_contexts", "write_owner", "write_units"]

_PROGRAM = "shedbim"

#: Closer than this, in metres, are points one and the same.
_PRECISION = 1e-5

#: The exchange that the classes and shapes used here come from, by schema.
_VIEWS = {"IFC2X3": "CoordinationView", "IFC4": "DesignTransferView", "IFC4X3_ADD2": "DesignTransferView"}


@dataclass(frozen=True)
class Contexts:
    """References to the context of the model, to those of its kinds of representations, and to no motion.

    Attributes:
        model: the context of the whole model.
        axis: that of axes.
        body: that of bodies.
        footprint: that of the grid's lines.
        unmoved: the placement that is where it belongs: unmoved and unturned.
        unchanged: the operator that maps a representation as it is.
    """

    model: str
    axis: str
    body: str
    footprint: str
    unmoved: str
    unchanged: str


def header_lines(schema: str, timestamp: str) -> list[str]:
    """Give the lines before the first entity; ``timestamp`` is ISO 8601."""
    system = quoted(f"{_PROGRAM} {__version__}")
    return [
        "ISO-10303-21;\nHEADER;\n",
        f"FILE_DESCRIPTION(({quoted(f'ViewDefinition [{_VIEWS[schema]}]')}),'2;1');\n",
        f"FILE_NAME('model.ifc',{quoted(timestamp)},(''),(''),{system},{system},'');\n",
        f"FILE_SCHEMA(({quoted(schema)}));\nENDSEC;\nDATA;\n",
    ]


def end_lines() -> list[str]:
    """Give the lines after the last entity."""
    return ["ENDSEC;\nEND-ISO-10303-21;\n"]


def write_owner(step: StepFile, timestamp: str) -> str:
    """Write who made the file: this program, for nobody named. A time stamp without a zone is UTC."""
    when = datetime.fromisoformat(timestamp)
    seconds = int((when if when.tzinfo else when.replace(tzinfo=UTC)).timestamp())
    organization = step.add("IfcOrganization", Name=quoted("not stated"))
    person = step.add("IfcPerson", FamilyName=quoted("not stated"))
    return step.add(
        "IfcOwnerHistory",
        OwningUser=step.add("IfcPersonAndOrganization", ThePerson=person, TheOrganization=organization),
        OwningApplication=step.add(
            "IfcApplication",
            ApplicationDeveloper=organization,
            Version=quoted(__version__),
            ApplicationFullName=quoted(_PROGRAM),
            ApplicationIdentifier=quoted(_PROGRAM),
        ),
        ChangeAction=enum("ADDED"),
        CreationDate=str(seconds),
    )


def write_units(step: StepFile) -> tuple[str, str]:
    """Write the units: SI throughout. Gives the references of the metre and of the assignment."""
    names = (
        ("LENGTHUNIT", "METRE", ""), ("AREAUNIT", "SQUARE_METRE", ""), ("VOLUMEUNIT", "CUBIC_METRE", ""),
        ("PLANEANGLEUNIT", "RADIAN", ""), ("MASSUNIT", "GRAM", "KILO"), ("TIMEUNIT", "SECOND", ""),
        ("FORCEUNIT", "NEWTON", ""), ("PRESSUREUNIT", "PASCAL", ""),
    )  # fmt: skip
    si = {
        kind: step.share(
            "IfcSIUnit", UnitType=enum(kind), Prefix=enum(prefix) if prefix else "$", Name=enum(name)
        )
        for kind, name, prefix in names
    }
    metre, kilogram = si["LENGTHUNIT"], si["MASSUNIT"]
    derived = {
        "MASSDENSITYUNIT": ((kilogram, 1), (metre, -3)),
        "MASSPERLENGTHUNIT": ((kilogram, 1), (metre, -1)),
        "MOMENTOFINERTIAUNIT": ((metre, 4),),
    }
    if step.schema.is_first:  # it has no name for a unit of density
        del derived["MASSDENSITYUNIT"]
    made = [_derived(step, kind, factors) for kind, factors in derived.items()]
    return metre, step.add("IfcUnitAssignment", Units=listed([*si.values(), *made]))


def _derived(step: StepFile, kind: str, factors: Sequence[tuple[str, int]]) -> str:
    """Write a unit that is a product of powers of others."""
    elements = [
        step.share("IfcDerivedUnitElement", Unit=unit, Exponent=str(power)) for unit, power in factors
    ]
    return step.add("IfcDerivedUnit", Elements=listed(elements), UnitType=enum(kind))


def write_contexts(step: StepFile, georeference: Georeference | None, metre: str) -> Contexts:
    """Write the contexts, and where the building stands on the map (IFC4 and later)."""
    turn = georeference.rotation if georeference else 0.0
    unmoved = axis2placement(step, (0.0, 0.0, 0.0), (0.0, 0.0, 1.0), (1.0, 0.0, 0.0))
    model = step.add(
        "IfcGeometricRepresentationContext",
        ContextType=quoted("Model"),
        CoordinateSpaceDimension="3",
        Precision=number(_PRECISION),
        WorldCoordinateSystem=unmoved,
        # The building's x axis is turned from grid east by the rotation, so north is turned back from its y.
        TrueNorth=direction(step, sin(turn), cos(turn)),
    )
    if georeference and not step.schema.is_first:
        step.add(
            "IfcMapConversion",
            SourceCRS=model,
            TargetCRS=step.add("IfcProjectedCRS", Name=label(georeference.crs), MapUnit=metre),
            Eastings=number(georeference.easting / 1000),
            Northings=number(georeference.northing / 1000),
            OrthogonalHeight=number(georeference.level / 1000),
            XAxisAbscissa=number(cos(turn)),
            XAxisOrdinate=number(sin(turn)),
        )
    axis, body, footprint = (
        step.add(
            "IfcGeometricRepresentationSubContext",
            ContextIdentifier=quoted(name),
            ContextType=quoted("Model"),
            ParentContext=model,
            TargetView=enum(view),
        )
        for name, view in (("Axis", "GRAPH_VIEW"), ("Body", "MODEL_VIEW"), ("FootPrint", "PLAN_VIEW"))
    )
    unchanged = step.add(
        "IfcCartesianTransformationOperator3D",
        Axis1=direction(step, 1.0, 0.0, 0.0),
        Axis2=direction(step, 0.0, 1.0, 0.0),
        LocalOrigin=point(step, 0.0, 0.0, 0.0),
        Scale=number(1.0),
        Axis3=direction(step, 0.0, 0.0, 1.0),
    )
    return Contexts(model, axis, body, footprint, unmoved, unchanged)
