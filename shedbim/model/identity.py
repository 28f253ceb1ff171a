"""GlobalIds: 22 letters each, derived from the project's own id and a stable name, in bulk.

Glossary:
    raw id   the 16 bytes of a UUID
    words    a raw id as two 64-bit numbers

Equal to UUID version 5 (RFC 9562: SHA-1 of a namespace and a name) written in the 22 letters of an IFC
GlobalId (ISO 16739-1, IfcGloballyUniqueId). The namespace is the project's id, so two projects share no
GlobalId; names never hold the project's name, so renaming a project changes none.

Relations between two pieces are many and have no names of their own: their ids are mixed from the ids of the
pieces they join, all at once (UUID version 8, RFC 9562: the maker's own way).
"""

from __future__ import annotations

import uuid
from base64 import b64encode
from collections.abc import Iterable, Sequence
from functools import cache
from hashlib import sha1

import numpy as np
from numpy.typing import NDArray

__all__ = ["Words", "global_ids", "namespace", "pair_ids", "piece_ids", "piece_words", "word_ids"]

Words = NDArray[np.uint64]

#: Scope of project ids that are not UUIDs themselves; made once for this program.
_OTHER_IDS = uuid.UUID("6d1f8a52-3b0e-4c67-9f14-c2a95e7d0b38")

_MAIL_LETTERS = b"ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789+/"
_IFC_LETTERS = b"0123456789ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz_$"
_TO_IFC = bytes.maketrans(_MAIL_LETTERS, _IFC_LETTERS)
_VERSION_5 = bytes(byte & 0x0F | 0x50 for byte in range(256))
_VERSION_8 = bytes(byte & 0x0F | 0x80 for byte in range(256))
_VARIANT = bytes(byte & 0x3F | 0x80 for byte in range(256))

#: Two zero bytes before the 16 of a UUID make 18, which base 64 writes as 24 letters of which the first
#: two are empty: the other 22 are the GlobalId.
_PAD, _BYTES, _TEXT = b"\0\0", 18, 24


@cache
def namespace(project_id: str) -> uuid.UUID:
    """Give the scope of a project's ids: the id itself where it is a UUID, else one derived from its text."""
    try:
        return uuid.UUID(project_id)
    except ValueError:
        return uuid.uuid5(_OTHER_IDS, project_id)


def piece_ids(project_id: str, keys: Iterable[str]) -> list[str]:
    """Give the GlobalIds of pieces from their keys, in order."""
    return word_ids(piece_words(project_id, keys))


def global_ids(project_id: str, names: Sequence[str]) -> list[str]:
    """Give the GlobalId of each name within a project, in order; equal names give equal ids."""
    scope = namespace(project_id).bytes
    raw = bytearray().join(
        [_PAD + sha1(scope + name.encode("utf-8", "surrogatepass")).digest()[:16] for name in names]
    )
    return _letters(raw, _VERSION_5)


def piece_words(project_id: str, keys: Iterable[str]) -> Words:
    """Give what ``pair_ids`` mixes for each piece: (n, 2), from its key and the project's id."""
    scope = namespace(project_id).bytes + b"piece/"
    raw = b"".join([sha1(scope + key.encode("utf-8", "surrogatepass")).digest()[:16] for key in keys])
    return np.frombuffer(raw, ">u8").reshape(-1, 2).astype(np.uint64)


def word_ids(words: Words) -> list[str]:
    """Give the GlobalIds of pieces (n) from their words (n, 2)."""
    return _letters(_padded(words), _VERSION_5)


def pair_ids(project_id: str, name: str, one: Words, other: Words) -> list[str]:
    """Give the GlobalIds of the relations called ``name`` between pieces, row by row.

    Args:
        one: (m, 2) of the first piece of each pair, as ``piece_words`` gives them.
        other: (m, 2) of the second piece.
    """
    seeds = np.frombuffer(sha1(namespace(project_id).bytes + name.encode()).digest()[:16], ">u8")
    mixed = np.empty((len(one), 2), np.uint64)
    for lane, seed in enumerate(seeds.astype(np.uint64)):
        state = np.full(len(one), seed)
        for word in (one[:, 0], one[:, 1], other[:, 0], other[:, 1]):
            state = _stirred(state ^ word)
        mixed[:, lane] = state
    return _letters(_padded(mixed), _VERSION_8)


def _padded(words: Words) -> bytearray:
    """Give the padded raw ids of words (n, 2)."""
    padded = np.zeros((len(words), _BYTES), np.uint8)
    padded[:, len(_PAD) :] = words.astype(">u8").view(np.uint8).reshape(-1, 16)
    return bytearray(padded.tobytes())


def _stirred(state: Words) -> Words:
    """One round of the SplitMix64 generator's mixer (Steele, Lea and Flood 2014), which no two states share."""
    state = state + np.uint64(0x9E3779B97F4A7C15)
    state = (state ^ (state >> np.uint64(30))) * np.uint64(0xBF58476D1CE4E5B9)
    state = (state ^ (state >> np.uint64(27))) * np.uint64(0x94D049BB133111EB)
    return state ^ (state >> np.uint64(31))


def _letters(raw: bytearray, version: bytes) -> list[str]:
    """Give the letters of padded raw ids, once version and variant are set in them."""
    raw[8::_BYTES] = raw[8::_BYTES].translate(version)
    raw[10::_BYTES] = raw[10::_BYTES].translate(_VARIANT)
    text = b64encode(raw).translate(_TO_IFC).decode("ascii")
    return [text[at + 2 : at + _TEXT] for at in range(0, len(text), _TEXT)]
