"""The model files of the presets open in the library and satisfy their schemas, rules included."""

from __future__ import annotations

from io import BytesIO

import cast
import ifcopenshell
import ifcopenshell.validate
import pytest

from shedbim.expand import expand
from shedbim.outputs import SCHEMAS
from shedbim.writers.ifc import write

# The library does not close the file it reads a schema's rules from.
pytestmark = pytest.mark.filterwarnings(
    r"ignore:Exception ignored in. <_io.FileIO name='.*ifcopenshell:pytest.PytestUnraisableExceptionWarning"
)

BIG = "distribution-hall"


def findings(file: ifcopenshell.file | str, *, rules: bool) -> list[object]:
    """What the library has against a file, with or without the rules the schema states in EXPRESS."""
    logger = ifcopenshell.validate.json_logger()
    ifcopenshell.validate.validate(file, logger, express_rules=rules)
    return list(logger.statements)


def opened(data: bytes) -> ifcopenshell.file:
    return ifcopenshell.file.from_string(data.decode("ascii"))


@pytest.mark.parametrize("schema", SCHEMAS)
@pytest.mark.parametrize("name", [n for n in cast.PRESETS if n != BIG])
def test_presets_satisfy_the_schemas_with_their_rules(name, schema):
    file = opened(cast.model_bytes(name, schema))
    assert file.schema_identifier == schema
    assert findings(file, rules=True) == []
