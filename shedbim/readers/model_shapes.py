"""What elements of a model file look like, and where: digests of representations, and frames in building axes."""

from __future__ import annotations

from hashlib import sha1
from typing import Any

import numpy as np
from numpy.typing import NDArray

__all__ = ["Digests", "Frames"]

Floats = NDArray[np.float64]

#: Decimals of numbers in a digest: noise of the last digits makes no other shape.
_DECIMALS = 7
#: What a representation is of or for, but not what it looks like.
_APART = ("IfcRepresentationContext", "IfcOwnerHistory")


class Digests:
    """Digests of entities by all that they hold, without their numbers in the file; each is worked out once."""

    def __init__(self) -> None:
        self._known: dict[int, str] = {}

    def of(self, entity: Any) -> str:
        """Give the digest of an entity, 40 hexadecimal digits.

        Raises:
            RecursionError: when entities hold one another in a ring, or too deep.
        """
        number = int(entity.id())
        if not number:
            return f"{entity.is_a()}({self._text(entity[0])})"
        if number not in self._known:
            text = f"{entity.is_a()}({','.join(self._text(each) for each in entity)})"
            self._known[number] = sha1(text.encode("utf-8", "surrogatepass")).hexdigest()
        return self._known[number]

    def _text(self, value: Any) -> str:
        if isinstance(value, float):
            return repr(round(value, _DECIMALS) + 0.0)
        if isinstance(value, tuple):
            return f"({','.join(self._text(each) for each in value)})"
        if hasattr(value, "is_a"):
            return "" if any(value.is_a(kind) for kind in _APART) else self.of(value)
        return repr(value)


class Frames:
    """Frames of elements by their chains of placements, mm; each is worked out once."""

    def __init__(self, millimetres: float) -> None:
        self._millimetres = millimetres
        self._known: dict[int, Floats] = {}

    def of(self, placement: Any) -> Floats:
        """Give a frame (3, 4) in the axes of the model; what is placed otherwise than by axes lies at the origin.

        Raises:
            RecursionError: when placements refer to one another in a ring.
        """
        if placement is None:
            return np.eye(3, 4)
        number = int(placement.id())
        if number not in self._known:
            above = self.of(getattr(placement, "PlacementRelTo", None))
            own = self._axes(getattr(placement, "RelativePlacement", None))
            frame = above[:, :3] @ own
            frame[:, 3] += above[:, 3]
            self._known[number] = frame
        return self._known[number]

    def _axes(self, axes: Any) -> Floats:
        frame = np.eye(3, 4)
        if axes is None or not axes.is_a("IfcPlacement"):
            return frame
        at = np.array(axes.Location.Coordinates, float)
        frame[: len(at), 3] = at * self._millimetres
        along, up = axes.RefDirection, getattr(axes, "Axis", None)
        if along is None and up is None:
            return frame
        x, z = _direction(along, (1.0, 0.0, 0.0)), _direction(up, (0.0, 0.0, 1.0))
        x = x - (x @ z) * z
        x = x / np.sqrt(x @ x)
        # The library's own cross product takes ten times as long for one pair.
        y = (z[1] * x[2] - z[2] * x[1], z[2] * x[0] - z[0] * x[2], z[0] * x[1] - z[1] * x[0])
        frame[:, 0], frame[:, 1], frame[:, 2] = x, y, z
        return frame


def _direction(direction: Any, otherwise: tuple[float, float, float]) -> Floats:
    """A direction as a unit vector (3,)."""
    found = np.zeros(3)
    ratios = otherwise if direction is None else direction.DirectionRatios
    found[: len(ratios)] = ratios
    return np.asarray(found / np.sqrt(found @ found))
