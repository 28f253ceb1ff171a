"""Reserved zones: boxes of the building that its steel keeps out of."""

from __future__ import annotations

from dataclasses import dataclass

from shedbim.errors import ModelError
from shedbim.limits.zone_kinds import ZONE_KINDS

__all__ = ["Zone"]


@dataclass(frozen=True)
class Zone:
    """A box that is kept free.

    Attributes:
        name: the user's word for it; zones of one building have different names.
        kind: a word of ``ZONE_KINDS``.
        low, high: its least and greatest corner, mm, building axes.
        clearance: distance that steel keeps from it, mm; None where the limit of its kind holds.

    Raises:
        ModelError: for a kind that is none, and for a box without size.
    """

    name: str
    kind: str
    low: tuple[float, float, float]
    high: tuple[float, float, float]
    clearance: float | None = None

    def __post_init__(self) -> None:
        if self.kind not in ZONE_KINDS:
            raise ModelError(f"there is no kind of zone {self.kind!r}")
        if not all(low < high for low, high in zip(self.low, self.high, strict=True)):
            raise ModelError(f"zone {self.name!r} has no size")
