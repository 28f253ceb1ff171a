"""Small scenes of sticks and blocks to draw, and a PNG reader of its own."""

from __future__ import annotations

import struct
import zlib

import numpy as np
from numpy.typing import NDArray

from shedbim.geometry.placements import placement
from shedbim.model.bars import Bar
from shedbim.model.roles import Role
from shedbim.model.shed import Assemblies, Grid, Part, Pieces, ProjectInfo, Shed
from shedbim.sections.profiles import Flat
from shedbim.sections.section import Profile, Section

Pixels = NDArray[np.uint8]
#: One piece: key, role, profile, start, end and the way its z axis leans.
Stick = tuple[str, Role, Profile, tuple[float, ...], tuple[float, ...], tuple[float, ...]]


def decoded(data: bytes) -> Pixels:
    """Read a PNG (8-bit truecolour, no filters) by the letter of ISO/IEC 15948, check sums included."""
    assert data[:8] == bytes([137, 80, 78, 71, 13, 10, 26, 10])
    chunks, at = [], 8
    while at < len(data):
        (length,) = struct.unpack(">I", data[at : at + 4])
        kind, body = data[at + 4 : at + 8], data[at + 8 : at + 8 + length]
        (check,) = struct.unpack(">I", data[at + 8 + length : at + 12 + length])
        assert check == zlib.crc32(kind + body)
        chunks.append((kind, body))
        at += 12 + length
    assert [kind for kind, _ in chunks] == [b"IHDR", b"IDAT", b"IEND"]
    width, height, *rest = struct.unpack(">IIBBBBB", chunks[0][1])
    assert rest == [8, 2, 0, 0, 0]
    rows = np.frombuffer(zlib.decompress(chunks[1][1]), np.uint8).reshape(height, 1 + 3 * width)
    assert not rows[:, 0].any()
    return rows[:, 1:].reshape(height, width, 3)


def scene(*sticks: Stick) -> Shed:
    parts, placements = [], []
    for index, (_, role, profile, start, end, up) in enumerate(sticks):
        name = f"section {index}"
        length = float(np.linalg.norm(np.subtract(end, start)))
        parts.append(
            Part(f"{role.prefix}{index}", role, Bar(Section(name, name, profile, "test"), length), "S355", "")
        )
        placements.append(placement(start, np.subtract(end, start), up))
    n = len(sticks)
    pieces = Pieces(
        tuple(s[0] for s in sticks), np.arange(n), np.array(placements).reshape(n, 3, 4), np.full(n, -1)
    )
    none = np.zeros(0, np.int64)
    return Shed(
        project=ProjectInfo("p", "test", "1", "P01"),
        georeference=None,
        grid=Grid(("A", "B"), (0.0, 9000.0), ("1", "2", "3"), (0.0, 5000.0, 12000.0)),
        parts=tuple(parts),
        pieces=pieces,
        assembly_types=(),
        assemblies=Assemblies((), none, np.zeros((0, 3, 4)), none),
        joints=(),
    )


def block(key: str, role: Role, x: float, y: float, size: float) -> Stick:
    """A cube with its least corner at (x, y, 0)."""
    half = size / 2
    return key, role, Flat(size, size), (x, y + half, half), (x + size, y + half, half), (0.0, 0.0, 1.0)


UP, OUT = (0.0, 0.0, 1.0), (1.0, 0.0, 0.0)
#: Three columns on lines of unequal bays, and a rail in each bay.
HALL = scene(
    *(
        (f"{line}/column/A", Role.COLUMN, Flat(200.0, 200.0), (0.0, y, 0.0), (0.0, y, 6000.0), OUT)
        for line, y in ((1, 0.0), (2, 5000.0), (3, 12000.0))
    ),
    *(
        (f"{bay}/rail/A", Role.SIDE_RAIL, Flat(150.0, 60.0), (-200.0, y, 900.0), (-200.0, end, 900.0), UP)
        for bay, y, end in (("1-2", 5.0, 4995.0), ("2-3", 5005.0, 11995.0))
    ),
)
