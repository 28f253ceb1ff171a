"""A Shed as the bytes of a mesh model: a header, a chunk of JSON, a chunk of binary data."""

from __future__ import annotations

import struct
from collections.abc import Iterable, Sequence
from typing import BinaryIO

from shedbim.model.shed import Shed
from shedbim.writers.glb.about import asset, root_extras
from shedbim.writers.glb.materials import materials
from shedbim.writers.glb.meshes import mesh_set
from shedbim.writers.glb.nodes import node_texts
from shedbim.writers.imprint import Imprint

__all__ = ["write"]

#: Codes of the standard: the file, its chunks, the version.
_MAGIC, _JSON, _BIN, _VERSION = b"glTF", b"JSON", b"BIN\0", 2
_PLAIN = Imprint()


def write(shed: Shed, sink: BinaryIO, imprint: Imprint = _PLAIN) -> None:
    """Write a building as a mesh model; equal input gives equal bytes.

    Lengths are metres, y is up, right-handed, grid A/1 at floor level is the origin. Each part is one mesh;
    each piece is a node that places it, named by its key, with mark, section and role as extras.

    Args:
        shed: the building.
        sink: takes the bytes, a part of the file at a time.
        imprint: what the file states of where it comes from.
    """
    surfaces, material_of_part = materials(shed.parts)
    meshes = mesh_set(shed.parts, material_of_part)
    size = sum(map(len, meshes.data))
    # The length stands before the text, and the text before the data: so the text is held, as bytes.
    text = [
        f'{{"asset":{asset(shed, imprint)},"scene":0,"scenes":[{{"nodes":[0]}}],"nodes":['.encode("ascii"),
        *(block.encode("ascii") for block in node_texts(shed, root_extras(shed))),
        b"]",
        _listed("meshes", meshes.meshes),
        _listed("materials", surfaces),
        _listed("accessors", meshes.accessors),
        _listed("bufferViews", meshes.views),
        _listed("buffers", [f'{{"byteLength":{size}}}'] if size else []),
        b"}",
    ]
    text.append(b" " * (-sum(map(len, text)) % 4))
    chunks = [(_JSON, text)] + ([(_BIN, meshes.data)] if size else [])
    total = 12 + sum(8 + sum(map(len, blocks)) for _, blocks in chunks)
    sink.write(struct.pack("<4sII", _MAGIC, _VERSION, total))
    for kind, blocks in chunks:
        sink.write(struct.pack("<I4s", sum(map(len, blocks)), kind))
        _write_all(sink, blocks)


def _listed(name: str, texts: Sequence[str]) -> bytes:
    """A list of the file by its name, or nothing for an empty one, which the standard forbids."""
    return f',"{name}":[{",".join(texts)}]'.encode("ascii") if texts else b""


def _write_all(sink: BinaryIO, blocks: Iterable[bytes]) -> None:
    """Write blocks one after another."""
    for block in blocks:
        sink.write(block)
