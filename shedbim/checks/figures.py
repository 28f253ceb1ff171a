"""Measured values and limits as text, with the trade's units."""

from __future__ import annotations

from math import degrees

__all__ = ["UNITS", "figure", "in_unit"]

#: What is divided by, and decimals, for each unit in which values are shown; values are held in mm, rad, kg.
UNITS: dict[str, tuple[float, int]] = {
    "": (1.0, 2),
    "mm": (1.0, 0),
    "m": (1000.0, 2),
    "cm³": (1000.0, 1),
    "kg": (1.0, 0),
    "t": (1000.0, 2),
    "deg": (1.0, 1),
    "%": (0.01, 0),
}


def figure(value: float | None, unit: str) -> str:
    """Give a value as text with its unit: mm as mm or m, mm³ as cm³, rad as deg, kg as kg or t, a share as %."""
    if value is None:
        return "?"
    shown = in_unit(value, unit)
    # Ratios are told to three or four figures, as slenderness and shares of a depth are.
    decimals = UNITS[unit][1] if unit or abs(shown) < 100 else 0
    text = f"{shown:,.{decimals}f}"
    if not unit:
        text = text.rstrip("0").rstrip(".") if "." in text else text
    return f"{text} {unit}".strip()


def in_unit(value: float, unit: str) -> float:
    """Give a value held in mm, mm³, rad or kg, or a share, as a number of ``unit``, one of ``UNITS``."""
    return degrees(value) if unit == "deg" else value / UNITS[unit][0]
