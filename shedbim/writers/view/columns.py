"""Columns of whole numbers and tables of texts as one compressed text, and how a page reads it back.

The text is base64 of a zlib stream of::

    length of the head, 4 bytes, least byte first | head as JSON in UTF-8 | the columns one after another

The head holds the texts as they are, and under ``columns`` the name, rows and width of each column in their
order. A column of n rows and w numbers a row is stored number by number: of each number the difference from
the row before, with its sign in the lowest bit (0, -1, 1, -2 are 0, 1, 2, 3), and of all differences first the
lowest bytes, then the next, so that the compressor finds long runs of the same byte. Distances are whole
hundredths of a millimetre, so a place is kept within 0.005 mm however large the building is.
"""

from __future__ import annotations

import json
import zlib
from base64 import b64encode
from collections.abc import Mapping
from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

from shedbim.errors import ModelError

__all__ = ["packed", "scaled"]

Ints = NDArray[np.int64]

#: Level 6 of 9: the next levels take twice the time for a hundredth of the size.
_LEVEL = 6
_LIMIT = 2**31 - 1


def packed(texts: Mapping[str, Any], columns: Mapping[str, ArrayLike]) -> str:
    """Give texts (anything JSON can hold) and columns, each (n,) or (n, w) whole numbers, as base64 text.

    Raises:
        ModelError: when a number does not fit in 32 bits with its sign.
    """
    shapes: list[tuple[str, int, int]] = []
    bodies: list[bytes] = []
    for name, values in columns.items():
        table = np.asarray(values, np.int64)
        table = table.reshape(len(table), -1) if table.size else table.reshape(len(table), 1)
        shapes.append((name, *table.shape))
        bodies.append(_body(name, table))
    head = json.dumps(
        {**texts, "columns": shapes}, ensure_ascii=False, separators=(",", ":"), allow_nan=False
    ).encode()
    whole = len(head).to_bytes(4, "little") + head + b"".join(bodies)
    return b64encode(zlib.compress(whole, _LEVEL)).decode("ascii")


def scaled(values: ArrayLike, units: float = 100.0) -> Ints:
    """Give ``values`` times ``units``, rounded to whole numbers; by default mm become hundredths of mm."""
    return np.rint(np.asarray(values, float) * units).astype(np.int64)


def _body(name: str, table: Ints) -> bytes:
    """The bytes of one column."""
    if table.size and max(int(table.max()), -int(table.min())) > _LIMIT:
        raise ModelError(f"the view cannot hold the column {name!r}: a number is beyond 32 bits")
    steps = np.diff(table, axis=0, prepend=0).T
    # Differences of 32-bit numbers may need 33: they wrap round, and wrap back when they are added up.
    steps = (steps + 2**31) % 2**32 - 2**31
    signed = np.ascontiguousarray(np.where(steps < 0, -2 * steps - 1, 2 * steps), "<u4")
    return signed.view(np.uint8).reshape(-1, 4).T.tobytes()
