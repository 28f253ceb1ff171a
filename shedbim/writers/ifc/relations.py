"""What pieces have to do with one another: joints as connections, bracing and secondary steel as groups."""

from __future__ import annotations

from collections import Counter
from collections.abc import Mapping, Sequence

import numpy as np
from numpy.typing import NDArray

from shedbim.errors import ModelError
from shedbim.model.joints import JointKind, JointRun
from shedbim.model.roles import Role
from shedbim.model.shed import Shed
from shedbim.writers.ifc.elements import Numbering
from shedbim.writers.ifc.stepfile import BETWEEN, SLOT, StepFile, numbered
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
    for kind, pairs in found.items():
        _write_pairs(step, shed, numbering, kind, *np.concatenate(pairs, axis=1).tolist())


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


def _write_pairs(
    step: StepFile,
    shed: Shed,
    numbering: Numbering,
    kind: JointKind,
    *pairs: Sequence[int],
) -> None:
    """Write the connections of one kind; ``pairs`` are the pieces that carry, and those they carry."""
    keys, references = shed.pieces.keys, numbering.references
    of_kind = kind.name
    names = [f"{of_kind}/{keys[one]}{BETWEEN}{keys[other]}" for one, other in zip(*pairs, strict=True)]
    if len(set(names)) < len(names):
        names = _told_apart(names)
    template = step.template(
        "IfcRelConnectsElements",
        "RelatingElement",
        "RelatedElement",
        GlobalId=f"'{SLOT}'",
        Name=quoted(kind.word),
    )
    numbers = numbered(step.reserve(len(names)), len(names))
    step.fill(template, numbers, step.ids(names), *([references[piece] for piece in side] for side in pairs))


def _told_apart(names: Sequence[str]) -> list[str]:
    """Give the names with a count behind those that came before: two pieces may meet twice."""
    met: Counter[str] = Counter()
    result = []
    for name in names:
        result.append(f"{name}{BETWEEN}{met[name]}" if met[name] else name)
        met[name] += 1
    return result
