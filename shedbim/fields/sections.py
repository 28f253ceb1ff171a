"""The kind of field that names a section of the catalogue."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from shedbim.errors import UnknownSection
from shedbim.fields.kind import FieldError, Kind, as_text
from shedbim.sections import catalogue
from shedbim.sections.profiles import Angle, Hollow, IShape, LippedC, LippedZ, Pipe, Round
from shedbim.sections.section import Section

__all__ = ["SHAPES", "SectionOf"]

#: What the trade calls each shape, with an example of each.
SHAPES: dict[type, str] = {
    IShape: "an I or H section (IPE 300)",
    Hollow: "SHS or RHS (SHS 100x100x5)",
    Pipe: "CHS (CHS 88.9x4)",
    Angle: "an angle (L 80x80x8)",
    LippedC: "a lipped C (C 200x75x20x2.0)",
    LippedZ: "a lipped Z (Z 200x75x20x2.5)",
    Round: "a round bar (RD 12)",
}

_LONGEST = 40


@dataclass(frozen=True, init=False)
class SectionOf(Kind):
    """A designation of the catalogue whose profile is one of the shapes; ``why`` says why only these."""

    shapes: tuple[type, ...]
    why: str

    def __init__(self, *shapes: type, why: str = "") -> None:
        object.__setattr__(self, "shapes", shapes)
        object.__setattr__(self, "why", why)

    @property
    def allowed(self) -> str:
        """The shapes, with the reason where there is one."""
        words = " | ".join(SHAPES[shape] for shape in self.shapes)
        return f"{words}; {self.why}" if self.why else words

    def read(self, value: object) -> Section:
        """The section of the catalogue."""
        if isinstance(value, Section):
            found = value
        else:
            text = as_text(value, self.allowed)
            if not 0 < len(text) <= _LONGEST:
                raise FieldError("not the name of a section", self.allowed)
            try:
                found = catalogue.section(text)
            except UnknownSection as error:
                why = f"no such section in the catalogue{': ' if error.reason else ''}{error.reason}"
                raise FieldError(why, self.allowed, error.nearest) from None
        if not isinstance(found.profile, self.shapes):
            raise FieldError("a section of a shape that cannot be used here", self.allowed)
        return found

    def schema(self) -> dict[str, Any]:
        """A string: the catalogue is too long for an enumeration."""
        return {"type": "string", "minLength": 1, "maxLength": _LONGEST}
