"""The model files of the presets open in the library and satisfy their schemas, rules included."""

from __future__ import annotations

from io import BytesIO

import built_models
import cast
import ifcopenshell
import pytest
from schema_rules import findings

from shedbim.expand import expand
from shedbim.outputs import SCHEMAS
from shedbim.writers.ifc import write

# The library does not close the file it reads a schema's rules from.
pytestmark = pytest.mark.filterwarnings(
    r"ignore:Exception ignored in. <_io.FileIO name='.*ifcopenshell:pytest.PytestUnraisableExceptionWarning"
)

BIG = "distribution-hall"
#: Every preset in the schema of the default; in the others one with rafters, one with tubes, one with angles.
FILES = [
    (name, schema)
    for name in cast.PRESETS
    for schema in SCHEMAS
    if name != BIG and (schema == SCHEMAS[0] or name in {"joinery-workshop", "seed-store", "goods-shed"})
]


@pytest.mark.parametrize(("name", "schema"), FILES)
def test_presets_satisfy_the_schemas_and_their_rules(name, schema):
    file = built_models.opened(name, schema)
    assert file.schema_identifier == schema
    assert len([e for e in file.by_type("IfcElement") if e.Representation]) == len(cast.shed_of(name).pieces)
    assert findings(file) == []


@pytest.mark.parametrize("schema", SCHEMAS)
def test_the_big_preset_shortened_satisfies_them_too(schema):
    """Four bays of its forty and three spans of its five, one of each length: every kind of part and joint.

    The rules look at one entity at a time, or at all of a class for equal names; 20,000 pieces of the same
    kinds would take them a minute. The whole file is opened and meshed in the tests of overlaps and masses.
    """
    short = cast.changed(
        BIG, building__bays=["6.5 m", "6 m", "7.5 m", "6.5 m"], building__spans=["30 m", "32 m", "28.5 m"]
    )
    sink = BytesIO()
    write(expand(short), sink, schema=schema)
    file = ifcopenshell.file.from_string(sink.getvalue().decode("ascii"))
    assert findings(file) == []


@pytest.mark.parametrize("schema", ["IFC4", "IFC2X3"])
def test_a_broken_rule_of_the_schema_is_found(schema):
    """Without the rules the same file passes: they are what finds it, though they were compiled for another."""
    file = ifcopenshell.file.from_string(cast.model_bytes("barn", schema).decode("ascii"))
    line = file.by_type("IfcPolyline")[0]
    line.Points[0].Coordinates = (*line.Points[0].Coordinates, 0.0)[: 5 - len(line.Points[0].Coordinates)]
    assert {len(point.Coordinates) for point in line.Points} == {2, 3}  # rule SameDim of both schemas
    assert findings(file, rules=False) == []
    assert findings(file) != []
