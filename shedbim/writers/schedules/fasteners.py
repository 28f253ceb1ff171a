"""The schedules of bolts, of anchors with their places, and of welds."""

from __future__ import annotations

from collections import Counter
from math import ceil

from shedbim.fasteners.fastener import Fastener
from shedbim.fasteners.welds import leg, symbol
from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.shed import Shed
from shedbim.model.welds import Weld
from shedbim.writers.schedules.table import Cell, Column, Table, Total

__all__ = ["anchors", "bolts", "welds"]

#: Bolts ordered beyond those counted, as a share: some are lost or spoiled on site (common practice: 2 to 5 %).
_SURPLUS = 0.05

_Row = tuple[Fastener, str]


def bolts(shed: Shed) -> Table:
    """Give bolts, anchors and nuts by assembly set: bolt, nuts and washers that are bought together.

    The quantity to order holds a surplus of 5 % and at least one of each.
    """
    columns = (
        Column("set"),
        Column("kind"),
        Column("finish"),
        Column("quantity", decimals=0, summed=True),
        Column("to order (5 % over)", decimals=0, summed=True),
        Column("nuts each", decimals=0),
        Column("washers each", decimals=0),
        Column("least grip", "mm", 1),
        Column("greatest grip", "mm", 1),
        Column("mass of one", "kg", 4),
        Column("mass total", "kg", 3, summed=True),
    )
    sets: dict[tuple[str, str, float, float, str, int, int, str], list[tuple[int, Fastener]]] = {}
    for fastener, finish, count in _groups(shed):
        key = (
            fastener.kind, fastener.grade, fastener.diameter, fastener.length,
            fastener.designation, fastener.nuts, sum(fastener.washers), finish,
        )  # fmt: skip
        sets.setdefault(key, []).append((count, fastener))
    rows: list[tuple[Cell, ...]] = []
    for (kind, _, _, _, name, nuts, washers, finish), found in sorted(sets.items()):
        quantity = sum(count for count, _ in found)
        mass = sum(count * BoltGroup(fastener, ((0.0, 0.0),)).mass for count, fastener in found)
        grips = [fastener.grip for _, fastener in found]
        to_order = max(ceil(quantity * (1 + _SURPLUS) - 1e-9), quantity + 1)
        rows.append((
            name, kind, finish, quantity, to_order, nuts, washers, min(grips), max(grips), mass / quantity, mass,
        ))  # fmt: skip
    return Table("Bolts", columns, tuple(rows), (Total("Total"),))


def _groups(shed: Shed) -> list[tuple[Fastener, str, int]]:
    """Fastener, finish and number of all its kind, part by part."""
    return [
        (part.shape.fastener, part.finish, part.shape.count * count)
        for part, count in zip(shed.parts, shed.quantities.tolist(), strict=True)
        if isinstance(part.shape, BoltGroup)
    ]


def anchors(shed: Shed) -> Table:
    """Give every anchor bolt with its place for setting out: building axes, top of the base plate, mm."""
    columns = (
        Column("key"),
        Column("number", decimals=0),
        Column("anchor"),
        Column("x", "mm", 1),
        Column("y", "mm", 1),
        Column("level", "mm", 1),
        Column("projection", "mm", 1),
        Column("length", "mm", 1),
    )
    rows: list[tuple[Cell, ...]] = []
    for key, index, place in zip(
        shed.pieces.keys, shed.pieces.part.tolist(), shed.pieces.placement, strict=True
    ):
        group = shed.parts[index].shape
        if not isinstance(group, BoltGroup) or group.fastener.kind != "anchor":
            continue
        top = -min(disc.start for disc in group.fastener.stack)
        for number, (x, y) in enumerate(group.points, start=1):
            at = place[:, :3] @ (x, y, 0.0) + place[:, 3]
            rows.append((
                key, number, group.fastener.designation, *(float(v) for v in at), top, group.fastener.length,
            ))  # fmt: skip
    return Table("Anchors", columns, tuple(rows))


def welds(shed: Shed) -> Table:
    """Give the welds by what they join and how: one row for equal welds."""
    columns = (
        Column("joint"),
        Column("one"),
        Column("other"),
        Column("form"),
        Column("throat", "mm", 1),
        Column("leg", "mm", 1),
        Column("made in"),
        Column("all round"),
        Column("symbol"),
        Column("quantity", decimals=0, summed=True),
        Column("length each", "mm", 0),
        Column("length total", "m", 2, summed=True),
    )
    counts: Counter[tuple[str, str, str, Weld]] = Counter()
    for run in shed.joints:
        if not run.welds or not len(run.pieces):
            continue
        first = [*run.pieces[0].tolist(), *(run.fittings[0].tolist() if run.fittings.size else ())]
        roles = [shed.parts[shed.pieces.part[piece]].role.word for piece in first]
        for weld in run.welds:
            one, other = (roles[column] for column in weld.between)
            same = Weld((0, 1), weld.form, weld.throat, float(round(weld.length)), weld.site, weld.all_round)
            counts[run.kind.word, one, other, same] += len(run.pieces)
    rows: list[tuple[Cell, ...]] = []
    for (joint, one, other, weld), count in sorted(counts.items(), key=lambda item: _order(*item[0])):
        is_fillet = weld.form == "fillet"
        rows.append((
            joint, one, other, weld.form, weld.throat, leg(weld.throat) if is_fillet else 0.0,
            "site" if weld.site else "shop", "yes" if weld.all_round else "no", symbol(weld), count,
            weld.length, count * weld.length / 1e3,
        ))  # fmt: skip
    return Table("Welds", columns, tuple(rows), (Total("Total"),))


def _order(joint: str, one: str, other: str, weld: Weld) -> tuple[str, str, str, str, float, float, bool]:
    return joint, one, other, weld.form, weld.throat, weld.length, weld.site
