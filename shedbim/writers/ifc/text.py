"""Values as the text of an ISO 10303-21 file: numbers, strings, references, lists."""

from __future__ import annotations

import re
from collections.abc import Iterable, Sequence
from math import isfinite

from shedbim.errors import ModelError

__all__ = [
    "FALSE",
    "NONE",
    "TRUE",
    "enum",
    "label",
    "labels",
    "listed",
    "metres",
    "number",
    "quoted",
    "reals",
    "typed",
]

NONE = "$"
TRUE = ".T."
FALSE = ".F."

#: IfcLabel and IfcIdentifier hold at most so many characters (ISO 16739-1).
_LABEL_LENGTH = 255

_SPECIAL = re.compile(r"[^ -~]+|'|\\")
_SIGNIFICANT = 12


def quoted(text: str) -> str:
    """Give a string of any text: quotes and backslashes doubled, all but printable ASCII as code points."""
    if _is_plain(text):
        return f"'{text}'"
    return f"'{_SPECIAL.sub(_escaped, text)}'"


def _is_plain(text: str) -> bool:
    """Whether a text may stand in a string as it is."""
    return text.isascii() and text.isprintable() and "'" not in text and "\\" not in text


def _escaped(match: re.Match[str]) -> str:
    """Escape what may not stand in a string (ISO 10303-21): \\X2\\ for 16 bits a character, \\X4\\ for 32."""
    found = match.group()
    if found in {"'", "\\"}:
        return found * 2
    # Half of a surrogate pair stands for no character at all.
    codes = [0xFFFD if 0xD800 <= ord(c) <= 0xDFFF else ord(c) for c in found]
    if max(codes) > 0xFFFF:
        return "\\X4\\" + "".join(f"{code:08X}" for code in codes) + "\\X0\\"
    return "\\X2\\" + "".join(f"{code:04X}" for code in codes) + "\\X0\\"


def label(text: str) -> str:
    """Give a string for an IfcLabel or IfcIdentifier, cut to the length they may have."""
    return quoted(text if len(text) <= _LABEL_LENGTH else text[: _LABEL_LENGTH - 1] + "…")


def labels(texts: Sequence[str]) -> list[str]:
    """Give many strings for IfcLabel or IfcIdentifier; quick where all of them are plain."""
    joined = "".join(texts)
    if _is_plain(joined) and max(map(len, texts), default=0) <= _LABEL_LENGTH:
        return [f"'{text}'" for text in texts]
    return [label(text) for text in texts]


def number(value: float) -> str:
    """Give a REAL to twelve significant digits, as short as it goes.

    Raises:
        ModelError: when it is not a finite number.
    """
    if not isfinite(value):
        raise ModelError(f"a model file cannot hold the number {value}")
    text = f"{value:.{_SIGNIFICANT}g}"
    mantissa, e, exponent = text.partition("e")
    if "." not in mantissa:
        mantissa += "."
    if mantissa == "-0.":
        mantissa = "0."
    return f"{mantissa}E{int(exponent)}" if e else mantissa


def metres(length: float) -> str:
    """Give a length of ``length`` mm in metres."""
    return number(length / 1000)


def reals(values: Iterable[float]) -> str:
    """Give a list of numbers."""
    return "(" + ",".join([number(value) for value in values]) + ")"


def listed(values: Iterable[str]) -> str:
    """Give a list of what is written already."""
    return "(" + ",".join(values) + ")"


def enum(item: str) -> str:
    """Give an item of an enumeration."""
    return f".{item}."


def typed(kind: str, value: str) -> str:
    """Give a written value with the type that a select asks for."""
    return f"{kind.upper()}({value})"
