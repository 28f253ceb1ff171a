"""Joints as connections: from the piece that carries to every other one, with what realizes them."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from shedbim.model.joints import JointKind, JointRun
from shedbim.model.shed import Shed
from shedbim.writers.ifc.elements import Numbering
from shedbim.writers.ifc.meeting_ids import meeting_ids
from shedbim.writers.ifc.stepfile import SLOT, StepFile, numbered
from shedbim.writers.ifc.text import quoted
from shedbim.writers.ifc.welds import WrittenWelds

__all__ = ["write_joints"]

Integers = NDArray[np.int64]


@dataclass(frozen=True, eq=False)
class _Pairs:
    """Connections of one kind: the pieces that carry, those they carry, and lists of what realizes each."""

    one: list[Integers] = field(default_factory=list)
    other: list[Integers] = field(default_factory=list)
    realized: list[str] = field(default_factory=list)


def write_joints(
    step: StepFile, shed: Shed, numbering: Numbering, welds: WrittenWelds, *, shop_joints: bool
) -> None:
    """Write each joint as connections from the piece that carries to every other one; free ends are none.

    Where one member stands alone, it is connected to the joint's first fitting: a column to its base plate.
    The fittings, fasteners and welds of a joint realize each of its connections.

    Args:
        step: the file.
        shed: the building.
        numbering: its pieces' entities.
        welds: those of its joints.
        shop_joints: whether to write those too that have nothing to realize them and whose pieces all are
            in one assembly made in the shop.
    """
    found: dict[JointKind, _Pairs] = {}
    for run, welded in zip(shed.joints, welds.of_run, strict=True):
        pairs = found.setdefault(run.kind, _Pairs())
        if run.fittings.size or welded.size:
            _realized(run, welded, numbering, pairs)
        else:
            rows = run.pieces if shop_joints else run.pieces[~_in_one_shop_assembly(shed, run.pieces)]
            _connect(rows, [""] * len(rows), pairs)
    for kind, pairs in found.items():
        if pairs.realized:
            one, other = np.concatenate(pairs.one), np.concatenate(pairs.other)
            name = f"connects/{kind.name}"
            ids = meeting_ids(shed.project.id, name, numbering.words, one, other)
            _write_pairs(step, numbering, kind, ids, pairs.realized, one, other)


def _realized(run: JointRun, welded: Integers, numbering: Numbering, pairs: _Pairs) -> None:
    """Add the connections of joints that fittings or welds (m, w) realize."""
    pieces, fittings = run.pieces, run.fittings
    if not fittings.size:
        fittings = np.zeros((len(pieces), 0), np.int64)
    if pieces.shape[1] == 1 and fittings.shape[1]:
        pieces, fittings = np.hstack([pieces, fittings[:, :1]]), fittings[:, 1:]
    references = numbering.references
    realizing = [
        ",".join([*(references[piece] for piece in added), *(f"#{number}" for number in numbers)])
        for added, numbers in zip(fittings.tolist(), welded.tolist(), strict=True)
    ]
    _connect(pieces, realizing, pairs)


def _connect(pieces: Integers, realizing: Sequence[str], pairs: _Pairs) -> None:
    """Add the connections of the first of each row (m, k) with all others, each realized as its row says."""
    others = pieces.shape[1] - 1
    pairs.one.append(np.repeat(pieces[:, 0], others))
    pairs.other.append(pieces[:, 1:].reshape(-1))
    pairs.realized.extend(text for text in realizing for _ in range(others))


def _in_one_shop_assembly(shed: Shed, rows: Integers) -> NDArray[np.bool_]:
    """Tell of joints (m, k) whether their pieces all are in one assembly made in the shop (m,)."""
    # The last of these is where index -1 leads: a loose piece is in none.
    made = [shed.assembly_types[type_].made == "shop" for type_ in shed.assemblies.type.tolist()] + [False]
    owners = shed.pieces.assembly[rows]
    together: NDArray[np.bool_] = (owners == owners[:, :1]).all(axis=1)
    in_shop: NDArray[np.bool_] = together & np.array(made)[owners[:, 0]]
    return in_shop


def _write_pairs(
    step: StepFile,
    numbering: Numbering,
    kind: JointKind,
    ids: Sequence[str],
    realized: Sequence[str],
    *sides: Integers,
) -> None:
    """Write the connections of one kind; ``sides`` are the pieces that carry, and those they carry."""
    references = numbering.references
    columns = [ids, *([references[piece] for piece in side.tolist()] for side in sides), realized]
    rows = list(zip(*columns, strict=True))
    ends = ("RelatingElement", "RelatedElement")
    shared = {"GlobalId": f"'{SLOT}'", "Name": quoted(kind.word)}
    bare = [row[:-1] for row in rows if not row[-1]]
    _fill(step, step.template("IfcRelConnectsElements", *ends, **shared), bare)
    more = {"RealizingElements": f"({SLOT})", "ConnectionType": quoted(kind.word)}
    full = step.template("IfcRelConnectsWithRealizingElements", *ends, **shared, **more)
    _fill(step, full, [row for row in rows if row[-1]])


def _fill(step: StepFile, template: str, rows: Sequence[tuple[str, ...]]) -> None:
    """Write a template once for each row of what goes behind its own number."""
    if rows:
        step.fill(template, numbered(step.reserve(len(rows)), len(rows)), *zip(*rows, strict=True))
