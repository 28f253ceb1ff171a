"""What the user waived: a hit is waived by its code and the key of any of its pieces."""

from __future__ import annotations

from collections.abc import Sequence
from fnmatch import fnmatchcase

from shedbim.checks.finding import Hit
from shedbim.limits import Waiver

__all__ = ["waived_for"]


def waived_for(hit: Hit, waivers: Sequence[Waiver], keys: Sequence[str]) -> str:
    """Give the reason of the first waiver that covers a hit; empty for none.

    Args:
        hit: of any check.
        waivers: of the description.
        keys: of all pieces.
    """
    return next((waiver.reason for waiver in waivers if _covers(waiver, hit, keys)), "")


def _covers(waiver: Waiver, hit: Hit, keys: Sequence[str]) -> bool:
    if waiver.code != hit.code:
        return False
    return waiver.pieces == "*" or any(fnmatchcase(keys[piece], waiver.pieces) for piece in hit.pieces)
