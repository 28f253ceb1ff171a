"""Kind of field for two places along one axis of the building: lengths, or grid lines with a length to them."""

from __future__ import annotations

import re
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

from shedbim import units
from shedbim.fields.kind import FieldError, as_text
from shedbim.fields.lists import ListKind
from shedbim.fields.scalars import Quantity

__all__ = ["Between", "Spot"]

_LOW, _HIGH = "-1 km", "10 km"
_FROM_LINE = re.compile(r"([A-Za-z0-9.']{1,8})(?:\s*([+-])\s*(\S.*))?", re.DOTALL)


@dataclass(frozen=True)
class Spot:
    """A place along an axis: ``offset`` mm from a grid line, or from the origin where ``line`` is empty."""

    offset: float
    line: str = ""

    def on(self, lines: Mapping[str, float]) -> float:
        """Give where it is, mm, from the places of the grid lines by label.

        Raises:
            KeyError: when there is no line with its label.
        """
        return self.offset + (lines[self.line] if self.line else 0.0)


@dataclass(frozen=True)
class Between(ListKind):
    """Two places; ``on_grid`` says that they may be grid lines: ``B``, ``3 + 800 mm``, ``2.5 m``."""

    on_grid: bool = True

    @property
    def allowed(self) -> str:
        """The forms of a place."""
        lines = " or grid lines as B, 3 + 800 mm" if self.on_grid else ""
        return f"a list of two places, the lesser first: lengths of {_LOW} to {_HIGH}{lines}"

    @property
    def longest(self) -> int:
        """Two."""
        return 2

    def item(self, value: object) -> Spot:
        """One place; what reads as a length is one."""
        text = as_text(value, self.allowed)
        length = Quantity(units.LENGTH, _LOW, _HIGH)
        try:
            return Spot(length.read(text))
        except FieldError as error:
            match = _FROM_LINE.fullmatch(text)
            if not self.on_grid or match is None:
                raise FieldError(error.message, self.allowed) from None
        line, sign, offset = match.groups()
        if sign is None:
            return Spot(0.0, line)
        try:
            return Spot(float(f"{sign}1") * length.read(offset), line)
        except FieldError as error:
            raise FieldError(error.message, self.allowed) from None

    def whole(self, items: Sequence[Any]) -> tuple[Spot, Spot]:
        """Both places."""
        if len(items) != 2:
            raise FieldError(f"{len(items)} places", self.allowed)
        first, last = items
        return first, last

    def schema(self) -> dict[str, Any]:
        """An array of two strings or, for grid lines, numbers."""
        item: dict[str, Any] = {"type": ["string", "number"]} if self.on_grid else {"type": "string"}
        return {"type": "array", "items": item, "minItems": 2, "maxItems": 2}
