"""From where a place is looked at: the side from which least stands before what the finding speaks of.

Used by the snapshot and by the camera of the viewpoint, so that both show the same.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from shedbim.checks.finding import Place, Point
from shedbim.model.shed import Shed
from shedbim.writers.pictures.boxes import piece_boxes
from shedbim.writers.pictures.projection import Box, box_corners

__all__ = ["Sight", "Surroundings"]

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]

#: Half the side of the cube that is shown, mm: at least a joint with the stubs of its members, at most a few bays.
_LEAST_REACH, _MOST_REACH = 600.0, 4000.0
#: Room round the pieces that fill the cube.
_MARGIN = 1.25
#: What stands before the place is sought this many reaches away: as far as the eye.
_BEFORE = 3.0
#: Ways of looking, the one preferred among equals first: from above, then from below, from the four corners.
_DIRECTIONS = np.array(
    [(x, y, z) for z in (-0.62, 0.62) for x, y in ((0.80, 1.0), (-0.80, 1.0), (0.80, -1.0), (-0.80, -1.0))]
)
#: Points in a piece's box, as shares of its sides: what of the piece is looked for.
_SAMPLES = box_corners((0.1, 0.1, 0.02), (0.9, 0.9, 0.98))
#: Lengthwise more samples, for a long bar shows only a short stretch in the cube.
_ALONG = np.linspace(0.02, 0.98, 13)
#: A sight line that enters a box by less than this only touches it, mm.
_TOUCH = 2.0


@dataclass(frozen=True, eq=False)
class Sight:
    """How a place is looked at.

    Attributes:
        point: in the middle of the picture, mm, building axes.
        direction: the way the eye looks, a unit vector.
        reach: half the side of the cube that fills the picture, mm.
        near: indices of the pieces that reach into the cube.
    """

    point: Point
    direction: tuple[float, float, float]
    reach: float
    near: Ints

    @property
    def box(self) -> Box:
        """The cube."""
        x, y, z = self.point
        r = self.reach
        return (x - r, y - r, z - r), (x + r, y + r, z + r)


class Surroundings:
    """A shed to look round in; where all its pieces lie is worked out once."""

    def __init__(self, shed: Shed) -> None:
        self.shed = shed

    @cached_property
    def _boxes(self) -> tuple[Floats, Floats]:
        """Least and greatest corners (n, 3) of all pieces."""
        return piece_boxes(self.shed, np.arange(len(self.shed.pieces)))

    @cached_property
    def _local(self) -> Floats:
        """Least and greatest corner (p, 2, 3) of each part in its own frame."""
        return np.array([part.body.box for part in self.shed.parts], float).reshape(-1, 2, 3)

    def sight(self, place: Place) -> Sight:
        """Give how a place is looked at."""
        point, pieces = np.array(place.point), np.array(place.pieces, np.int64)
        reach = self._reach(point, pieces)
        direction = self._clearest(point, pieces, reach)
        x, y, z = (direction / np.linalg.norm(direction)).tolist()
        return Sight(place.point, (x, y, z), reach, self._within(point, reach))

    def _within(self, point: Floats, reach: float) -> Ints:
        """The pieces that reach into a cube."""
        low, high = self._boxes
        return np.flatnonzero(((low <= point + reach) & (high >= point - reach)).all(axis=1))

    def _reach(self, point: Floats, pieces: Ints) -> float:
        """As far as a lone piece goes, or as several lie from the place."""
        if not len(pieces):
            return _MOST_REACH
        low, high = (corner[pieces] for corner in self._boxes)
        if len(pieces) == 1:
            needed = float(np.maximum(point - low, high - point).max())
        else:
            needed = float(np.maximum(np.maximum(low - point, point - high), 0.0).max())
        return min(max(_MARGIN * needed, _LEAST_REACH), _MOST_REACH)

    def _clearest(self, point: Floats, pieces: Ints, reach: float) -> Floats:
        """The direction in which most samples of the pieces are seen; the eye stays above the floor."""
        samples = self._samples(point, pieces, reach)
        others = np.setdiff1d(self._within(point, _BEFORE * reach), pieces)
        scores = [self._seen(samples, others, way) for way in _DIRECTIONS]
        under = point[2] - _BEFORE * reach * _DIRECTIONS[:, 2] / np.linalg.norm(_DIRECTIONS[0]) < 0.0
        return np.asarray(_DIRECTIONS[int(np.argmax(np.where(under, -1, scores)))])

    def _samples(self, point: Floats, pieces: Ints, reach: float) -> Floats:
        """Points (s, 3) in the boxes of pieces, as far as they are in the cube; the place itself where none is."""
        placement = self.shed.pieces.placement[pieces]
        low, high = np.moveaxis(self._local[self.shed.pieces.part[pieces]], 1, 0)
        share = np.concatenate([_SAMPLES, *(_SAMPLES * (0, 1, 1) + (along, 0, 0) for along in _ALONG)])
        local = low[:, None] + share * (high - low)[:, None]
        placed = local @ np.swapaxes(placement[:, :, :3], 1, 2) + placement[:, None, :, 3]
        points = placed.reshape(-1, 3)
        inside = points[(np.abs(points - point) <= reach).all(axis=1)]
        return inside if len(inside) else point[None]

    def _seen(self, samples: Floats, others: Ints, way: Floats) -> int:
        """How many samples (s, 3) no box of other pieces stands before, for one who looks along ``way``."""
        placement = self.shed.pieces.placement[others]
        low, high = np.moveaxis(self._local[self.shed.pieces.part[others]], 1, 0)
        # In the frame of each piece: where the line towards the eye starts, and where it goes.
        back = np.swapaxes(placement[:, :, :3], 1, 2)
        start = np.einsum("oij,osj->osi", back, samples[None] - placement[:, None, :, 3])
        step = np.einsum("oij,j->oi", back, -way / np.linalg.norm(way))[:, None]
        step = np.where(np.abs(step) < 1e-9, 1e-9, step)
        one, other = (low[:, None] - start) / step, (high[:, None] - start) / step
        enter = np.maximum(np.minimum(one, other).max(axis=2), 0.0)
        hidden = (np.maximum(one, other).min(axis=2) - enter > _TOUCH).any(axis=0)
        return int(len(samples) - hidden.sum())
