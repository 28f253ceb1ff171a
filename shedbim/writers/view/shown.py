"""What the view can show besides the shed: findings to fly to, and changes to colour by."""

from __future__ import annotations

from dataclasses import dataclass

__all__ = ["ShownChange", "ShownFinding"]


@dataclass(frozen=True)
class ShownFinding:
    """One line in the list of findings.

    Attributes:
        code: name of the rule, such as is searched for.
        severity: ``error``, ``warning`` or ``note``; the page lists them in this order.
        text: the sentence a reader sees.
        point: x, y, z in building axes, mm: where the page flies to.
        pieces: indices of the pieces it speaks of; they are selected and coloured by it.
    """

    code: str
    severity: str
    text: str
    point: tuple[float, float, float]
    pieces: tuple[int, ...] = ()


@dataclass(frozen=True)
class ShownChange:
    """What became of some pieces since an issue: a word such as ``added`` or ``moved``, and their indices."""

    word: str
    pieces: tuple[int, ...]
