"""Codes of issues: what an issue may be used for, and which revision comes next.

Status codes S0 to S5 and A1 upwards, revisions P01 and C01: UK National Annex (2021) to BS EN ISO 19650-2; another
project may have its own, so any short word is taken, and only these are known by name.
"""

from __future__ import annotations

import re
from collections.abc import Sequence

__all__ = ["CONTRACTUAL", "STATUSES", "next_revision"]

#: What the status codes of shared information stand for.
STATUSES: dict[str, str] = {
    "S0": "work in progress",
    "S1": "for coordination",
    "S2": "for information",
    "S3": "for review and comment",
    "S4": "for review and authorization",
    "S5": "for review and acceptance",
}

#: Status codes of what is published for contract: A1 and on.
CONTRACTUAL = re.compile(r"A[1-9][0-9]?")

_CODE = re.compile(r"([A-Za-z]*)([0-9]+)")


def next_revision(issued: Sequence[str], status: str) -> str:
    """Give the revision code that follows those issued: P01, P02 ... until it is for contract, then C01, C02 ...

    A code of another form is counted on where it ends in a number; a single letter is followed by the next one; after
    anything else the count begins.
    """
    prefix = "C" if CONTRACTUAL.fullmatch(status) else "P"
    last = issued[-1] if issued else ""
    if len(last) == 1 and "A" <= last.upper() < "Z":
        return chr(ord(last) + 1)
    found = _CODE.fullmatch(last)
    if found is None:
        return f"{prefix}01"
    letters, digits = found[1], found[2]
    if letters in ("P", "C"):
        mine = [code for code in issued if code.startswith(prefix) and _CODE.fullmatch(code)]
        if not mine:
            return f"{prefix}01"
        digits, letters = mine[-1][1:], prefix
    return f"{letters}{int(digits) + 1:0{len(digits)}d}"
