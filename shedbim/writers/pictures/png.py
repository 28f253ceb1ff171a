"""A picture as PNG bytes (ISO/IEC 15948: signature, IHDR, IDAT, IEND)."""

from __future__ import annotations

import struct
import zlib

import numpy as np
from numpy.typing import NDArray

__all__ = ["png"]

_SIGNATURE = b"\x89PNG\r\n\x1a\n"
_DEPTH, _TRUECOLOUR = 8, 2


def png(pixels: NDArray[np.uint8]) -> bytes:
    """Give the PNG file of pixels (height, width, 3), red, green, blue, top row first."""
    height, width, _ = pixels.shape
    # Each row begins with its filter type; 0 leaves it as it is.
    rows = np.zeros((height, 1 + 3 * width), np.uint8)
    rows[:, 1:] = pixels.reshape(height, 3 * width)
    header = struct.pack(">IIBBBBB", width, height, _DEPTH, _TRUECOLOUR, 0, 0, 0)
    chunks = (b"IHDR", header), (b"IDAT", zlib.compress(rows.tobytes(), 6)), (b"IEND", b"")
    return _SIGNATURE + b"".join(_chunk(kind, data) for kind, data in chunks)


def _chunk(kind: bytes, data: bytes) -> bytes:
    """Length, kind, data and check sum of one chunk."""
    return struct.pack(">I", len(data)) + kind + data + struct.pack(">I", zlib.crc32(kind + data))
