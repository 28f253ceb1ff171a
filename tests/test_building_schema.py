"""The model files of the presets open in the library and satisfy their schemas, rules included."""

from __future__ import annotations

from io import BytesIO

import built_models
import cast
import ifcopenshell
import pytest
from schema_rules import findings

from shedbim.model.shed import Shed
from shedbim.outputs import SCHEMAS
from shedbim.writers.ifc import write

# The library does not close the file it reads a schema's rules from.
pytestmark = pytest.mark.filterwarnings(
    r"ignore:Exception ignored in. <_io.FileIO name='.*ifcopenshell:pytest.PytestUnraisableExceptionWarning"
)

#: Every preset in the schema of the default; in the others one with rafters, one with tubes, one with angles.
IN_EVERY_SCHEMA = {"joinery-workshop", "seed-store", "goods-shed"}
FILES = [
    (name, schema)
    for name in cast.PRESETS
    for schema in SCHEMAS
    if schema == SCHEMAS[0] or name in IN_EVERY_SCHEMA or name == "distribution-hall"
]


def kinds(shed: Shed) -> set[object]:
    """What a model file has classes and types for: roles of parts with their shapes and finishes, kinds of joints."""
    parts = {(part.role, type(part.shape), part.finish, part.grade) for part in shed.parts}
    return parts | {
        (run.kind, len(run.clamps) > 0, len(run.welds) > 0) for run in shed.joints if len(run.pieces)
    }


@pytest.mark.parametrize(("name", "schema"), FILES)
def test_presets_satisfy_the_schemas_and_their_rules(name, schema):
    """With fewer bays where a preset has many: the rules look at one entity at a time, and many are alike."""
    shed, sink = cast.shortened(name), BytesIO()
    write(shed, sink, schema=schema)
    file = ifcopenshell.file.from_string(sink.getvalue().decode("ascii"))
    assert file.schema_identifier == schema
    assert len([e for e in file.by_type("IfcElement") if e.Representation]) == len(shed.pieces)
    assert findings(file) == []


@pytest.mark.parametrize("name", cast.SHORT)
def test_the_shortened_presets_are_of_the_same_kinds(name):
    assert kinds(cast.shortened(name)) == kinds(cast.shed_of(name))


@pytest.mark.parametrize("name", cast.SHORT)
def test_whole_presets_have_no_id_twice(name):
    """What grows with the building: every entity of its own id, every piece there."""
    file = built_models.opened(name)
    assert file.schema_identifier == SCHEMAS[0]
    rooted = [entity.GlobalId for entity in file.by_type("IfcRoot")]
    assert len(set(rooted)) == len(rooted)
    assert len([e for e in file.by_type("IfcElement") if e.Representation]) == len(cast.shed_of(name).pieces)


@pytest.mark.parametrize("schema", ["IFC4", "IFC2X3"])
def test_a_broken_rule_of_the_schema_is_found(schema):
    """Without the rules the same file passes: they are what finds it, though they were compiled for another."""
    file = ifcopenshell.file.from_string(cast.model_bytes("flat", schema).decode("ascii"))
    line = file.by_type("IfcPolyline")[0]
    line.Points[0].Coordinates = (*line.Points[0].Coordinates, 0.0)[: 5 - len(line.Points[0].Coordinates)]
    assert {len(point.Coordinates) for point in line.Points} == {2, 3}  # rule SameDim of both schemas
    assert findings(file, rules=False) == []
    assert findings(file) != []
