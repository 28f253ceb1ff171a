"""Welds as fasteners without a shape: an element for each weld of each joint, a type for all that are alike."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from shedbim.errors import ModelError
from shedbim.fasteners.welds import leg, symbol
from shedbim.model.joints import JointKind, JointRun
from shedbim.model.shed import Shed
from shedbim.model.welds import Weld
from shedbim.writers.ifc.elements import Numbering
from shedbim.writers.ifc.meeting_ids import meeting_ids
from shedbim.writers.ifc.properties import count, property_set, relate_set, size, word
from shedbim.writers.ifc.stepfile import SLOT, StepFile, numbered
from shedbim.writers.ifc.text import FALSE, TRUE, enum, label, listed, quoted, typed

__all__ = ["WrittenWelds", "joined_columns", "write_welds"]

Integers = NDArray[np.int64]

#: Names of the standard's set in each schema that has it: throat, leg, and length of a run.
_STANDARD = {
    "IFC4": {"throat": "a", "leg": "z", "length": "l", "runs": "n"},
    "IFC4X3_ADD2": {
        "throat": "NominalThroatThickness",
        "leg": "WeldLegLength",
        "length": "WeldElementLength",
        "runs": "NumberOfWeldElements",
    },
}


@dataclass(frozen=True, eq=False)
class WrittenWelds:
    """Welds as entities.

    Attributes:
        of_run: for each run of joints (m, w) the numbers of the entities of its welds.
        references: of all n.
        owner: (n,) the innermost assembly that holds both things a weld joins, -1 for none.
    """

    of_run: list[Integers]
    references: list[str]
    owner: Integers


def joined_columns(run: JointRun, count: int) -> Integers:
    """Give the pieces (m, k + f) of a run that its welds count by: members, then fittings.

    Args:
        run: joints.
        count: number of pieces there are.

    Raises:
        ModelError: when a joint names a piece that is not there, or one piece twice.
    """
    pieces = np.hstack([run.pieces, run.fittings]) if run.fittings.size else run.pieces
    if pieces.size:
        if pieces.min() < 0 or pieces.max() >= count:
            raise ModelError(f"a {run.kind.word} names a piece that is not there")
        ordered = np.sort(pieces, axis=1)
        if (ordered[:, 1:] == ordered[:, :-1]).any():
            raise ModelError(f"a {run.kind.word} names one piece twice")
    return pieces


def write_welds(step: StepFile, shed: Shed, numbering: Numbering) -> WrittenWelds:
    """Write the welds of all joints.

    Raises:
        ModelError: when a weld joins what its joint does not have; also as ``joined_columns``.
    """
    kinds = list(JointKind)
    known: dict[Weld, int] = {}
    pairs, sorts, joints = [np.zeros((0, 2), np.int64)], [np.zeros(0, np.int64)], [np.zeros(0, np.int64)]
    for run in shed.joints:
        columns = joined_columns(run, len(shed.pieces))
        between = np.array([weld.between for weld in run.welds], np.int64).reshape(-1, 2)
        if between.size and not 0 <= between.min() <= between.max() < columns.shape[1]:
            raise ModelError(f"a weld of a {run.kind.word} joins what the joint does not have")
        pairs.append(columns[:, between].reshape(-1, 2))
        numbers = [known.setdefault(_alike(weld), len(known)) for weld in run.welds]
        sorts.append(np.tile(np.array(numbers, np.int64), len(columns)))
        joints.append(np.full(len(pairs[-1]), kinds.index(run.kind)))
    (one, other), sort, kind = np.concatenate(pairs).T, np.concatenate(sorts), np.concatenate(joints)
    ids = np.empty(len(one), "U22")
    for number in np.unique(kind).tolist():
        rows = kind == number
        name = f"weld/{kinds[number].name}"
        ids[rows] = meeting_ids(shed.project.id, name, numbering.words, one[rows], other[rows])
    # Alike welds follow one another: a type then refers to one run of numbers.
    order = np.argsort(sort, kind="stable")
    first = step.reserve(len(order))
    entity = np.empty_like(order)
    entity[order] = first + np.arange(len(order))
    ends = np.cumsum(np.bincount(sort, minlength=len(known))).tolist()
    listing = ids[order].tolist()
    for weld, start, end in zip(known, [0, *ends], ends, strict=False):
        _write_alike(step, weld, first + start, listing[start:end])
    references = [f"#{number}" for number in entity.tolist()]
    splits = np.cumsum([len(each) for each in pairs])[:-1]
    of_run = [
        numbers.reshape(-1, len(run.welds)) if run.welds else np.zeros((len(run.pieces), 0), np.int64)
        for numbers, run in zip(np.split(entity, splits)[1:], shed.joints, strict=True)
    ]
    return WrittenWelds(of_run, references, _innermost(shed, one, other))


def _alike(weld: Weld) -> Weld:
    """What a weld shares with others, wherever they are: all but what it joins, its length to whole mm."""
    return replace(weld, between=(0, 1), length=float(round(weld.length)))


def _innermost(shed: Shed, one: Integers, other: Integers) -> Integers:
    """Give the innermost assembly (n,) that holds both pieces of each pair, -1 for none."""
    # The last row is where -1, no assembly, leads.
    parent = np.append(shed.assemblies.parent, -1)
    depth = np.zeros(len(parent), np.int64)
    for index, above in enumerate(shed.assemblies.parent.tolist()):  # parents come first
        depth[index] = 1 if above < 0 else depth[above] + 1
    left, right = shed.pieces.assembly[one], shed.pieces.assembly[other]
    while (apart := left != right).any():
        deeper = depth[left] >= depth[right]
        left, right = (
            np.where(apart & deeper, parent[left], left),
            np.where(apart & ~deeper, parent[right], right),
        )
    return left


def _write_alike(step: StepFile, weld: Weld, first: int, ids: Sequence[str]) -> None:
    """Write the type of alike welds, and the welds as entities from number ``first`` on."""
    name, of_old = symbol(weld), step.schema.is_first
    template = step.template(
        "IfcFastener",
        GlobalId=f"'{SLOT}'",
        Name=label(name),
        **({"ObjectType": quoted("WELD")} if of_old else {}),
    )
    numbers = numbered(first, len(ids))
    step.fill(template, numbers, ids)
    references = [f"#{number}" for number in numbers]
    site, round_ = ("site" if weld.site else "shop"), ("/all round" if weld.all_round else "")
    scope = f"{weld.form}/{weld.throat:g}/{weld.length:g}/{site}{round_}"
    own = property_set(step, "Shedbim_Weld", scope, _own_values(weld, name))
    sets = [own] if of_old else [_standard_set(step, weld, scope), own]
    kind = step.rooted(
        "IfcFastenerType",
        f"weld type/{scope}",
        Name=label(name),
        **({"ElementType": quoted("WELD")} if of_old else {"PredefinedType": enum("WELD")}),
        **({} if of_old else {"HasPropertySets": listed(sets)}),
    )
    if of_old:
        relate_set(step, own, f"weld/{scope}", references)
    step.rooted(
        "IfcRelDefinesByType",
        f"weld typed/{scope}",
        RelatedObjects=listed(references),
        RelatingType=kind,
    )


def _own_values(weld: Weld, name: str) -> dict[str, str]:
    """What the program's own set says of a weld; butt welds have no leg."""
    values = {"Symbol": word(name), "Form": word(weld.form), "Throat": size(weld.throat)}
    if weld.form == "fillet":
        values["Leg"] = size(leg(weld.throat))
    values |= {"Length": size(weld.length), "Made": word("site" if weld.site else "shop")}
    values["AllRound"] = typed("IfcBoolean", TRUE if weld.all_round else FALSE)
    return values


def _standard_set(step: StepFile, weld: Weld, scope: str) -> str:
    """Write the standard's set of a weld, as one unbroken run."""
    names = _STANDARD[step.schema.name]
    values = {"Type1": word(weld.form), names["throat"]: size(weld.throat)}
    if weld.form == "fillet":
        values[names["leg"]] = size(leg(weld.throat))
    values |= {names["length"]: size(weld.length), names["runs"]: count(1)}
    values["Intermittent"] = typed("IfcBoolean", FALSE)
    return property_set(step, "Pset_FastenerWeld", scope, values)
