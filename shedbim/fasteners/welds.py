"""Sizes of welds and the words of their symbol.

Sizes are those of common practice, not of a design: a designer replaces them.
"""

from __future__ import annotations

import re
from math import ceil, sqrt
from typing import Protocol

__all__ = ["LEAST_THROAT", "WeldLike", "least_length", "leg", "symbol", "throat_for"]

#: EN 1993-1-8 4.5.2: no fillet weld is thinner (value from memory), mm.
LEAST_THROAT = 3.0
#: EN 1993-1-8 4.5.1: shorter fillet welds carry nothing, mm and throats (values from memory).
_LEAST_LENGTH, _LEAST_THROATS = 30.0, 6.0
#: Throat over thickness of fillets on both sides that are as strong as the thinner plate, by yield strength in
#: N/mm2. Up to S355: common practice, values from memory; above: t fy beta_w gamma_M2 / (sqrt2 fu) of EN 1993-1-8
#: 4.5.3.2 with beta_w 1.0, which gives about the values up to S355 as well.
_FULL = ((235.0, 0.46), (275.0, 0.48), (355.0, 0.55), (420.0, 0.72), (460.0, 0.76))
#: Throat over thickness of the thinner plate elsewhere (common practice: 0.4 to 0.5).
_USUAL = 0.5
#: Throats in half millimetres up to this, in whole ones above, so that few sizes are used, mm.
_HALVES = 5.0

#: Letter of the size and sign of each form (ISO 2553; value from memory).
_SIGNS = {"fillet": ("a", "◺"), "butt": ("s", "‖")}


class WeldLike(Protocol):
    """What a symbol is written from; see ``model.welds.Weld``."""

    @property
    def form(self) -> str:
        """``fillet`` or ``butt``."""

    @property
    def throat(self) -> float:
        """Throat thickness a, mm."""

    @property
    def length(self) -> float:
        """Total run, mm."""

    @property
    def site(self) -> bool:
        """Made on site."""

    @property
    def all_round(self) -> bool:
        """Runs round the whole of the contact."""


def throat_for(thinner: float, steel: str = "S355", full: bool = False, *, sides: int = 2) -> float:
    """Give the throat of a fillet weld, mm, rounded up to half a millimetre (above 5 mm to a whole one).

    Args:
        thinner: thickness of the thinner of the two things it joins, mm.
        steel: their grade; used for welds of full strength.
        full: as strong as the thinner plate, else the usual half of its thickness.
        sides: 2 for fillets on both sides of a plate; 1 where only one side can be reached, as on a tube. Matters
            for welds of full strength only.
    """
    ratio = _full_ratio(steel) * 2 / sides if full else _USUAL
    throat = max(ratio * thinner, LEAST_THROAT) - 1e-9
    halves = ceil(2 * throat) / 2
    return halves if halves <= _HALVES else float(ceil(throat))


def _full_ratio(steel: str) -> float:
    """The ratio of the weakest listed steel that is not weaker; that of the strongest for any other name."""
    found = re.match(r"[SE](\d{3})", steel.strip())
    strength = float(found[1]) if found else _FULL[-1][0]
    return next((ratio for most, ratio in _FULL if strength <= most), _FULL[-1][1])


def leg(throat: float) -> float:
    """Give the leg of a fillet weld with equal legs, mm: sqrt(2) a."""
    return sqrt(2) * throat


def least_length(throat: float) -> float:
    """Give the least effective length of a fillet weld, mm (EN 1993-1-8 4.5.1): the greater of 30 mm and 6 a."""
    return max(_LEAST_LENGTH, _LEAST_THROATS * throat)


def symbol(weld: WeldLike) -> str:
    """Give the symbol of a weld in one line of text, in the order of ISO 2553.

    The size before the sign (a: throat of a fillet, s: depth of a butt weld), then the sign, the total length in
    mm, and what stands at the bend of the reference line: ``a4 ◺ 620 ○ all round ⚑ site``.

    Raises:
        ValueError: for a form other than fillet and butt.
    """
    if weld.form not in _SIGNS:
        raise ValueError(f"no sign for a weld of form {weld.form!r}")
    letter, sign = _SIGNS[weld.form]
    words = [f"{letter}{weld.throat:g}", sign, f"{weld.length:.0f}"]
    if weld.all_round:
        words.append("○ all round")
    if weld.site:
        words.append("⚑ site")
    return " ".join(words)
