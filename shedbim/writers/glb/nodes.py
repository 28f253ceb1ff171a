"""The tree of nodes as JSON texts: a root, a group for each role, assemblies, pieces.

Piece and assembly nodes are named by their keys. A piece hangs under its assembly, an assembly under the one
that holds it, a loose piece under the group of its role, and all the rest under the root.
"""

from __future__ import annotations

from collections.abc import Iterator
from itertools import chain, islice, repeat

import numpy as np
from numpy.typing import NDArray

from shedbim.geometry.placements import Placements, relative
from shedbim.geometry.quaternions import quaternions
from shedbim.geometry.rows import distinct_rows
from shedbim.model.roles import Role
from shedbim.model.shed import Shed
from shedbim.writers.described import described
from shedbim.writers.glb.text import compact, decimals, strings

__all__ = ["node_texts"]

Integers = NDArray[np.int64]

_PER_METRE = 100_000  # 0.01 mm
_PER_UNIT = 10**9  # turns a bar of 20 m by 0.00002 mm at most
#: Added before rounding down: takes the boundary a little off the halves, where plain numbers lie.
_HALF = 0.501
#: Nodes of one text: bounds memory.
_CHUNK = 4000

#: A quarter turn about x that takes z, which is up in the building, to y, which is up in the standard.
_UPRIGHT = "[-0.7071067811865476,0,0,0.7071067811865476]"


def node_texts(shed: Shed, extras: str) -> Iterator[str]:
    """Give the nodes, separated by commas, as texts that follow one another; the root is node 0.

    Args:
        shed: the building.
        extras: text of the extras of the root.
    """
    pieces, groups = shed.pieces, shed.assemblies
    roles = _loose_roles(shed)
    # Nodes stand in this order: the root, the roles, the assemblies, the pieces.
    first_assembly = 1 + len(roles)
    first_piece = first_assembly + len(groups)
    part_role = np.array([roles.get(part.role, 0) for part in shed.parts], np.int64)
    owner = np.concatenate(
        [
            np.zeros(len(roles), np.int64),
            np.where(groups.parent < 0, 0, first_assembly + groups.parent),
            np.where(pieces.assembly < 0, part_role[pieces.part], first_assembly + pieces.assembly),
        ]
    )
    children = _children(owner, first_piece)
    yield (f'{{"name":{compact(shed.project.name)},"rotation":{_UPRIGHT}{children[0]},"extras":{extras}}}')
    for role, number in roles.items():
        yield f',{{"name":{compact(role.word)}{children[number]}}}'
    kinds = [
        f',"extras":{compact({"mark": kind.mark, "kind": kind.kind, "made": kind.made})}}}'
        for kind in shed.assembly_types
    ]
    tails = [
        below + kinds[kind]
        for below, kind in zip(children[first_assembly:], groups.type.tolist(), strict=True)
    ]
    yield from _placed(groups.keys, relative(groups.placement, groups.placement, groups.parent), tails)
    kinds = [
        f',"mesh":{index},"extras":'
        + compact({"mark": part.mark, "section": described(part.shape), "role": part.role.word})
        + "}"
        for index, part in enumerate(shed.parts)
    ]
    tails = [kinds[part] for part in pieces.part.tolist()]
    yield from _placed(pieces.keys, relative(groups.placement, pieces.placement, pieces.assembly), tails)


def _loose_roles(shed: Shed) -> dict[Role, int]:
    """The roles of the pieces that are in no assembly, in the order of the roles, and the node of each."""
    loose = {shed.parts[part].role for part in np.unique(shed.pieces.part[shed.pieces.assembly < 0]).tolist()}
    return {role: number for number, role in enumerate((each for each in Role if each in loose), start=1)}


def _children(owner: Integers, count: int) -> list[str]:
    """The property ``children`` of each of the first ``count`` nodes, empty for none.

    Args:
        owner: (n,) the node above each node from 1 on.
        count: how many nodes there are that may have children; they come first.
    """
    order = np.argsort(owner, kind="stable")
    ends = np.cumsum(np.bincount(owner, minlength=count)).tolist()
    numbers = [str(number) for number in (order + 1).tolist()]
    spans = zip([0, *ends], ends, strict=False)
    return [f',"children":[{",".join(numbers[start:end])}]' if end > start else "" for start, end in spans]


def _placed(names: tuple[str, ...], placements: Placements, tails: list[str]) -> Iterator[str]:
    """Texts of nodes with a name, a placement (n, 3, 4) in mm and what follows, each with a comma before it."""
    origins = np.floor(placements[:, :, 3] * (_PER_METRE / 1000) + _HALF).astype(np.int64)
    turns = np.floor(quaternions(placements) * _PER_UNIT + _HALF).astype(np.int64)
    first, kind = distinct_rows(turns)
    rotations = [
        f',"rotation":[{",".join(row)}]' if row != ("0", "0", "0", "1") else ""
        for row in zip(*(decimals(column, _PER_UNIT) for column in turns[first].T), strict=True)
    ]
    x, y, z = (decimals(column, _PER_METRE) for column in origins.T)
    rows = zip(  # the constant texts never end
        repeat(',{"name":'),
        strings(names),
        [rotations[which] for which in kind.tolist()],
        repeat(',"translation":['),
        x,
        repeat(","),
        y,
        repeat(","),
        z,
        repeat("]"),
        tails,
        strict=False,
    )
    while text := "".join(chain.from_iterable(islice(rows, _CHUNK))):
        yield text
