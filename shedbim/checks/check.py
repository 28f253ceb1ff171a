"""What a row of the table of checks holds."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import dataclass

from shedbim.checks.finding import Hit
from shedbim.checks.subject import Subject

__all__ = ["Check"]


@dataclass(frozen=True)
class Check:
    """One check.

    Attributes:
        name: shown while it runs.
        codes: all codes it can give.
        run: gives its hits; reads the subject and nothing else.
    """

    name: str
    codes: tuple[str, ...]
    run: Callable[[Subject], Iterable[Hit]]
