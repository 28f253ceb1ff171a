"""Values as compact JSON text in plain ASCII, whatever letters a user typed."""

from __future__ import annotations

import json
import re
from collections.abc import Sequence
from typing import Any

import numpy as np
from numpy.typing import NDArray

__all__ = ["compact", "decimals", "strings"]

# Made once: it costs more than the encoding of a short text.
_COMPACT = json.JSONEncoder(separators=(",", ":"), allow_nan=False)

#: An escape that stays as it is, or half of a surrogate pair.
_ESCAPE = re.compile(r"(\\ud[89ab]..\\ud[c-f]..|\\(?!ud[89a-f]).)|\\u....")


def compact(value: Any) -> str:
    """Give plain data as JSON text without blanks."""
    return _whole(_COMPACT.encode(value))


def strings(texts: Sequence[str]) -> list[str]:
    """Give texts as JSON strings, all in one go: no string holds a line feed that is not escaped."""
    return _whole(json.dumps(texts, separators=("\n", ":")))[1:-1].split("\n") if texts else []


def _whole(text: str) -> str:
    """JSON text in which half of a surrogate pair, which stands for no character at all, is U+FFFD."""
    return _ESCAPE.sub(lambda found: found[1] or "\\ufffd", text) if "\\ud" in text else text


def decimals(column: NDArray[np.int64], scale: int) -> list[str]:
    """Give whole multiples of 1/scale (n,) as n texts; each distinct one is made once."""
    distinct, which = np.unique(column, return_inverse=True)
    texts = [f"{value:.12g}" for value in (distinct / scale).tolist()]
    return [texts[i] for i in which.tolist()]
