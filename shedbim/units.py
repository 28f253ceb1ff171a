"""Quantities as users write them, and back again: a number with its unit in a string.

Inside the program lengths are mm, angles rad, forces N, masses kg, pressures N/mm², line loads N/mm.
Factors of US customary units are exact by the international yard and pound agreement of 1959
(1 in = 25.4 mm, 1 lb = 0.45359237 kg) and standard gravity (9.80665 m/s², 3rd CGPM 1901).
"""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass
from math import atan, degrees, isfinite, pi, tan

__all__ = [
    "ANGLE",
    "FORCE",
    "LENGTH",
    "LINE_LOAD",
    "MASS",
    "PRESSURE",
    "Measure",
    "QuantityError",
    "format_angle",
    "format_length",
    "format_slope",
    "parse",
    "pattern",
]

_POUND = 0.45359237
_POUND_FORCE = _POUND * 9.80665
_FOOT = 304.8

#: No quantity needs more letters than this; longer text is refused unread.
_LONGEST = 64


class QuantityError(ValueError):
    """A text that is no quantity of the kind wanted.

    Attributes:
        message: what is wrong with it, in one sentence.
        allowed: what would be right, with an example.
    """

    def __init__(self, message: str, allowed: str) -> None:
        self.message = message
        self.allowed = allowed
        super().__init__(f"{message}; allowed: {allowed}")


@dataclass(frozen=True, eq=False)
class Measure:
    """A kind of quantity: its name, its units with their factors to the unit used inside, and an example."""

    name: str
    units: Mapping[str, float]
    example: str
    slopes: bool = False

    @property
    def allowed(self) -> str:
        """The units and an example, for messages."""
        more = ", a slope as 1:60 or 5 %" if self.slopes else ""
        article = "an" if self.name[0] in "aeiou" else "a"
        return (
            f"{article} {self.name} with its unit ({', '.join(self.units)}{more}), for example {self.example}"
        )


LENGTH = Measure(
    "length",
    {"mm": 1.0, "cm": 10.0, "m": 1000.0, "km": 1e6, "in": 25.4, "ft": _FOOT, '"': 25.4, "'": _FOOT},
    "6 m",
)
ANGLE = Measure("angle", {"deg": pi / 180, "°": pi / 180, "rad": 1.0}, "6 deg", slopes=True)
FORCE = Measure(
    "force", {"N": 1.0, "kN": 1e3, "MN": 1e6, "lbf": _POUND_FORCE, "kip": 1e3 * _POUND_FORCE}, "25 kN"
)
MASS = Measure("mass", {"kg": 1.0, "g": 1e-3, "t": 1e3, "lb": _POUND}, "120 kg")
PRESSURE = Measure(
    "pressure",
    {
        "kN/m2": 1e-3,
        "kN/m²": 1e-3,
        "N/mm2": 1.0,
        "N/mm²": 1.0,
        "Pa": 1e-6,
        "kPa": 1e-3,
        "MPa": 1.0,
        "psf": _POUND_FORCE / _FOOT**2,
        "psi": _POUND_FORCE / 25.4**2,
        "ksi": 1e3 * _POUND_FORCE / 25.4**2,
    },
    "0.9 kN/m2",
)
LINE_LOAD = Measure(
    "line load", {"kN/m": 1.0, "N/mm": 1.0, "N/m": 1e-3, "lbf/ft": _POUND_FORCE / _FOOT}, "1.5 kN/m"
)

_INCH = '"'
_DECIMAL = r"(?:[0-9]+(?:\.[0-9]*)?|\.[0-9]+)(?:[eE][+-]?[0-9]{1,4})?"
_AMOUNT = rf"(?:(?:[0-9]+ +)?[0-9]+/[0-9]+|{_DECIMAL})"
_ONE = re.compile(rf"({_AMOUNT}) *([^\s0-9.,+-][^\s]*)")
_FEET_INCHES = re.compile(rf"([0-9]+) *(?:ft|') *-? *({_AMOUNT}) *(?:in|{_INCH})")
_RATIO = re.compile(rf"({_DECIMAL}) *: *({_DECIMAL})")
_BARE = re.compile(_AMOUNT)
_COMMA = re.compile(r"[0-9],[0-9]")
_NOT_A_NUMBER = re.compile(r"\.?(nan|inf|infinity)\b", re.IGNORECASE)


def parse(text: str, measure: Measure) -> float:
    """The quantity in the unit used inside (mm, rad, N, kg, N/mm², N/mm); always finite.

    Accepts ``6 m``, ``-250 mm``, ``98 ft 5 in``, ``3 1/2 in``, ``0.9 kN/m2``; for angles also the slopes
    ``1:60`` and ``5 %``. Raises QuantityError for anything else: bare numbers, other units, infinities.
    """
    if len(text) > _LONGEST:
        raise QuantityError(f"too long for a {measure.name}", measure.allowed)
    body = text.strip()
    sign = -1.0 if body.startswith("-") else 1.0
    value = _unsigned(body[1:].lstrip() if body[:1] in {"-", "+"} else body, measure)
    if not isfinite(value):
        raise QuantityError(f"not a finite {measure.name}", measure.allowed)
    return sign * value


def _unsigned(body: str, measure: Measure) -> float:
    """The value of a text without sign, possibly infinite."""
    if _BARE.fullmatch(body):
        raise QuantityError("a bare number: the unit is missing", measure.allowed)
    if measure.slopes and (ratio := _RATIO.fullmatch(body)):
        return _ratio(float(ratio[1]), float(ratio[2]), measure)
    if measure is LENGTH and (both := _FEET_INCHES.fullmatch(body)):
        return float(both[1]) * _FOOT + _amount(both[2], measure) * 25.4
    if one := _ONE.fullmatch(body):
        amount, unit = _amount(one[1], measure), one[2]
        if measure.slopes and unit == "%":
            return _ratio(amount, 100.0, measure)
        if unit in measure.units:
            return amount * measure.units[unit]
        raise QuantityError(f"{unit[:12]!r} is no unit of {measure.name}", measure.allowed)
    if _NOT_A_NUMBER.match(body):
        raise QuantityError(f"not a finite {measure.name}", measure.allowed)
    if _COMMA.search(body):
        raise QuantityError("a comma in a number: decimals follow a point", measure.allowed)
    raise QuantityError(f"not a {measure.name}", measure.allowed)


def _amount(text: str, measure: Measure) -> float:
    """A decimal, a fraction or a whole number with a fraction."""
    whole, _, fraction = text.rpartition(" ")
    if "/" not in fraction:
        return float(text)
    above, _, below = fraction.partition("/")
    if float(below) == 0:
        raise QuantityError("a fraction over nought", measure.allowed)
    return float(whole or 0) + float(above) / float(below)


def _ratio(rise: float, run: float, measure: Measure) -> float:
    """The angle of a slope, rad."""
    if run == 0 or not isfinite(rise) or not isfinite(run):
        raise QuantityError("not a finite slope", measure.allowed)
    return atan(rise / run)


def _trimmed(value: float, places: int) -> str:
    """A decimal with one to ``places`` decimals and no trailing noughts."""
    text = f"{value:.{places}f}".rstrip("0")
    text = text + "0" if text.endswith(".") else text
    return text.removeprefix("-") if float(text) == 0 else text


def format_length(length: float) -> str:
    """A length in mm as ``6.0 m``, or as ``150 mm`` below a metre; to the micrometre."""
    if abs(length) < 1000:
        return f"{_trimmed(length, 3).removesuffix('.0')} mm"
    return f"{_trimmed(length / 1000, 6)} m"


def format_angle(angle: float) -> str:
    """An angle in rad as ``6.0 deg``; to a millionth of a degree."""
    return f"{_trimmed(degrees(angle), 6)} deg"


def format_slope(angle: float) -> str:
    """An angle in rad other than nought as ``1:60``; to a thousandth of the run."""
    return f"{'-' if angle < 0 else ''}1:{_trimmed(1 / tan(abs(angle)), 3).removesuffix('.0')}"


def pattern(measure: Measure) -> str:
    """A regular expression (ECMA 262 and Python) that every quantity of the measure matches, anchored."""
    listed = "|".join(sorted(measure.units, key=len, reverse=True))
    forms = [rf"{_AMOUNT} *(?:{listed})"]
    if measure is LENGTH:
        forms.append(rf"[0-9]+ *(?:ft|') *-? *{_AMOUNT} *(?:in|{_INCH})")
    if measure.slopes:
        forms += [rf"{_AMOUNT} *%", rf"{_DECIMAL} *: *{_DECIMAL}"]
    return rf"^\s*[-+]?\s*(?:{'|'.join(forms)})\s*$"
