"""GlobalIds: 22 letters each, derived from the project's own id and a stable name, in bulk.

Equal to UUID version 5 (RFC 9562: SHA-1 of a namespace and a name) written in the 22 letters of an IFC
GlobalId (ISO 16739-1, IfcGloballyUniqueId). The namespace is the project's id, so two projects share no
GlobalId; names never hold the project's name, so renaming a project changes none.
"""

from __future__ import annotations

import uuid
from base64 import b64encode
from collections.abc import Iterable, Sequence
from functools import cache
from hashlib import sha1

__all__ = ["global_ids", "namespace", "piece_ids"]

#: Scope of project ids that are not UUIDs themselves; made once for this program.
_OTHER_IDS = uuid.UUID("6d1f8a52-3b0e-4c67-9f14-c2a95e7d0b38")

_MAIL_LETTERS = b"ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789+/"
_IFC_LETTERS = b"0123456789ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz_$"
_TO_IFC = bytes.maketrans(_MAIL_LETTERS, _IFC_LETTERS)
_VERSION_5 = bytes(byte & 0x0F | 0x50 for byte in range(256))
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
    return global_ids(project_id, ["piece/" + key for key in keys])


def global_ids(project_id: str, names: Sequence[str]) -> list[str]:
    """Give the GlobalId of each name within a project, in order; equal names give equal ids."""
    scope = namespace(project_id).bytes
    raw = bytearray().join(
        [_PAD + sha1(scope + name.encode("utf-8", "surrogatepass")).digest()[:16] for name in names]
    )
    raw[8::_BYTES] = raw[8::_BYTES].translate(_VERSION_5)
    raw[10::_BYTES] = raw[10::_BYTES].translate(_VARIANT)
    text = b64encode(raw).translate(_TO_IFC).decode("ascii")
    return [text[at + 2 : at + _TEXT] for at in range(0, len(text), _TEXT)]
