"""The family name and the numbers that a designation consists of, however it is typed."""

from __future__ import annotations

import re

from shedbim.sections.family import Size

__all__ = ["LONGEST", "folded", "parse"]

#: No designation is longer; what is longer is refused unread.
LONGEST = 60

_NUMBER = r"-?[0-9]+(?:[.,][0-9]+)?|-?[.,][0-9]+"
_TIMES = r"\s*[x×*/]\s*"
_DESIGNATION = re.compile(
    rf"(?:([a-z][a-z\s]*)(?:(?<=[a-z])-)?)?((?:{_NUMBER})(?:{_TIMES}(?:{_NUMBER}))*)\s*([a-z]*)",
    re.IGNORECASE,
)


def folded(name: str) -> str:
    """Give a family name in capitals and without spaces, the form in which names are compared."""
    return "".join(name.split()).upper()


def parse(text: str) -> tuple[str, Size, Size] | None:
    """Give folded family name, size and the places of numbers behind a ``/``; None where it is no designation.

    Case, spaces, ``×`` or ``*`` for ``x``, a decimal comma and trailing zeros do not matter, nor a hyphen
    straight behind the name; a letter that follows the depth, as EN 10365 writes ``HE 300 B``, is taken into
    the name.
    """
    if len(text) > LONGEST:
        return None
    match = _DESIGNATION.fullmatch(text.strip())
    if match is None:
        return None
    name, numbers, suffix = match.group(1) or "", match.group(2), match.group(3)
    size = tuple(float(part.replace(",", ".")) for part in re.split(_TIMES, numbers, flags=re.IGNORECASE))
    between = re.findall("[x×*/]", numbers, flags=re.IGNORECASE)
    return folded(name + suffix), size, tuple(k for k, sign in enumerate(between, start=1) if sign == "/")
