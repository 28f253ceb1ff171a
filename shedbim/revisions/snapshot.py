"""What of a building is compared with another state of it: its pieces as columns, under the ids they keep."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from hashlib import sha1

import numpy as np
from numpy.typing import NDArray

from shedbim.geometry.mixing import mixed
from shedbim.geometry.placements import Placements
from shedbim.model.bars import Bar
from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.identity import Words, piece_words, word_ids
from shedbim.model.joints import JointRun
from shedbim.model.shapes import Shape
from shedbim.model.shed import Grid, Part, Shed
from shedbim.revisions.shape_text import shape_text
from shedbim.revisions.states import Thing

__all__ = ["Snapshot", "snapshot", "stock"]

Ints = NDArray[np.int64]


@dataclass(frozen=True, eq=False)
class Snapshot:
    """The pieces of a building in one state, n rows.

    Attributes:
        project_id: the scope of the ids.
        revision: code of the state, for headings.
        grid: its lines.
        parts: what the pieces are, with their marks.
        ids: (n,) GlobalIds, all different.
        keys: (n,) paths in this state.
        part: (n,) int, index into ``parts``.
        placement: (n, 3, 4) float, of the part's frame in building axes, mm.
        joints: (n,) uint64, a number for all that the joints of a piece are: kinds, partners, how many fittings and
            which welds; 0 for a piece in no joint.
        assembly: (n,) marks of the shop assemblies, empty for loose pieces.
        welds: length of all welds, m; None for a state read from a register, which does not tell.
    """

    project_id: str
    revision: str
    grid: Grid
    parts: tuple[Part, ...]
    ids: tuple[str, ...]
    keys: tuple[str, ...]
    part: Ints
    placement: Placements
    joints: NDArray[np.uint64]
    assembly: tuple[str, ...]
    welds: float | None = None

    def __len__(self) -> int:
        return len(self.ids)

    @cached_property
    def things(self) -> tuple[Thing, ...]:
        """The parts, as any two states are compared by and listed."""
        return tuple(_thing(part) for part in self.parts)

    @property
    def thing(self) -> Ints:
        """Index of each piece into ``things`` (n,)."""
        return self.part

    @property
    def masses(self) -> NDArray[np.float64]:
        """Mass of each piece (n,), kg."""
        return np.array([part.shape.mass for part in self.parts])[self.part]


def snapshot(shed: Shed) -> Snapshot:
    """Give the snapshot of a shed."""
    words = piece_words(shed.project.id, shed.pieces.names)
    types = [each.mark if each.made == "shop" else "" for each in shed.assembly_types]
    marks = [types[each] for each in shed.assemblies.type.tolist()]
    return Snapshot(
        project_id=shed.project.id,
        revision=shed.project.revision,
        grid=shed.grid,
        parts=shed.parts,
        ids=tuple(word_ids(words)),
        keys=shed.pieces.keys,
        part=shed.pieces.part,
        placement=shed.pieces.placement,
        joints=_joined(shed.joints, words),
        assembly=tuple(marks[each] if each >= 0 else "" for each in shed.pieces.assembly.tolist()),
        welds=sum(len(run.pieces) * weld.length for run in shed.joints for weld in run.welds) / 1e3,
    )


def stock(shape: Shape) -> str:
    """Give what a shape is bought as, in a word: a section, a thickness of plate, a bolt."""
    if isinstance(shape, Bar):
        return shape.section.designation
    if isinstance(shape, BoltGroup):
        return shape.fastener.designation
    return f"PL {shape.thickness:g}"


def _thing(part: Part) -> Thing:
    shape = part.shape
    return Thing(
        mark=part.mark,
        role=part.role.word,
        stock=stock(shape),
        grade=part.grade,
        finish=part.finish,
        mass=shape.mass,
        length=shape.length if isinstance(shape, Bar) else 0.0,
        surface=shape.surface / 1e6,
        fasteners=shape.count if isinstance(shape, BoltGroup) else 0,
        shape=sha1(shape_text(shape).encode()).hexdigest()[:12],
    )


def _joined(joints: tuple[JointRun, ...], words: Words) -> NDArray[np.uint64]:
    """A number for the joints of each piece (n,)."""
    total = np.zeros(len(words), np.uint64)
    folded = words[:, 0] ^ words[:, 1]
    for run in joints:
        made = f"{run.kind.name} {run.fittings.shape[1] if run.fittings.size else 0} {run.welds}"
        kind = np.frombuffer(sha1(made.encode()).digest()[:8], np.int64)[0]
        members = folded[run.pieces].sum(axis=1, dtype=np.uint64)
        for column, pieces in enumerate(run.pieces.T):
            rows = np.column_stack(
                [np.full(len(pieces), kind), members.view(np.int64), np.full(len(pieces), column == 0)]
            )
            np.add.at(total, pieces, mixed(rows.astype(np.int64)))
    return total
