"""The typed description of a shed: what the user writes, in mm, rad and sections of the catalogue."""

from __future__ import annotations

from typing import Annotated, Literal, get_args
from uuid import UUID, uuid5

from shedbim import units
from shedbim.description.bracing import Bracing, EavesStrut, RoofBracing, Struts, Ties, WallBracing
from shedbim.description.checks import Checks
from shedbim.description.connections import BoltOptions, Connections
from shedbim.description.gable_systems import GABLE_SYSTEMS, GableSystem, RafterGable, SameGable
from shedbim.description.reserved import MOST_ZONES, Reserved
from shedbim.description.roof_systems import ROOF_SYSTEMS, RafterRoof, RoofSystem, TrussRoof
from shedbim.description.secondary import Purlins, Rails
from shedbim.fields import (
    ROLLED,
    Choice,
    Groups,
    Labels,
    OneOf,
    Options,
    Quantity,
    Repeats,
    SectionOf,
    Text,
    default,
    left_out,
    required,
)
from shedbim.roofs import FORMS, RoofForm
from shedbim.sections.profiles import Hollow, IShape, Pipe
from shedbim.sections.section import Section

__all__ = [
    "MOST_BAYS",
    "MOST_SPANS",
    "BoltOptions",
    "Bracing",
    "Building",
    "Checks",
    "Columns",
    "Connections",
    "Description",
    "EavesStrut",
    "Finish",
    "Frames",
    "GableSystem",
    "Project",
    "Purlins",
    "RafterGable",
    "RafterRoof",
    "Rails",
    "Reserved",
    "RoofBracing",
    "RoofForm",
    "RoofSystem",
    "SameGable",
    "Site",
    "Struts",
    "Ties",
    "TrussRoof",
    "WallBracing",
]

MOST_SPANS = 26
MOST_BAYS = 500

#: Scope of the ids of projects that have none of their own; a random UUID made once for this program.
_NAMELESS = UUID("6e2b1a5c-93c4-4a0f-8d57-2f0c7be1d964")

#: First purlin from the column line, and its least distance to the edge of a tubular column's head, mm (common
#: practice, values from memory).
_EAVES_OFFSET, _HEAD_EDGE = 150.0, 45.0

_Base = Literal["pinned", "fixed"]
_Finish = Literal["painted", "galvanized", "primed", "none"]
_UUID = "[0-9a-fA-F]{8}(?:-[0-9a-fA-F]{4}){3}-[0-9a-fA-F]{12}|[0-9a-fA-F]{32}"
_ID = Text(pattern=_UUID, words="a UUID, made once by `shedbim new`", may_be_number=False)
_CRS = Text(pattern="EPSG:[0-9]{4,6}", words="a code such as EPSG:25832", may_be_number=False)


class Project(Options):
    """The project and its issue."""

    id: Annotated[str, _ID] | None = left_out(
        "made from name and number", "scope of every id in the outputs: made once, never changed"
    )
    name: Annotated[str, Text()] = required("name of the building")
    number: Annotated[str, Text(longest=40, may_be_empty=True)] = default("", "number of the job")
    revision: Annotated[str, Text(longest=12)] = default("P01", "revision of this issue")


class Site(Options):
    """Where the building stands: the place of grid A/1 and the turn of the building on a map."""

    crs: Annotated[str, _CRS] = required("coordinate reference system of the map")
    easting: Annotated[float, Quantity(units.LENGTH, "-20000 km", "20000 km")] = required(
        "easting of grid A/1"
    )
    northing: Annotated[float, Quantity(units.LENGTH, "-20000 km", "20000 km")] = required(
        "northing of grid A/1"
    )
    level: Annotated[float, Quantity(units.LENGTH, "-500 m", "9000 m")] = default(
        "0 m", "height of the finished floor above the map's datum"
    )
    rotation: Annotated[float, Quantity(units.ANGLE, "-360 deg", "360 deg")] = default(
        "0 deg", "turn of the building's X axis from the map's east, anticlockwise"
    )


class Building(Options):
    """The size of the building and the form of its roof."""

    spans: Annotated[tuple[float, ...], Repeats("3 m", "150 m", MOST_SPANS)] = required(
        "distances of the column lines across the building, left to right"
    )
    bays: Annotated[tuple[float, ...], Repeats("1 m", "30 m", MOST_BAYS)] = required(
        "distances of the frames along the building, front to back"
    )
    letters: Annotated[tuple[str, ...], Labels(MOST_SPANS + 1)] | None = left_out(
        "A, B, C ... without I and O", "labels of the column lines"
    )
    numbers: Annotated[tuple[str, ...], Labels(MOST_BAYS + 1)] | None = left_out(
        "1, 2, 3 ...", "labels of the frames"
    )
    eaves: Annotated[float, Quantity(units.LENGTH, "2 m", "40 m")] = required(
        "underside of the roof steel at the lowest column line, above the floor"
    )
    roof: Annotated[RoofForm, OneOf("form", FORMS)] = required("form of the roof")


class Columns(Options):
    """The columns of the frames."""

    section: Annotated[Section, SectionOf(IShape, Hollow, Pipe)] = required("section of the columns")
    grade: Annotated[str, ROLLED] = default("S355", "steel grade of the columns")
    base: Annotated[_Base, Choice(*get_args(_Base))] = default(
        "pinned", "how the columns stand on the foundation"
    )


class Frames(Options):
    """The frames on the numbered lines."""

    columns: Columns = required("columns of the frames")
    roof: Annotated[RoofSystem, OneOf("system", ROOF_SYSTEMS)] = required(
        "how the roof is carried over a span"
    )
    gables: Annotated[GableSystem, OneOf("system", GABLE_SYSTEMS)] = required("how the end walls are framed")


class Finish(Options):
    """The protection of the steel."""

    frames: Annotated[_Finish, Choice(*get_args(_Finish))] = default(
        "painted", "finish of frames, gables and bracing"
    )
    secondary: Annotated[_Finish, Choice(*get_args(_Finish))] = default(
        "galvanized", "finish of purlins, rails and sag bars"
    )
    paint: Annotated[str, Text(longest=120)] = default(
        "coating system to ISO 12944-5 for corrosivity C3, durability medium", "coating of painted steel"
    )
    zinc: Annotated[str, Text(longest=120)] = default(
        "hot dip galvanized to EN ISO 1461", "zinc coating of galvanized frames, gables and bracing"
    )

    @property
    def meanings(self) -> tuple[tuple[str, str], ...]:
        """Each finish that steel of this building may have, and what it stands for."""
        return (
            ("painted", self.paint),
            ("galvanized", f"{self.zinc}; cold-formed strip as its grade says"),
            ("primed", "shop primer only"),
            ("plated", "zinc plated fasteners"),
            ("none", "bare steel, or weathering steel where the grade says so"),
        )


class Description(Options):
    """The whole description of one building."""

    project: Project = required("the project and its issue")
    site: Site | None = left_out("no georeference", "place on a map")
    building: Building = required("size of the building and form of its roof")
    frames: Frames = required("frames on the numbered lines")
    purlins: Purlins = required("secondary steel of the roof")
    rails: Rails = required("secondary steel of the walls")
    bracing: Bracing = required("bracing of roof and walls")
    connections: Connections = default({}, "how the steel is fastened together")
    finish: Finish = default({}, "protection of the steel")
    reserved: Annotated[tuple[Reserved, ...], Groups(Reserved, MOST_ZONES)] = default(
        (), "zones that are kept free of steel"
    )
    checks: Checks = default({}, "what the checks hold the shed against")

    @property
    def project_id(self) -> UUID:
        """The project's own id, or one made from its name and number where it has none."""
        if self.project.id is not None:
            return UUID(self.project.id)
        return uuid5(_NAMELESS, f"{self.project.name}\n{self.project.number}")

    @property
    def purlin_eaves_offset(self) -> float:
        """The first purlin from the column line at the eaves, along the slope, mm.

        By rule 150 mm; beside the face of a tubular column is the bracket that the roof steel is bolted to,
        so there it is over the column's head, clear of its edge.
        """
        if self.purlins.eaves_offset is not None:
            return self.purlins.eaves_offset
        columns = self.frames.columns.section
        if isinstance(columns.profile, IShape):
            return _EAVES_OFFSET
        return max(min(_EAVES_OFFSET, (columns.height / 2 - _HEAD_EDGE) // 10 * 10), 0.0)

    @property
    def warnings(self) -> tuple[str, ...]:
        """What the user should mend although the description can be built."""
        if self.project.id is not None:
            return ()
        return (
            "project.id is missing: the ids in the outputs are made from the project's name and number and "
            "change with them; `shedbim new` makes an id that stays",
        )
