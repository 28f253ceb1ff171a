"""What leaves the shop as one: pieces that shop welds join, and the site assemblies they stand in.

Glossary:
    group     an assembly that a kit names: a frame, a truss
    lot       pieces joined by shop welds, directly or over others
    content   what tells two assemblies apart: parts, and how they lie about the assembly's origin
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from shedbim.expand.connecting import Connected
from shedbim.expand.placing import Placed
from shedbim.geometry.mixing import mixed
from shedbim.geometry.placements import Placements, compose, translation
from shedbim.model.joints import JointRun
from shedbim.model.marks import AssemblyTemplate, PartGrouping, group_assemblies
from shedbim.model.roles import Role
from shedbim.model.shed import Assemblies, AssemblyType

__all__ = ["Shop", "put_together"]

Integers = NDArray[np.int64]
Floats = NDArray[np.float64]

#: Pieces of equal assemblies lie alike to a tenth of this many mm; what falls on either side of a step is told
#: apart here and brought together again when templates are compared.
_STEPS = 10.0


@dataclass(frozen=True, eq=False)
class Shop:
    """The assemblies of a building, and for each piece the one it is in, -1 for none (n,)."""

    types: tuple[AssemblyType, ...]
    assemblies: Assemblies
    of_piece: Integers


@dataclass(frozen=True, eq=False)
class _Lots:
    """Shop assemblies before they are sorted.

    Attributes:
        of_piece: (n,) the lot of each piece, -1 for none.
        main: (l,) the piece a lot is named after: its first member of the first role.
        keys, kinds: of each.
        group: (l,) the kit's group that the main piece stands in, above what the kit calls made in the shop.
    """

    of_piece: Integers
    main: Integers
    keys: list[str]
    kinds: list[str]
    group: Integers


def put_together(placed: Placed, connected: Connected, grouping: PartGrouping) -> Shop:
    """Give all assemblies: those the shop welds, and those the kits name for the site, which hold them."""
    lots = _lots(placed, connected)
    item, placement = connected.item, connected.placement
    frame = translation(placement[lots.main][:, :, 3])
    looks = _looks(grouping, item, placement)
    lot_template, lot_first = _alike(
        lots.of_piece, frame[:, :, 3], looks, placement[:, :, 3], _tags(lots.kinds)
    )
    templates = [
        AssemblyTemplate(lots.kinds[lot], "shop", _members(lots.of_piece, lot, item, placement, frame[lot]))
        for lot in lot_first
    ]
    # Site groups hold lots and the loose members of their kits.
    site = np.array([g for g, (_, _, made) in enumerate(placed.groups) if made == "site"], np.int64)
    rank = np.full(len(placed.groups) + 1, -1)  # the last row is where -1, no group, leads
    rank[site] = np.arange(len(site))
    above = np.full(len(connected.keys), -1)
    above[: connected.members] = rank[_site_groups(placed)[placed.group]]
    loose = np.where(lots.of_piece < 0, above, -1)
    lot_above = above[lots.main]
    site_frame = translation(_origins(above, placement, len(site)))
    things = np.concatenate([loose, lot_above])
    marks = np.concatenate([looks, mixed(np.column_stack([lot_template, np.full(len(lot_template), -7)]))])
    places = np.concatenate([placement[:, :, 3], frame[:, :, 3]])
    kinds = [placed.groups[g][1] for g in site]
    site_template, site_first = _alike(things, site_frame[:, :, 3], marks, places, _tags(kinds))
    for number in site_first:
        back = translation(-site_frame[number][:, 3])
        children = tuple(
            (int(lot_template[lot]), compose(back, frame[lot])) for lot in np.flatnonzero(lot_above == number)
        )
        members = _members(loose, number, item, placement, site_frame[number])
        templates.append(AssemblyTemplate(kinds[number], "site", members, children))
    types = group_assemblies(templates, grouping)
    template = np.concatenate([site_template + len(lot_first), lot_template]).astype(np.int64)
    where = np.concatenate([site_frame, frame])
    assemblies = Assemblies(
        (*(placed.groups[g][0] for g in site), *lots.keys),
        types.type_of[template],
        compose(where, types.motion[template]),
        np.concatenate([np.full(len(site), -1), lot_above]),
    )
    of_piece = np.where(lots.of_piece >= 0, lots.of_piece + len(site), loose)
    return Shop(types.types, assemblies, of_piece)


def _site_groups(placed: Placed) -> Integers:
    """For each group the site assembly it is or stands in; the row after the last is -1, for no group."""
    found: list[int] = []
    for number, (_, _, made) in enumerate(placed.groups):
        found.append(number if made == "site" or placed.parent[number] < 0 else found[placed.parent[number]])
    return np.array([*found, -1], np.int64)


def _lots(placed: Placed, connected: Connected) -> _Lots:
    """Find what shop welds join."""
    label = _joined(len(connected.keys), _welded(connected.joints))
    _, lot, sizes = np.unique(label, return_inverse=True, return_counts=True)
    number = np.where(sizes > 1, np.cumsum(sizes > 1) - 1, -1)
    of_piece = number[lot.reshape(-1)]
    count = int((sizes > 1).sum())
    roles = list(Role)
    role = np.array([roles.index(each.role) for each in connected.stock])[connected.item[: connected.members]]
    member_lot = of_piece[: connected.members]
    order = np.lexsort((np.arange(connected.members), role, member_lot))
    order = order[member_lot[order] >= 0]
    _, first = np.unique(member_lot[order], return_index=True)
    main = order[first]
    group = placed.group[main] if count else np.zeros(0, np.int64)
    keys, kinds = [], []
    met: dict[int, int] = {}
    shop = [made == "shop" for _, _, made in placed.groups]
    shared = np.bincount(group[group >= 0], minlength=len(placed.groups)) if count else np.zeros(0)
    for piece, owner in zip(main.tolist(), group.tolist(), strict=True):
        if owner >= 0 and shop[owner]:
            key, kind, _ = placed.groups[owner]
            met[owner] = met.get(owner, 0) + 1
            keys.append(key if shared[owner] == 1 else f"{key}/{met[owner]}")
            kinds.append(kind)
        else:
            keys.append(f"{connected.keys[piece]}/shop")
            kinds.append(connected.stock[int(connected.item[piece])].role.word)
    return _Lots(of_piece, main, keys, kinds, group)


def _welded(joints: Sequence[JointRun]) -> Integers:
    """Give the pairs (e, 2) of pieces that shop welds join."""
    pairs = [np.zeros((0, 2), np.int64)]
    for run in joints:
        columns = np.hstack([run.pieces, run.fittings]) if run.welds else run.pieces
        pairs.extend(columns[:, list(weld.between)] for weld in run.welds if not weld.site)
    return np.concatenate(pairs)


def _joined(count: int, pairs: Integers) -> Integers:
    """Give each of ``count`` things the least number among all that ``pairs`` (e, 2) join it to."""
    label = np.arange(count)
    one, other = pairs.T
    while True:
        least = np.minimum(label[one], label[other])
        before = label.copy()
        np.minimum.at(label, one, least)
        np.minimum.at(label, other, least)
        label = label[label]
        if np.array_equal(label, before):
            return label


def _looks(grouping: PartGrouping, item: Integers, placement: Placements) -> NDArray[np.uint64]:
    """Give each piece a number that says which part it is and how it is turned (n,)."""
    turned = compose(placement, grouping.motion[item])
    rows = np.column_stack([grouping.part_of[item], np.rint(turned[:, :, :3].reshape(-1, 9) * 1e4)])
    return mixed(rows.astype(np.int64))


def _tags(kinds: Sequence[str]) -> Integers:
    """Give each kind a number."""
    known = {kind: i for i, kind in enumerate(dict.fromkeys(kinds))}
    return np.array([known[kind] for kind in kinds], np.int64)


def _alike(
    owner: Integers, origin: Floats, looks: NDArray[np.uint64], place: Floats, tags: Integers
) -> tuple[Integers, list[int]]:
    """Give for each of g assemblies the number of its content (g,), and the first assembly of each content.

    Args:
        owner: (n,) the assembly of each thing, -1 for none.
        origin: (g, 3) of the assemblies, mm.
        looks, place: (n,) what each thing is, (n, 3) where.
        tags: (g,) the kinds of the assemblies.
    """
    inside = np.flatnonzero(owner >= 0)
    mine = owner[inside]
    steps = np.rint((place[inside] - origin[mine]) * _STEPS).astype(np.int64)
    each = mixed(np.column_stack([looks[inside].view(np.int64), steps]))
    total = np.zeros(len(origin), np.uint64)
    np.add.at(total, mine, each)
    sizes = np.bincount(mine, minlength=len(origin))
    rows = mixed(np.column_stack([total.view(np.int64), sizes, tags]).astype(np.int64))
    _, first, content = np.unique(rows, return_index=True, return_inverse=True)
    order = np.argsort(first)
    rank = np.empty_like(order)
    rank[order] = np.arange(len(order))
    return rank[content.reshape(-1)], first[order].tolist()


def _members(
    owner: Integers, number: int, item: Integers, placement: Placements, frame: Placements
) -> tuple[tuple[int, Placements], ...]:
    """The stock and placement of what one assembly holds, in its own frame."""
    rows = np.flatnonzero(owner == number)
    local = compose(translation(-frame[:, 3]), placement[rows])
    return tuple((int(item[row]), at) for row, at in zip(rows.tolist(), local, strict=True))


def _origins(owner: Integers, placement: Placements, count: int) -> Floats:
    """The origin of the first piece of each of ``count`` owners (count, 3)."""
    origin = np.zeros((count, 3))
    rows = np.flatnonzero(owner >= 0)[::-1]
    origin[owner[rows]] = placement[rows][:, :, 3]
    return origin
