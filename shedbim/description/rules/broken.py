"""What a rule across fields gives where it is broken."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass

from shedbim.description.models import Description

__all__ = ["Broken", "Rule"]


@dataclass(frozen=True)
class Broken:
    """What breaks a rule: the field to change, why, what would do, and what it came to if not as written."""

    field: str
    message: str
    allowed: str = ""
    given: str = ""


#: A rule reads the fields it needs and gives what breaks it.
Rule = Callable[[Description], Iterator[Broken]]
