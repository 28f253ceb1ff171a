"""Kinds of fields that hold one value: quantities, texts, whole numbers, choices and steel grades."""

from __future__ import annotations

import re
from dataclasses import dataclass
from typing import Any

from shedbim import units
from shedbim.fields.kind import FieldError, Kind, as_text, nearest

__all__ = ["COLD_FORMED", "ROLLED", "Choice", "Grade", "Number", "Quantity", "Text", "Whole", "WordOr"]

#: Room for rounding when a value is compared with a bound that was written in another unit.
_BOUND_ROOM = 1e-9


@dataclass(frozen=True)
class Quantity(Kind):
    """A number with its unit between two bounds, which are written as users write them."""

    measure: units.Measure
    low: str
    high: str
    hint: str = ""

    @property
    def allowed(self) -> str:
        """The bounds, with the hint."""
        return f"{self.low} to {self.high}{'; ' if self.hint else ''}{self.hint}"

    @property
    def _wanted(self) -> str:
        """The bounds and the units, for what is no quantity at all."""
        return f"{self.measure.allowed}; {self.allowed}"

    def read(self, value: object) -> float:
        """The quantity in the unit used inside."""
        try:
            found = units.parse(as_text(value, self._wanted), self.measure)
        except units.QuantityError as error:
            raise FieldError(error.message, self._wanted) from None
        low, high = units.parse(self.low, self.measure), units.parse(self.high, self.measure)
        room = _BOUND_ROOM * max(abs(low), abs(high))
        if not low - room <= found <= high + room:
            raise FieldError("out of bounds", self.allowed)
        return found

    def schema(self) -> dict[str, Any]:
        """A string with a pattern of number and unit."""
        return {"type": "string", "pattern": units.pattern(self.measure), "examples": [self.measure.example]}


@dataclass(frozen=True)
class Text(Kind):
    """One line of text; a bare number is taken as it is written."""

    longest: int = 100
    pattern: str = ""
    words: str = ""
    may_be_empty: bool = False
    may_be_number: bool = True

    @property
    def allowed(self) -> str:
        """The length, or the words for the pattern."""
        return self.words or f"one line of text, at most {self.longest} letters"

    def read(self, value: object) -> str:
        """The text without blanks at its ends."""
        text = as_text(value, self.allowed)
        if not text and not self.may_be_empty:
            raise FieldError("the text is empty", self.allowed)
        if len(text) > self.longest:
            raise FieldError(f"the text has {len(text)} letters", self.allowed)
        if self.pattern and not re.fullmatch(self.pattern, text):
            raise FieldError("the text does not have the right form", self.allowed)
        return text

    def schema(self) -> dict[str, Any]:
        """A string or a number, with its length and pattern."""
        kinds = ["string", "number"] if self.may_be_number else "string"
        least = 0 if self.may_be_empty else 1
        shown: dict[str, Any] = {"type": kinds, "minLength": least, "maxLength": self.longest}
        return shown | ({"pattern": f"^(?:{self.pattern})$"} if self.pattern else {})


@dataclass(frozen=True)
class Whole(Kind):
    """A whole number between two bounds."""

    low: int
    high: int

    @property
    def allowed(self) -> str:
        """The bounds."""
        return f"a whole number, {self.low} to {self.high}"

    def read(self, value: object) -> int:
        """The number."""
        text = as_text(value, self.allowed)
        if not re.fullmatch(r"[+-]?[0-9]{1,9}", text):
            raise FieldError("not a whole number", self.allowed)
        if not self.low <= int(text) <= self.high:
            raise FieldError("out of bounds", self.allowed)
        return int(text)

    def schema(self) -> dict[str, Any]:
        """An integer with bounds."""
        return {"type": "integer", "minimum": self.low, "maximum": self.high}


@dataclass(frozen=True)
class Number(Kind):
    """A number without a unit between two bounds."""

    low: float
    high: float

    @property
    def allowed(self) -> str:
        """The bounds."""
        return f"a number, {self.low:g} to {self.high:g}"

    def read(self, value: object) -> float:
        """The number."""
        text = as_text(value, self.allowed)
        if not re.fullmatch(r"[+-]?[0-9]{1,9}(?:\.[0-9]{0,9})?", text):
            raise FieldError("not a number", self.allowed)
        if not self.low <= float(text) <= self.high:
            raise FieldError("out of bounds", self.allowed)
        return float(text)

    def schema(self) -> dict[str, Any]:
        """A number with bounds."""
        return {"type": "number", "minimum": self.low, "maximum": self.high}


@dataclass(frozen=True)
class WordOr(Kind):
    """A word that stands for a rule or for none, or a value of another kind."""

    word: str
    other: Kind

    @property
    def allowed(self) -> str:
        """The word, and what else is allowed."""
        return f"{self.word!r} or {self.other.allowed}"

    def read(self, value: object) -> object:
        """The word, or the value as the other kind reads it."""
        if as_text(value, self.allowed) == self.word:
            return self.word
        try:
            return self.other.read(value)
        except FieldError as error:
            raise FieldError(error.message, self.allowed, nearest(str(value), [self.word])) from None

    def schema(self) -> dict[str, Any]:
        """The word, or what the other kind takes."""
        return {"anyOf": [{"const": self.word}, self.other.schema()]}


class Choice(Kind):
    """One of a few words."""

    def __init__(self, *words: str) -> None:
        self.words = words

    @property
    def allowed(self) -> str:
        """The words."""
        return " | ".join(self.words)

    def read(self, value: object) -> str:
        """The word."""
        text = as_text(value, self.allowed)
        if text not in self.words:
            raise FieldError("not one of the choices", self.allowed, nearest(text, self.words))
        return text

    def schema(self) -> dict[str, Any]:
        """The words as an enumeration."""
        return {"enum": list(self.words)}


@dataclass(frozen=True)
class Grade(Kind):
    """A steel grade: one of the names of a standard, with its sub-grade where the user gives one."""

    names: tuple[str, ...]
    suffix: str

    @property
    def allowed(self) -> str:
        """The names."""
        return f"{' | '.join(self.names)}, with or without a sub-grade"

    def read(self, value: object) -> str:
        """The grade as written."""
        text = as_text(value, self.allowed)
        if not re.fullmatch(self._pattern, text):
            raise FieldError("not a grade of this kind of steel", self.allowed, nearest(text, self.names))
        return text

    @property
    def _pattern(self) -> str:
        return f"(?:{'|'.join(self.names)}){self.suffix}"

    def schema(self) -> dict[str, Any]:
        """A string with the pattern of the names."""
        return {"type": "string", "pattern": f"^{self._pattern}$", "examples": list(self.names)}


#: Grades of rolled sections and tubes: EN 10025-2 and -3, EN 10210-1 and EN 10219-1 (sub-grades JR to K2, N,
#: M, with H for hollow sections), weathering steels of EN 10025-5 (J0, J2 or K2 with W or WP); ASTM A36, A572,
#: A992, A500 and A1085, of weathering steel A588 and A847 (values from memory).
ROLLED = Grade(
    (
        "S235",
        "S275",
        "S355",
        "S420",
        "S460",
        "A36",
        "A572 Gr 50",
        "A992",
        "A500 Gr B",
        "A500 Gr C",
        "A1085",
        "A588",
        "A847",
    ),
    r"(?: ?(?:JR|J0|J2|K2|NL?|ML?)(?:H|WP?)?)?",
)

#: Grades of cold-formed galvanized sections: EN 10346 (coating as Z275), ASTM A653 (values from memory).
COLD_FORMED = Grade(
    ("S250GD", "S280GD", "S320GD", "S350GD", "S390GD", "S420GD", "S450GD", "A653 Gr 50", "A653 Gr 55"),
    r"(?: ?\+ ?[A-Z]{1,2}[0-9]{2,3})?",
)
