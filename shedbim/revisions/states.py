"""What any two states of a building have to tell of their pieces to be compared and listed, whoever made them."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Protocol

import numpy as np
from numpy.typing import NDArray

from shedbim.geometry.placements import Placements

__all__ = ["State", "Thing"]


@dataclass(frozen=True)
class Thing:
    """What equal pieces are.

    Attributes:
        mark: its mark; empty where none is known.
        role: what it does, in a word; of another's model its class.
        stock: what it is made of: section, thickness of plate, bolt.
        grade, finish: in words.
        mass: kg; 0 where nobody says.
        length: mm; 0 for what has none.
        surface: m²; 0 where nobody says.
        fasteners: how many bolts, anchors or nuts one piece holds; 0 for members and fittings.
        shape: short digest of its shape: equal ones have equal shapes.
    """

    mark: str
    role: str
    stock: str
    grade: str
    finish: str
    mass: float
    length: float
    surface: float
    fasteners: int
    shape: str


class State(Protocol):
    """The pieces of a building in one state, as columns of n rows."""

    @property
    def project_id(self) -> str:
        """The scope of the ids."""
        ...

    @property
    def revision(self) -> str:
        """Code of the state."""
        ...

    @property
    def ids(self) -> tuple[str, ...]:
        """GlobalIds, all different."""
        ...

    @property
    def keys(self) -> tuple[str, ...]:
        """Paths, or names."""
        ...

    @property
    def things(self) -> tuple[Thing, ...]:
        """What the pieces are."""
        ...

    @property
    def thing(self) -> NDArray[np.int64]:
        """Index of each piece into ``things``."""
        ...

    @property
    def placement(self) -> Placements:
        """Frames (n, 3, 4) in building axes, mm."""
        ...

    @property
    def joints(self) -> NDArray[np.uint64]:
        """A number for all that the joints of each piece are."""
        ...

    @property
    def assembly(self) -> tuple[str, ...]:
        """Marks of the assemblies, empty for loose pieces."""
        ...

    @property
    def welds(self) -> float | None:
        """Length of all welds, m; None where it is not known."""
        ...

    def __len__(self) -> int: ...
