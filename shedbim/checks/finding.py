"""What a check gives: hits, one for each place; and findings, in which hits of the same kind are one."""

from __future__ import annotations

from dataclasses import dataclass

from shedbim.limits import CODES, Code
from shedbim.model.other_trades import OtherElement

__all__ = ["Finding", "Hit", "Place", "Point"]

Point = tuple[float, float, float]


@dataclass(frozen=True)
class Hit:
    """One thing that is wrong at one place.

    Attributes:
        code: one of ``CODES``.
        pieces: indices of the pieces it speaks of, the one to change first.
        point: where, mm, in building axes.
        says: the sentence a reader sees, without the place; ``{value}`` and ``{limit}`` stand for the figures.
        change: what to change in the description, in one sentence; names the field.
        value, limit: what was measured and what it is held against, in ``unit``; None where nothing is measured.
        unit: one of ``figures.UNITS``.
        source: where the limit comes from.
        about: what hits that are one finding share, made of what does not change when the building is regenerated;
            made from roles and keys where left empty.
        others: elements of other trades it speaks of, as their models name them.
    """

    code: str
    pieces: tuple[int, ...]
    point: Point
    says: str
    change: str
    value: float | None = None
    limit: float | None = None
    unit: str = ""
    source: str = ""
    about: str = ""
    others: tuple[OtherElement, ...] = ()


@dataclass(frozen=True)
class Place:
    """One place of a finding: where, which pieces and elements of others, and what was measured there.

    What is said of a whole model of others has no pieces, and its point is the origin of the building.
    """

    point: Point
    pieces: tuple[int, ...]
    value: float | None = None
    others: tuple[OtherElement, ...] = ()


@dataclass(frozen=True)
class Finding:
    """One result of one check, with all its places.

    Attributes:
        code: its name, severity and area.
        about: with the code what tells findings apart, the same when the building is regenerated.
        says: the sentence a reader sees, with the figures of the worst place.
        change: what to change in the description.
        places: where, the worst first.
        value, limit, unit, source: as of the worst hit.
        waived: the user's reason; empty while it is open.
    """

    code: Code
    about: str
    says: str
    change: str
    places: tuple[Place, ...]
    value: float | None = None
    limit: float | None = None
    unit: str = ""
    source: str = ""
    waived: str = ""

    def __post_init__(self) -> None:
        """Refuse a code that is in no table, and a finding that is nowhere."""
        if CODES.get(self.code.name) is not self.code or not self.places:
            raise ValueError(f"no finding: {self.code.name} at {len(self.places)} places")

    @property
    def pieces(self) -> tuple[int, ...]:
        """The pieces of all its places, each once, in order."""
        return tuple(dict.fromkeys(piece for place in self.places for piece in place.pieces))

    @property
    def severe(self) -> bool:
        """Whether it stands against handing the shed over."""
        return self.code.severity.rank == 0 and not self.waived
