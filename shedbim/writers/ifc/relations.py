"""What pieces have to do with one another: joints as connections, bracing and secondary steel as groups."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

import numpy as np
from numpy.typing import NDArray

from shedbim.errors import ModelError
from shedbim.model.identity import Words, pair_ids
from shedbim.model.joints import JointKind, JointRun
from shedbim.model.roles import Role
from shedbim.model.shed import Shed
from shedbim.writers.ifc.elements import Numbering
from shedbim.writers.ifc.stepfile import SLOT, StepFile, numbered
from shedbim.writers.ifc.text import label, listed, quoted

__all__ = ["GROUPS", "write_groups", "write_joints"]

Integers = NDArray[np.int64]

#: Roles that are looked at together, by the name of their group.
GROUPS: Mapping[str, tuple[Role, ...]] = {
    "roof bracing": (Role.ROOF_BRACE,),
    "wall bracing": (Role.WALL_BRACE,),
    "struts and ties": (Role.STRUT, Role.EAVES_STRUT, Role.VALLEY_STRUT, Role.TIE),
    "secondary steel": (Role.PURLIN, Role.SIDE_RAIL, Role.GABLE_RAIL, Role.SAG_BAR),
}


def write_groups(step: StepFile, shed: Shed, numbering: Numbering) -> None:
    """Write the groups that have any pieces."""
    for name, roles in GROUPS.items():
        parts = [i for i, part in enumerate(shed.parts) if part.role in roles]
        members = [reference for part in parts for reference in numbering.of_part(part)]
        if not members:
            continue
        group = step.rooted("IfcGroup", f"group/{name}", Name=label(name))
        step.rooted(
            "IfcRelAssignsToGroup", f"grouped/{name}", RelatedObjects=listed(members), RelatingGroup=group
        )


def write_joints(step: StepFile, shed: Shed, numbering: Numbering, *, shop_joints: bool) -> None:
    """Write each joint as connections from the piece that carries to every other one; free ends are none.

    Args:
        step: the file.
        shed: the building.
        numbering: its pieces' entities.
        shop_joints: whether to write those too whose pieces all are in one assembly made in the shop.

    Raises:
        ModelError: when a joint names a piece that is not there, or one piece twice.
    """
    found: dict[JointKind, list[Integers]] = {}
    for run in shed.joints:
        if run.kind is JointKind.FREE or not run.pieces.size:
            continue
        _check(run, len(shed.pieces))
        rows = run.pieces if shop_joints else run.pieces[~_in_one_shop_assembly(shed, run.pieces)]
        carrying = np.repeat(rows[:, 0], rows.shape[1] - 1)
        found.setdefault(run.kind, []).append(np.stack([carrying, rows[:, 1:].reshape(-1)]))
    words = numbering.words
    for kind, pairs in found.items():
        one, other = np.concatenate(pairs, axis=1)
        _write_pairs(step, numbering, kind, _ids(shed.project.id, kind, words, one, other), one, other)


def _check(run: JointRun, count: int) -> None:
    """Refuse joints of other than ``count`` pieces, and of a piece with itself."""
    if run.pieces.min() < 0 or run.pieces.max() >= count:
        raise ModelError(f"a {run.kind.word} names a piece that is not there")
    ordered = np.sort(run.pieces, axis=1)
    if (ordered[:, 1:] == ordered[:, :-1]).any():
        raise ModelError(f"a {run.kind.word} names one piece twice")


def _in_one_shop_assembly(shed: Shed, rows: Integers) -> NDArray[np.bool_]:
    """Tell of joints (m, k) whether their pieces all are in one assembly made in the shop (m,)."""
    # The last of these is where index -1 leads: a loose piece is in none.
    made = [shed.assembly_types[type_].made == "shop" for type_ in shed.assemblies.type.tolist()] + [False]
    owners = shed.pieces.assembly[rows]
    together: NDArray[np.bool_] = (owners == owners[:, :1]).all(axis=1)
    in_shop: NDArray[np.bool_] = together & np.array(made)[owners[:, 0]]
    return in_shop


def _ids(project_id: str, kind: JointKind, words: Words, one: Integers, other: Integers) -> list[str]:
    """Give the GlobalIds of the connections of one kind; where two pieces meet twice, each has its own."""
    names, counts = np.unique(_times_met(one, other), return_inverse=True)
    ids = np.empty(len(one), "U22")
    for number, times in enumerate(names.tolist()):
        rows = counts == number
        name = f"connects/{kind.name}/{times}"
        ids[rows] = pair_ids(project_id, name, words[one[rows]], words[other[rows]])
    return [str(each) for each in ids.tolist()]


def _times_met(one: Integers, other: Integers) -> Integers:
    """Give for each pair how often the same two have met before it (m,)."""
    order = np.lexsort((other, one))
    sorted_one, sorted_other = one[order], other[order]
    starts = np.ones(len(one), bool)
    starts[1:] = (sorted_one[1:] != sorted_one[:-1]) | (sorted_other[1:] != sorted_other[:-1])
    places = np.arange(len(one))
    before = np.empty_like(order)
    before[order] = places - np.maximum.accumulate(np.where(starts, places, 0))
    return before


def _write_pairs(
    step: StepFile,
    numbering: Numbering,
    kind: JointKind,
    ids: Sequence[str],
    *sides: Integers,
) -> None:
    """Write the connections of one kind; ``sides`` are the pieces that carry, and those they carry."""
    template = step.template(
        "IfcRelConnectsElements",
        "RelatingElement",
        "RelatedElement",
        GlobalId=f"'{SLOT}'",
        Name=quoted(kind.word),
    )
    numbers = numbered(step.reserve(len(ids)), len(ids))
    references = numbering.references
    step.fill(template, numbers, ids, *([references[piece] for piece in side.tolist()] for side in sides))
