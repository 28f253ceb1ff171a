"""A scale in metres: a bar where a view shows lengths true, three arms along the axes where it does not."""

from __future__ import annotations

from math import floor, log10

import numpy as np

from shedbim.writers.pictures.annotations import INK, Annotation, Rectangle, Stroke, Words
from shedbim.writers.pictures.letters import width
from shedbim.writers.pictures.projection import Projection

__all__ = ["scale_bar", "scale_size"]

#: How long the bar, and the longest arm, may be, in heights of a capital.
_LONGEST_BAR, _LONGEST_ARM = 22.0, 5.0
_FOOT = 1.0  # height of a tick at the ends, in heights of a capital


def scale_size(projection: Projection, capital: float) -> tuple[float, float]:
    """Give how wide and how high the scale is, pixels."""
    if _true(projection):
        return (_LONGEST_BAR + 4.0) * capital, 3.2 * capital
    return (2 * _LONGEST_ARM + 5.0) * capital, (2 * _LONGEST_ARM + 4.0) * capital


def scale_bar(projection: Projection, capital: float, place: Rectangle) -> list[Annotation]:
    """Give the scale of a projection onto the picture, within a rectangle of ``scale_size``."""
    if _true(projection):
        return _bar(projection.scale, capital, place)
    return _arms(projection, capital, place)


def _true(projection: Projection) -> bool:
    """Whether the view looks along an axis of the building, so that upright and level lengths are true."""
    return bool(np.abs(projection.turn[2]).max() > 0.9999)


def _round_length(most: float) -> float:
    """The greatest of 1, 2 and 5 times a power of ten mm that is no more than ``most``."""
    power = 10.0 ** floor(log10(most))
    return max(step * power for step in (1, 2, 5) if step * power <= most)


def _metres(length: float) -> str:
    """A length in metres without needless zeros."""
    return f"{length / 1000:.3f}".rstrip("0").rstrip(".")


def _bar(scale: float, capital: float, place: Rectangle) -> list[Annotation]:
    """A line with ticks at its ends and its middle, their metres above."""
    length = _round_length(_LONGEST_BAR * capital / scale)
    right = place[2] - width(f"{_metres(length)} m", capital) / 2 - 0.5 * capital
    left, line = right - length * scale, place[3] - 0.4 * capital
    weight = max(0.1 * capital, 0.8)
    found: list[Annotation] = [
        Stroke(left, line, right, line, weight),
        Stroke(left, line, (left + right) / 2, line, 3 * weight),
    ]
    for share, text in ((0.0, "0"), (0.5, _metres(length / 2)), (1.0, f"{_metres(length)} m")):
        at = left + share * (right - left)
        found.append(Stroke(at, line, at, line - 0.6 * _FOOT * capital, weight))
        found.append(Words(at, line - 1.6 * capital, text, capital, halo=True))
    return found


def _arms(projection: Projection, capital: float, place: Rectangle) -> list[Annotation]:
    """Three lines from one point, as long as the same length along x, y and z, with their names."""
    # Columns of the turn are where a millimetre along x, y and z goes on the picture.
    ways = projection.turn[:2].T * projection.scale
    longest = float(np.linalg.norm(ways, axis=1).max())
    length = _round_length(_LONGEST_ARM * capital / longest)
    tips = ways * length
    low, high = np.minimum(tips.min(axis=0), 0.0), np.maximum(tips.max(axis=0), 0.0)
    middle = np.array([(place[0] + place[2]) / 2, (place[1] + place[3]) / 2 - 0.8 * capital])
    origin = middle - (low + high) / 2
    weight = max(0.1 * capital, 0.8)
    found: list[Annotation] = []
    for name, tip in zip("xyz", tips, strict=True):
        x, y = (origin + tip).tolist()
        found.append(Stroke(float(origin[0]), float(origin[1]), x, y, weight, INK))
        letter = origin + tip * (1 + 1.1 * capital / max(float(np.linalg.norm(tip)), 1e-9))
        found.append(Words(float(letter[0]), float(letter[1]), name, capital, halo=True))
    foot = float(origin[1] + high[1]) + 1.9 * capital
    found.append(
        Words(float(middle[0]), foot + 0.6 * capital, f"each arm {_metres(length)} m", capital, halo=True)
    )
    return found
