"""Thicknesses plates are stocked in, and sizes rounded so that they repeat, mm."""

from __future__ import annotations

from math import ceil

__all__ = ["FLAT_WIDTHS", "THICKNESSES", "flat_width_at_least", "rounded_up", "thickness_at_least"]

#: Thicknesses of plates that a stockholder keeps (common practice, value from memory).
THICKNESSES = (5.0, 6.0, 8.0, 10.0, 12.0, 15.0, 20.0, 25.0, 30.0, 35.0, 40.0, 50.0, 60.0)
#: Widths of flats: EN 10058 up to 150, wide flats above (values from memory).
FLAT_WIDTHS = (
    30.0, 35.0, 40.0, 45.0, 50.0, 60.0, 70.0, 80.0, 90.0, 100.0, 110.0, 120.0, 130.0, 140.0, 150.0,
    160.0, 180.0, 200.0, 220.0, 240.0, 250.0, 260.0, 280.0, 300.0,
)  # fmt: skip
#: What is over by this is floating-point error, mm.
_NOISE = 1e-6


def thickness_at_least(thickness: float) -> float:
    """Give the least stock thickness that is not below one; ValueError where there is none."""
    return _at_least(THICKNESSES, thickness, "plate so thick")


def flat_width_at_least(width: float) -> float:
    """Give the least width of a flat that is not below one; ValueError where there is none."""
    return _at_least(FLAT_WIDTHS, width, "flat so wide")


def rounded_up(size: float, step: float = 10.0) -> float:
    """Give the least multiple of ``step`` that is not below a size."""
    return step * ceil((size - _NOISE) / step)


def _at_least(series: tuple[float, ...], value: float, what: str) -> float:
    for size in series:
        if size >= value - _NOISE:
            return size
    raise ValueError(f"no {what} as {value:g} mm; the most is {series[-1]:g} mm")
