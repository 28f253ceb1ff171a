"""The specimen as model files, written and opened once for all tests."""

from __future__ import annotations

import io
from functools import cache

import ifcopenshell
import specimens

from shedbim.model.shed import Shed
from shedbim.writers.ifc import write


def written(shed: Shed, **options: object) -> bytes:
    """Give the bytes of a shed's model file."""
    sink = io.BytesIO()
    write(shed, sink, **options)  # type: ignore[arg-type]
    return sink.getvalue()


def opened(shed: Shed, **options: object) -> ifcopenshell.file:
    """Give a shed's model file as the library reads it."""
    return ifcopenshell.file.from_string(written(shed, **options).decode("ascii"))


@cache
def model(schema: str) -> ifcopenshell.file:
    """Give the specimen's model file as the library reads it."""
    return opened(specimens.shed(), schema=schema)


def by_name(
    file: ifcopenshell.file, entity: str, attribute: str = "Name"
) -> dict[str, ifcopenshell.entity_instance]:
    """Give the entities of a class by their names; the file must be kept as long as they are."""
    return {getattr(each, attribute): each for each in file.by_type(entity)}
