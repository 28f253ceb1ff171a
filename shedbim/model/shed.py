"""The whole building: parts, pieces, assemblies, joints and grid. Knows nothing of how it was described.

Axes: right-handed; x across the spans from line A, y along the length from line 1, z up from finished
floor level; the origin is at grid A/1. Lengths mm, masses kg.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from shedbim.errors import ModelError
from shedbim.geometry.placements import Placements
from shedbim.model.bars import Bar
from shedbim.model.joints import JointRun
from shedbim.model.roles import Role
from shedbim.model.shapes import Shape
from shedbim.model.zones import Zone

__all__ = ["Assemblies", "AssemblyType", "Georeference", "Grid", "Part", "Pieces", "ProjectInfo", "Shed"]


@dataclass(frozen=True)
class Part:
    """One distinct thing to make or to buy.

    Attributes:
        shape: what it is made as, every hole included.
        drawn: what models and pictures show of it where that is less; see ``model.levels``.
        revision: the issue in which it last changed; empty for what no register knows.
    """

    mark: str
    role: Role
    shape: Shape
    grade: str
    finish: str
    drawn: Shape | None = None
    revision: str = ""

    @property
    def bar(self) -> Bar:
        """Its shape as a bar.

        Raises:
            ModelError: when it is none.
        """
        if not isinstance(self.shape, Bar):
            raise ModelError(f"{self.mark} is not a bar")
        return self.shape

    @property
    def body(self) -> Shape:
        """The shape that models and pictures show."""
        return self.shape if self.drawn is None else self.drawn


@dataclass(frozen=True, eq=False)
class Pieces:
    """All occurrences, as columns of n rows in a fixed order.

    Attributes:
        keys: n readable paths, all different.
        part: (n,) int, index into ``Shed.parts``.
        placement: (n, 3, 4) float, of the part's own frame in building axes.
        assembly: (n,) int, index into ``Shed.assemblies``, -1 for a loose piece.
        issued: n keys that the pieces had when they were first issued, which their ids are made from; empty where
            all have the keys they had.
    """

    keys: tuple[str, ...]
    part: NDArray[np.int64]
    placement: Placements
    assembly: NDArray[np.int64]
    issued: tuple[str, ...] = ()

    @property
    def names(self) -> tuple[str, ...]:
        """What the ids of the pieces are made from: all different, and the same from issue to issue."""
        return self.issued or self.keys

    def only(self, rows: NDArray[np.int64]) -> Pieces:
        """Give the pieces at ``rows`` (m,) alone, in that order."""
        keys, issued = (tuple(names[row] for row in rows.tolist()) for names in (self.keys, self.names))
        return Pieces(
            keys,
            self.part[rows],
            self.placement[rows],
            self.assembly[rows],
            issued if self.issued else (),
        )

    def __len__(self) -> int:
        return len(self.keys)


@dataclass(frozen=True)
class AssemblyType:
    """What equal assemblies share: mark, kind (``truss`` or ``frame``), where it is put together, and its revision."""

    mark: str
    kind: str
    made: str  # "shop" or "site"
    revision: str = ""


@dataclass(frozen=True, eq=False)
class Assemblies:
    """All assemblies, as columns of n rows.

    Attributes:
        keys: n readable paths.
        type: (n,) int, index into ``Shed.assembly_types``.
        placement: (n, 3, 4) float, in building axes.
        parent: (n,) int, index of the assembly this one belongs to, -1 for none. Parents come first.
        issued: as in ``Pieces``.
    """

    keys: tuple[str, ...]
    type: NDArray[np.int64]
    placement: Placements
    parent: NDArray[np.int64]
    issued: tuple[str, ...] = ()

    @property
    def names(self) -> tuple[str, ...]:
        """What the ids of the assemblies are made from."""
        return self.issued or self.keys

    def __len__(self) -> int:
        return len(self.keys)


@dataclass(frozen=True)
class Grid:
    """Labelled lines: letters across at x, numbers along at y, in mm."""

    letters: tuple[str, ...]
    x: tuple[float, ...]
    numbers: tuple[str, ...]
    y: tuple[float, ...]


@dataclass(frozen=True)
class Georeference:
    """Where grid A/1 at floor level lies: CRS name, eastings, northings and level in mm, rotation in radians.

    The rotation is anticlockwise from grid east to the building's x axis.
    """

    crs: str
    easting: float
    northing: float
    level: float
    rotation: float


@dataclass(frozen=True)
class ProjectInfo:
    """The project's own data; ``id`` is the scope of every GlobalId."""

    id: str
    name: str
    number: str
    revision: str


@dataclass(frozen=True, eq=False)
class Shed:
    """A complete building.

    Attributes:
        parts: sorted by role, then mark.

        finishes: (finish, what it stands for) of the finishes that parts may name.
        defaults: (field, value) of everything that the description left open.
        notes: sentences a reader must know: what was assumed or simplified.
        zones: what its steel keeps out of, in the order of the description.
    """

    project: ProjectInfo
    georeference: Georeference | None
    grid: Grid
    parts: tuple[Part, ...]
    pieces: Pieces
    assembly_types: tuple[AssemblyType, ...]
    assemblies: Assemblies
    joints: tuple[JointRun, ...]
    finishes: tuple[tuple[str, str], ...] = ()
    defaults: tuple[tuple[str, str], ...] = ()
    notes: tuple[str, ...] = ()
    zones: tuple[Zone, ...] = ()

    @cached_property
    def quantities(self) -> NDArray[np.int64]:
        """Number of pieces of each part (p,)."""
        return np.bincount(self.pieces.part, minlength=len(self.parts))

    @cached_property
    def mass(self) -> float:
        """Mass of all pieces, kg."""
        return float(self.quantities @ np.array([part.shape.mass for part in self.parts]))

    @property
    def footprint(self) -> float:
        """Plan area between the outer grid lines, m²."""
        return (self.grid.x[-1] - self.grid.x[0]) * (self.grid.y[-1] - self.grid.y[0]) / 1e6

    @cached_property
    def part_assembly_marks(self) -> tuple[tuple[str, ...], ...]:
        """For each part the marks of the shop assemblies it goes into, sorted; empty for loose pieces."""
        marks: list[set[str]] = [set() for _ in self.parts]
        inside = self.pieces.assembly >= 0
        pairs = np.stack(
            [self.pieces.part[inside], self.assemblies.type[self.pieces.assembly[inside]]], axis=1
        )
        for part, kind in np.unique(pairs, axis=0) if len(pairs) else ():
            if self.assembly_types[kind].made == "shop":
                marks[part].add(self.assembly_types[kind].mark)
        return tuple(tuple(sorted(each)) for each in marks)
