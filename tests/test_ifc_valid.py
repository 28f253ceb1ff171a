"""The file as a whole: it opens, satisfies each schema with its rules, and is the same every time."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import ifc_models
import ifcopenshell
import ifcopenshell.util.geolocation
import ifcopenshell.validate
import numpy as np
import pytest
import specimens

from shedbim.errors import ModelError
from shedbim.model.identity import piece_ids
from shedbim.model.shed import Assemblies, Grid, Pieces, ProjectInfo, Shed
from shedbim.version import __version__
from shedbim.writers.ifc import SCHEMAS

# The library does not close the file it reads a schema's rules from.
pytestmark = pytest.mark.filterwarnings(
    r"ignore:Exception ignored in. <_io.FileIO name='.*ifcopenshell:pytest.PytestUnraisableExceptionWarning"
)

HOSTILE = 'it\'s \\X2\\ "#1=();" %s %d {0} \n\x00\x1f /*ü–Ж漢🏗*/ ' + "long" * 80


def hostile_shed() -> Shed:
    """The specimen with hostile text wherever a user's text goes."""
    made = specimens.shed(prefix="%'\\é ", project=ProjectInfo("", HOSTILE, HOSTILE, HOSTILE))
    grid = Grid(tuple(f"{tag}'\\ü" for tag in made.grid.letters), made.grid.x, made.grid.numbers, made.grid.y)
    parts = tuple(replace(p, mark=f"{p.mark}%s'Ω", grade=HOSTILE, finish=HOSTILE) for p in made.parts)
    kinds = tuple(replace(each, mark=f"{each.mark}%d'\\") for each in made.assembly_types)
    crs = replace(specimens.GEOREFERENCE, crs=HOSTILE)
    notes = (HOSTILE, "")
    return replace(made, grid=grid, parts=parts, assembly_types=kinds, georeference=crs, notes=notes)


def bare_shed() -> Shed:
    """The specimen without a place on the map, assemblies, joints, notes and most of its parts."""
    made = specimens.shed(frames=0, georeference=None)
    none = Assemblies((), np.zeros(0, np.int64), np.zeros((0, 3, 4)), np.zeros(0, np.int64))
    return replace(made, assemblies=none, assembly_types=(), joints=(), defaults=(), notes=())


def empty_shed() -> Shed:
    """A shed of no pieces at all."""
    none = Pieces((), np.zeros(0, np.int64), np.zeros((0, 3, 4)), np.zeros(0, np.int64))
    return replace(bare_shed(), pieces=none, parts=())


SHEDS = {
    "specimen": (specimens.shed(), {}),
    "hostile": (hostile_shed(), {"full_keys": True, "shop_joints": True}),
    "bare": (bare_shed(), {"full_keys": True}),
    "empty": (empty_shed(), {}),
}


def findings(path: Path, *, rules: bool) -> list[object]:
    """What the library has against a file, with or without the rules the schema states in EXPRESS."""
    logger = ifcopenshell.validate.json_logger()
    ifcopenshell.validate.validate(str(path), logger, express_rules=rules)
    return list(logger.statements)


@pytest.mark.parametrize("schema", SCHEMAS)
def test_nothing_is_found_against_the_schema_and_its_rules(schema: str, tmp_path: Path) -> None:
    path = tmp_path / "model.ifc"
    path.write_bytes(ifc_models.written(hostile_shed(), schema=schema, shop_joints=True))
    assert findings(path, rules=True) == []
    assert ifcopenshell.open(path).schema_identifier == schema


@pytest.mark.parametrize("schema", SCHEMAS)
@pytest.mark.parametrize("name", SHEDS)
def test_nothing_is_found_against_the_schema(name: str, schema: str, tmp_path: Path) -> None:
    shed, options = SHEDS[name]
    path = tmp_path / "model.ifc"
    path.write_bytes(ifc_models.written(shed, schema=schema, **options))
    assert findings(path, rules=False) == []


def test_the_validation_can_fail(tmp_path: Path) -> None:
    path = tmp_path / "model.ifc"
    text = ifc_models.written(specimens.shed())
    path.write_bytes(text.replace(b"IFCMATERIALPROFILESETUSAGE", b"IFCMATERIALPROFILESET"))
    assert findings(path, rules=False)
    # A rule of the schema (IfcProject.WR1): a project has a name.
    nameless = ifc_models.written(specimens.shed(), schema="IFC2X3").replace(
        b",'2417',$,$,'Salt", b",$,$,$,'Salt"
    )
    path.write_bytes(nameless)
    assert findings(path, rules=False) == []
    assert findings(path, rules=True)


@pytest.mark.parametrize("schema", SCHEMAS)
def test_every_id_is_unique_and_belongs_to_its_project(schema: str) -> None:
    mine = ifc_models.model(schema)
    ids = [each.GlobalId for each in mine.by_type("IfcRoot")]
    assert len(set(ids)) == len(ids)
    other = ProjectInfo("0b7e4d11-52c3-4a86-8d90-7f1e6a2c9b35", "Saltmarsh Seed Store", "2417", "P01")
    theirs = ifc_models.opened(specimens.shed(project=other), schema=schema).by_type("IfcRoot")
    assert len(theirs) == len(ids)
    assert not set(ids) & {each.GlobalId for each in theirs}
    barn = ProjectInfo(specimens.PROJECT_ID, "Barn", "1", "P02")
    renamed = ifc_models.opened(specimens.shed(project=barn), schema=schema)
    assert [each.GlobalId for each in renamed.by_type("IfcRoot")] == ids


def test_a_piece_keeps_the_id_of_its_key() -> None:
    shed = specimens.shed()
    found = {each.Name: each.GlobalId for each in ifc_models.model("IFC4").by_type("IfcElement")}
    assert [found[key] for key in shed.pieces.keys] == piece_ids(specimens.PROJECT_ID, shed.pieces.keys)


@pytest.mark.parametrize("schema", SCHEMAS)
def test_equal_input_gives_equal_bytes_and_the_time_stamp_is_an_input(schema: str) -> None:
    first = ifc_models.written(specimens.shed(), schema=schema)
    assert ifc_models.written(specimens.shed(), schema=schema) == first
    later = ifc_models.written(specimens.shed(), schema=schema, timestamp="2031-05-06T07:08:09")
    changed = [(a, b) for a, b in zip(first.splitlines(), later.splitlines(), strict=True) if a != b]
    # The header, and in IFC2X3 the owner's date too.
    assert [b.split(b"(")[0].split(b"=")[-1] for _, b in changed] == (
        [b"FILE_NAME", b"IFCOWNERHISTORY"] if schema == "IFC2X3" else [b"FILE_NAME"]
    )
    assert b"'2031-05-06T07:08:09'" in changed[0][1]
    if schema == "IFC2X3":
        assert changed[1][1].endswith(b",1935817689);")  # seconds since 1970, UTC


def test_the_header_names_the_program_and_nobody() -> None:
    header = ifc_models.model("IFC4").header
    assert header.file_name.originating_system == f"shedbim {__version__}"
    assert header.file_name.author == header.file_name.organization == ("",)
    assert header.file_name.time_stamp == "1970-01-01T00:00:00"
    assert header.file_schema.schema_identifiers == ("IFC4",)


@pytest.mark.parametrize("schema", SCHEMAS)
def test_hostile_text_comes_back_as_it_was(schema: str) -> None:
    shed = hostile_shed()
    file = ifc_models.opened(shed, schema=schema)
    assert {each.Name for each in file.by_type("IfcElement")} >= set(shed.pieces.keys + shed.assemblies.keys)
    assert {each.Tag for each in file.by_type("IfcTypeProduct")} == {part.mark for part in shed.parts}
    assert {each.AxisTag for each in file.by_type("IfcGridAxis")} == {*shed.grid.letters, *shed.grid.numbers}
    # A NUL ends a string in the library; everything before it must be there.
    assert file.by_type("IfcProject")[0].LongName.startswith(HOSTILE.partition("\0")[0])


@pytest.mark.parametrize("schema", SCHEMAS)
def test_the_building_stands_where_it_should_on_the_map(schema: str) -> None:
    file = ifc_models.model(schema)
    parameters = ifcopenshell.util.geolocation.get_helmert_transformation_parameters(file)
    assert (parameters.e, parameters.n, parameters.h) == (512340.125, 5403120.5, 212.35)
    # By hand: cos and sin of 14 degrees, anticlockwise from grid east to the building's x axis.
    assert (parameters.xaa, parameters.xao) == pytest.approx((0.970295726, 0.241921896), abs=1e-9)
    assert parameters.scale == 1
    assert ifcopenshell.util.geolocation.get_crs(file)["Name"] == "EPSG:25832"
    # North seen from the building is turned back: 14 degrees clockwise from its y axis.
    north = file.by_type("IfcGeometricRepresentationContext", include_subtypes=False)[0].TrueNorth
    assert north.DirectionRatios == pytest.approx((0.241921896, 0.970295726), abs=1e-9)
    assert not ifc_models.opened(bare_shed(), schema="IFC4").by_type("IfcCoordinateOperation")


def test_a_long_file_goes_out_piece_by_piece() -> None:
    sizes: list[int] = []

    class Sink:
        def write(self, data: bytes) -> int:
            sizes.append(len(data))
            return len(data)

    shed = specimens.shed(frames=900)
    ifc_models.write(shed, Sink())  # type: ignore[arg-type]
    assert max(sizes) < sum(sizes) / 2


def test_two_things_of_one_name_are_refused() -> None:
    shed = specimens.shed()
    twice = replace(shed.pieces, keys=(*shed.pieces.keys[:-1], shed.pieces.keys[0]))
    with pytest.raises(ModelError, match="two pieces of one name"):
        ifc_models.written(replace(shed, pieces=twice))
    with pytest.raises(ModelError, match="two parts of one name"):
        ifc_models.written(replace(shed, parts=(*shed.parts[:-1], replace(shed.parts[-1], mark="C1"))))


@pytest.mark.parametrize(
    ("rows", "message"),
    [([[3, 5, 3]], "one piece twice"), ([[1, 999]], "not there"), ([[-1, 2]], "not there")],
)
def test_joints_of_nothing_are_refused(rows: list[list[int]], message: str) -> None:
    run = replace(specimens.joints()[0], pieces=np.array(rows))
    with pytest.raises(ModelError, match=message):
        ifc_models.written(replace(specimens.shed(), joints=(run,)))
