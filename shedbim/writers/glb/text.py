"""Values as compact JSON text in plain ASCII, whatever letters a user typed."""

from __future__ import annotations

import json
from collections.abc import Sequence
from typing import Any

import numpy as np
from numpy.typing import NDArray

__all__ = ["compact", "decimals", "strings"]


def compact(value: Any) -> str:
    """Give plain data as JSON text without blanks."""
    # Half of a surrogate pair, which a file in UTF-8 cannot hold, would stand as an escape no reader accepts.
    return json.dumps(value, separators=(",", ":"), allow_nan=False)


def strings(texts: Sequence[str]) -> list[str]:
    """Give texts as JSON strings, all in one go: no string holds a line feed that is not escaped."""
    return json.dumps(texts, separators=("\n", ":"))[1:-1].split("\n") if texts else []


def decimals(column: NDArray[np.int64], scale: int) -> list[str]:
    """Give whole multiples of 1/scale (n,) as n texts; each distinct one is made once."""
    distinct, which = np.unique(column, return_inverse=True)
    texts = [f"{value:.12g}" for value in (distinct / scale).tolist()]
    return [texts[i] for i in which.tolist()]
