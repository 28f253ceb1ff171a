"""What pieces have to do with one another: joints as connections, bracing and secondary steel as groups."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

import numpy as np

from shedbim.errors import ModelError
from shedbim.model.joints import JointKind, JointRun
from shedbim.model.roles import Role
from shedbim.model.shed import Shed
from shedbim.writers.ifc.elements import Numbering
from shedbim.writers.ifc.stepfile import StepFile
from shedbim.writers.ifc.text import label, listed, quoted

__all__ = ["GROUPS", "write_groups", "write_joints"]

#: Roles that are looked at together, by the name of their group.
GROUPS: Mapping[str, tuple[Role, ...]] = {
    "roof bracing": (Role.ROOF_BRACE,),
    "wall bracing": (Role.WALL_BRACE,),
    "struts and ties": (Role.STRUT, Role.EAVES_STRUT, Role.VALLEY_STRUT, Role.TIE),
    "secondary steel": (Role.PURLIN, Role.SIDE_RAIL, Role.GABLE_RAIL, Role.SAG_BAR),
}

#: Parts the keys of a relation's stable name; no key holds it.
_BETWEEN = "\x1f"


def write_groups(step: StepFile, shed: Shed, numbering: Numbering) -> None:
    """Write the groups that have any pieces."""
    for name, roles in GROUPS.items():
        parts = [i for i, part in enumerate(shed.parts) if part.role in roles]
        members = [numbering.references[piece] for part in parts for piece in numbering.of_part(part)]
        if not members:
            continue
        group = step.rooted("IfcGroup", f"group/{name}", Name=label(name))
        step.rooted(
            "IfcRelAssignsToGroup", f"grouped/{name}", RelatedObjects=listed(members), RelatingGroup=group
        )


def write_joints(step: StepFile, shed: Shed, numbering: Numbering, *, shop_joints: bool) -> None:
    """Write each joint as connections from the piece that carries to every other one.

    Args:
        step: the file.
        shed: the building.
        numbering: its pieces' entities.
        shop_joints: whether to write those too whose pieces all are in one assembly made in the shop.

    Raises:
        ModelError: when a joint names a piece that is not there, or one piece twice.
    """
    seen: dict[str, int] = {}
    for run in shed.joints:
        if run.kind is not JointKind.FREE:
            _write_run(step, shed, numbering, run, _wanted(shed, run, shop_joints), seen)


def _wanted(shed: Shed, run: JointRun, shop_joints: bool) -> Sequence[Sequence[int]]:
    """Give the rows of a run (m, k) that are to be written."""
    rows = run.pieces
    ordered = np.sort(rows, axis=1)
    if rows.size and (rows.min() < 0 or rows.max() >= len(shed.pieces)):
        raise ModelError(f"a {run.kind.word} names a piece that is not there")
    if (ordered[:, 1:] == ordered[:, :-1]).any():
        raise ModelError(f"a {run.kind.word} names one piece twice")
    if not shop_joints and rows.size:
        owner = shed.pieces.assembly[rows]
        made = np.array([kind.made == "shop" for kind in shed.assembly_types] or [False])
        together = (owner == owner[:, :1]).all(axis=1) & (owner[:, 0] >= 0)
        types = shed.assemblies.type[owner[together, 0]] if together.any() else np.zeros(0, np.int64)
        together[together] = made[types]
        rows = rows[~together]
    result: list[list[int]] = rows.tolist()
    return result


def _write_run(
    step: StepFile,
    shed: Shed,
    numbering: Numbering,
    run: JointRun,
    rows: Sequence[Sequence[int]],
    seen: dict[str, int],
) -> None:
    """Write the connections of one run; ``seen`` counts the stable names already given."""
    keys, references = shed.pieces.keys, numbering.references
    pairs = [(row[0], other) for row in rows for other in row[1:]]
    names = [f"{run.kind.name}/{keys[first]}{_BETWEEN}{keys[other]}" for first, other in pairs]
    for i, name in enumerate(names):  # two pieces may meet twice
        count = seen.get(name, 0)
        seen[name] = count + 1
        if count:
            names[i] = f"{name}{_BETWEEN}{count}"
    line = step.template(
        "IfcRelConnectsElements",
        {"GlobalId": "'%s'", "RelatingElement": "%s", "RelatedElement": "%s"},
        Name=quoted(run.kind.word),
    )
    number = step.reserve(len(pairs))
    ids = step.ids(names)
    step.write(
        line % (number + at, ids[at], references[first], references[other])
        for at, (first, other) in enumerate(pairs)
    )
