"""What the user writes, typed and checked: the description of a shed."""

from shedbim.description.models import Description
from shedbim.description.reading import read, read_text

__all__ = ["Description", "read", "read_text"]
