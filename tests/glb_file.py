"""Reads a mesh model back with nothing but the standard (ISO/IEC 12113) and numpy."""

from __future__ import annotations

import json
import struct
from dataclasses import dataclass
from functools import cached_property
from typing import Any

import numpy as np

from shedbim.model.shed import Shed

__all__ = ["GlbFile", "box_of_corners", "nodes_before_pieces"]

_COMPONENTS = {5123: np.dtype("<u2"), 5125: np.dtype("<u4"), 5126: np.dtype("<f4")}
_WIDTHS = {"SCALAR": 1, "VEC3": 3}


@dataclass(frozen=True, eq=False)
class GlbFile:
    """A file taken apart: its JSON as bytes and as data, and its buffer."""

    text: bytes
    json: dict[str, Any]
    buffer: bytes

    @classmethod
    def read(cls, data: bytes) -> GlbFile:
        """Take a file apart; every length must be right."""
        magic, version, total = struct.unpack_from("<4sII", data)
        assert (magic, version, total) == (b"glTF", 2, len(data))
        chunks = []
        at = 12
        while at < total:
            size, kind = struct.unpack_from("<I4s", data, at)
            assert size % 4 == 0
            chunks.append((kind, data[at + 8 : at + 8 + size]))
            assert len(chunks[-1][1]) == size
            at += 8 + size
        assert at == total
        assert [kind for kind, _ in chunks] in ([b"JSON", b"BIN\0"], [b"JSON"])
        buffer = chunks[1][1] if len(chunks) > 1 else b""
        found = json.loads(chunks[0][1], object_pairs_hook=_without_doubles)
        assert [each["byteLength"] for each in found.get("buffers", [])] == ([len(buffer)] if buffer else [])
        return cls(chunks[0][1], found, buffer)

    def values(self, accessor: int) -> np.ndarray:
        """The values (n,) or (n, 3) of an accessor, which must lie within its view."""
        entry = self.json["accessors"][accessor]
        view = self.json["bufferViews"][entry["bufferView"]]
        kind, width = _COMPONENTS[entry["componentType"]], _WIDTHS[entry["type"]]
        size = entry["count"] * width * kind.itemsize
        assert view.get("byteStride", kind.itemsize * width) == kind.itemsize * width
        assert entry["byteOffset"] + size <= view["byteLength"]
        begin = view.get("byteOffset", 0) + entry["byteOffset"]
        assert begin % 4 == 0
        values = np.frombuffer(self.buffer, kind, entry["count"] * width, begin)
        return values if width == 1 else values.reshape(-1, width)

    def accessors(self, mesh: int) -> dict[str, int]:
        """The accessors of a mesh of one primitive by what they hold."""
        (primitive,) = self.json["meshes"][mesh]["primitives"]
        assert primitive.get("mode", 4) == 4
        return primitive["attributes"] | {"indices": primitive["indices"]}

    @cached_property
    def parents(self) -> np.ndarray:
        """(n,) the node above each node, -1 for the root; each node is under one at most."""
        above = np.full(len(self.json["nodes"]), -1)
        for number, node in enumerate(self.json["nodes"]):
            for child in node.get("children", ()):
                assert above[child] == -1
                above[child] = number
        return above

    @cached_property
    def world(self) -> np.ndarray:
        """(n, 3, 4) float: the motion of each node's own frame into the world of the file, m."""
        nodes = self.json["nodes"]
        turns = np.array([node.get("rotation", (0, 0, 0, 1)) for node in nodes], float)
        assert np.abs(np.linalg.norm(turns, axis=1) - 1).max() < 1e-7
        local = np.zeros((len(nodes), 4, 4))
        local[:, :3, :3] = rotation_matrices(turns)
        local[:, :3, 3] = [node.get("translation", (0, 0, 0)) for node in nodes]
        local[:, 3, 3] = 1
        world, above = local.copy(), self.parents.copy()
        while (above >= 0).any():
            some = above >= 0
            world[some] = local[above[some]] @ world[some]
            above[some] = self.parents[above[some]]
        return world[:, :3]

    def piece_boxes(self, shed: Shed) -> np.ndarray:
        """(n, 2, 3) float: least and greatest corner of each piece in building axes, mm, from the accessors."""
        nodes = self.json["nodes"]
        first = nodes_before_pieces(self, shed)
        bounds = []
        for mesh in range(len(self.json["meshes"])):
            entry = self.json["accessors"][self.accessors(mesh)["POSITION"]]
            bounds.append((entry["min"], entry["max"]))
        of_part = np.array(bounds, float)
        mesh = [node["mesh"] for node in nodes[first:]]
        # y up in the file is z up in the building.
        upright = np.array([[1.0, 0, 0], [0, 0, -1], [0, 1, 0]])
        return box_of_corners(of_part[mesh] * 1000, upright @ self.world[first:] * [1, 1, 1, 1000])


def nodes_before_pieces(file: GlbFile, shed: Shed) -> int:
    """How many nodes there are besides those of the pieces, which come last."""
    return len(file.json["nodes"]) - len(shed.pieces)


def rotation_matrices(turns: np.ndarray) -> np.ndarray:
    """The matrices (n, 3, 3) of unit quaternions (n, 4), by turning the three axes."""
    vector, scalar = turns[:, None, :3], turns[:, None, 3:]
    axes = np.eye(3)[None]
    twice = 2 * np.cross(vector, axes)
    return np.swapaxes(axes + scalar * twice + np.cross(vector, twice), 1, 2)


def box_of_corners(bounds: np.ndarray, motion: np.ndarray) -> np.ndarray:
    """The upright boxes (n, 2, 3) round boxes (n, 2, 3) that were carried by motions (n, 3, 4)."""
    choice = np.array([[(corner >> axis) & 1 for axis in range(3)] for corner in range(8)])
    corners = bounds[:, choice, np.arange(3)]
    moved = corners @ np.swapaxes(motion[:, :, :3], 1, 2) + motion[:, None, :, 3]
    return np.stack([moved.min(axis=1), moved.max(axis=1)], axis=1)


def _without_doubles(pairs: list[tuple[str, Any]]) -> dict[str, Any]:
    """An object of the file, none of whose names stands twice."""
    found = dict(pairs)
    assert len(found) == len(pairs)
    return found
