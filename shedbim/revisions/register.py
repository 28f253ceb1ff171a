"""The register: what was issued, and what it was called."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.model.shed import Part
from shedbim.revisions.snapshot import Snapshot

__all__ = ["Issue", "IssuedAssembly", "IssuedLine", "IssuedMark", "Register"]


@dataclass(frozen=True)
class Issue:
    """One issue.

    Attributes:
        revision: its code, for example ``P02``.
        status: what it may be used for, for example ``S3``.
        date: ISO 8601.
        reason: why it was issued, in the user's words.
        digest: SHA-256 of the description, 64 hexadecimal digits.
    """

    revision: str
    status: str
    date: str
    reason: str
    digest: str


@dataclass(frozen=True)
class IssuedLine:
    """A line of the grid: ``axis`` is ``letter`` or ``number``; ``live`` is False once it was taken away."""

    axis: str
    label: str
    place: float
    live: bool = True


@dataclass(frozen=True)
class IssuedMark:
    """A mark: of a part or of an assembly.

    Attributes:
        mark: the mark.
        live: whether anything has it.
        revision: the issue in which what it names last changed, or in which it was retired.
        quantity: how many there were in the last issue; 0 once retired.
    """

    mark: str
    live: bool
    revision: str
    quantity: int


@dataclass(frozen=True)
class IssuedAssembly:
    """An assembly: its path, the name its id is made from, its mark, and the row of its parent, -1 for none."""

    key: str
    name: str
    mark: str
    parent: int


@dataclass(frozen=True, eq=False)
class Register:
    """What was issued of one project.

    Attributes:
        project_id: the scope of the ids.
        issues: from the first to the last.
        lines: of the grid, those taken away among them.
        marks: every mark ever issued, of parts and of assemblies.
        parts: what the live marks of parts were last issued for, in the order of their marks.
        assemblies: of the last issue.
        names: (n,) what the ids of the pieces of the last issue are made from.
        assembly: (n,) int, row of ``assemblies`` that each piece belongs to, -1 for none.
        last: the pieces of the last issue.
    """

    project_id: str
    issues: tuple[Issue, ...]
    lines: tuple[IssuedLine, ...]
    marks: tuple[IssuedMark, ...]
    parts: tuple[Part, ...]
    assemblies: tuple[IssuedAssembly, ...]
    names: tuple[str, ...]
    assembly: NDArray[np.int64]
    last: Snapshot

    def labels(self, axis: str) -> tuple[tuple[tuple[str, float], ...], frozenset[str]]:
        """Give label and place of the live lines of an axis in order, and the labels of those taken away."""
        mine = [line for line in self.lines if line.axis == axis]
        live = sorted(((line.label, line.place) for line in mine if line.live), key=lambda each: each[1])
        return tuple(live), frozenset(line.label for line in mine if not line.live)
