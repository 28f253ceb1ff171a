"""How large a hole is drilled for a bolt, and how far a slot runs: EN 1090-2 Table 11, and what is common, mm."""

from __future__ import annotations

from shedbim.fasteners.fit import Fit
from shedbim.fasteners.rows import rows_of

__all__ = ["hole_diameter", "slot_travel"]

#: Long slots are this many diameters longer than the bolt is thick (EN 1090-2 Table 11).
_LONG_SLOT = 1.5
#: Holes over anchors cast in: so much more than the anchor up to M24, and above (common practice; value from memory).
_CAST_IN_UP_TO, _CAST_IN, _CAST_IN_ABOVE = 24.0, 6.0, 10.0
#: The column of ``hole_clearances`` that a round hole is chosen from, where it is not ``normal``.
_COLUMNS = {Fit.OVERSIZE: "oversize", Fit.BAR: "bar"}


def hole_diameter(diameter: float, fit: Fit = Fit.NORMAL) -> float:
    """Give the diameter of the hole for a bolt or a threaded bar; of a slot, its width, which is that of a normal hole.

    Raises:
        ValueError: for a diameter of nothing.
    """
    if fit is Fit.CAST_IN:
        return diameter + (_CAST_IN if diameter <= _CAST_IN_UP_TO else _CAST_IN_ABOVE)
    return diameter + _clearance(diameter, _COLUMNS.get(fit, "normal"))


def slot_travel(diameter: float, fit: Fit) -> float:
    """Give how far the drill travels on in a slot: its overall length less its width; 0 for round holes."""
    if fit is Fit.SHORT_SLOT:
        return _clearance(diameter, "short_slot") - _clearance(diameter, "normal")
    if fit is Fit.LONG_SLOT:
        return _LONG_SLOT * diameter - _clearance(diameter, "normal")
    return 0.0


def _clearance(diameter: float, column: str) -> float:
    """How much larger than the bolt; bolts below M12 as M12."""
    if not diameter > 0:
        raise ValueError(f"no hole for a bolt of {diameter:g} mm")
    return next(float(row[column]) for row in rows_of("hole_clearances") if diameter <= float(row["up_to"]))
