"""Sections made from the dimensions in their name: lipped C and Z, plain channels, flats and rounds."""

from __future__ import annotations

from collections.abc import Sequence

from shedbim.sections.family import Family, Size
from shedbim.sections.profiles import Flat, FoldedChannel, LippedC, LippedZ, Round

__all__ = ["BEND", "FAMILIES"]

#: Inside bend radius over wall; a product choice, 1 to 2 is usual (common practice).
BEND = 1.5
#: Walls in mm between which EN 1993-1-3 3.2.4 has rules for cold-formed members (value from memory).
_WALLS = (0.45, 15.0)
#: Greatest size in mm of anything cold formed, and of a flat or round bar; beyond is a slip of the pen.
_GREATEST = 1000.0
_GREATEST_FLAT = 3000.0
_GREATEST_ROUND = 500.0
#: How many numbers a Z with two flanges has, and the place of the one that its oblique stroke stands before.
_TWO_FLANGES, _NARROW = 5, 2


def lipped_c(dimensions: Size) -> LippedC:
    """Give the C from depth, flange, lip and wall; raises ValueError where it cannot be folded."""
    h, b, c, t = _folded(dimensions)
    if 2 * c >= h:
        raise ValueError(f"two lips of {c:g} mm meet within a depth of {h:g} mm")
    return LippedC(h, b, c, t, BEND * t)


def lipped_z(dimensions: Size) -> LippedZ:
    """Give the Z from depth, flange (or wide and narrow flange), lip and wall.

    Raises:
        ValueError: where it cannot be folded.
    """
    if len(dimensions) != _TWO_FLANGES:
        h, b, c, t = _folded(dimensions)
        b2 = b
    else:
        h, b, b2, c, t = _counted(dimensions, "depth x wide flange x narrow flange x lip x wall")
        _check_folds(t, (("depth", h, 2), ("wide flange", b, 2), ("narrow flange", b2, 2), ("lip", c, 1)))
    if b2 > b:
        raise ValueError(
            f"the flange of {b:g} mm is narrower than that of {b2:g} mm; the wide one comes first"
        )
    if c >= h:
        raise ValueError(f"a lip of {c:g} mm is as deep as the section of {h:g} mm")
    return LippedZ(h, b, c, t, BEND * t, b2 if b2 < b else None)


def plain_channel(dimensions: Size) -> FoldedChannel:
    """Give the channel without lips from depth, flange and wall; raises ValueError where it cannot be folded."""
    h, b, t = _counted(dimensions, "depth x flange x wall")
    _check_folds(t, (("depth", h, 2), ("flange", b, 1)))
    return FoldedChannel(h, b, t, BEND * t)


def flat(dimensions: Size) -> Flat:
    """Give the flat from width and thickness; raises ValueError where these make no flat."""
    b, t = _counted(dimensions, "width x thickness")
    if t > b:
        raise ValueError(f"the thickness {t:g} mm is more than the width {b:g} mm; the width comes first")
    if b > _GREATEST_FLAT:
        raise ValueError(f"a width of {b:g} mm is more than {_GREATEST_FLAT:g} mm")
    return Flat(b, t)


def round_bar(dimensions: Size) -> Round:
    """Give the round from its diameter; raises ValueError where there is no such bar."""
    (d,) = _counted(dimensions, "diameter")
    if d > _GREATEST_ROUND:
        raise ValueError(f"a diameter of {d:g} mm is more than {_GREATEST_ROUND:g} mm")
    return Round(d)


def _counted(dimensions: Size, names: str) -> Size:
    """Give the dimensions if there are as many as names and all are above zero."""
    wanted = names.split(" x ")
    if len(dimensions) != len(wanted):
        raise ValueError(f"{len(dimensions)} dimensions where {len(wanted)} are wanted: {names}")
    for name, value in zip(wanted, dimensions, strict=True):
        if value <= 0:
            raise ValueError(f"the {name} is {value:g} mm and must be more than 0")
    return dimensions


def _folded(dimensions: Size) -> Size:
    """Give depth, flange, lip and wall if a strip can be folded to them."""
    h, b, c, t = _counted(dimensions, "depth x flange x lip x wall")
    _check_folds(t, (("depth", h, 2), ("flange", b, 2), ("lip", c, 1)))
    return h, b, c, t


def _check_folds(t: float, sides: Sequence[tuple[str, float, int]]) -> None:
    """Refuse a wall that cannot be folded, and sides (name, size, bends at its ends) with no room for the bends."""
    thinnest, thickest = _WALLS
    if not thinnest <= t <= thickest:
        raise ValueError(f"the wall is {t:g} mm and must be {thinnest:g} to {thickest:g} mm")
    largest = max(value for _, value, _ in sides)
    if largest > _GREATEST:
        raise ValueError(f"{largest:g} mm is more than {_GREATEST:g} mm")
    corner = (BEND + 1) * t
    for name, value, corners in sides:
        if value <= corners * corner:
            raise ValueError(
                f"the {name} of {value:g} mm leaves nothing between bends {corner:g} mm in outer radius"
            )


FAMILIES = (
    Family(
        "C", "by dimension", f"cold-formed lipped C, inside bend radius {BEND:g} times the wall",
        "C depth x flange x lip x wall", "C 200x75x20x2", lipped_c,
    ),
    Family(
        "Z", "by dimension", f"cold-formed lipped Z, inside bend radius {BEND:g} times the wall",
        "Z depth x flange (or wide/narrow flange) x lip x wall", "Z 200x75x20x2.5", lipped_z,
        stroke=(_TWO_FLANGES, _NARROW),
    ),
    Family(
        "U", "by dimension", f"cold-formed plain channel, inside bend radius {BEND:g} times the wall",
        "U depth x flange x wall", "U 190x60x2.5", plain_channel,
    ),
    Family("FL", "by dimension", "flat bar", "FL width x thickness", "FL 100x10", flat),
    Family("RD", "by dimension", "round bar", "RD diameter", "RD 12", round_bar),
)  # fmt: skip
