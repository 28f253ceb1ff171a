"""The open BIM model: a Shed as the bytes of an IFC file."""

from shedbim.writers.ifc.schema import SCHEMAS
from shedbim.writers.ifc.writer import write

__all__ = ["SCHEMAS", "write"]
