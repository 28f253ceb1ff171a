"""A tiny shed made by hand with plates, bolts, anchors, nuts, holes and welds: three columns, no two counts equal."""

from __future__ import annotations

import numpy as np
from specimens_schedule import FLAT, IPE_300

from shedbim.fasteners.anchors import anchor
from shedbim.fasteners.bolts import bolt
from shedbim.fasteners.nuts import bar_nuts
from shedbim.geometry.placements import IDENTITY, placement
from shedbim.model.bars import Bar
from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.holes import Hole
from shedbim.model.joints import Clamp, JointKind, JointRun
from shedbim.model.plates import Plate, rectangle
from shedbim.model.roles import Role
from shedbim.model.shed import Assemblies, AssemblyType, Grid, Part, Pieces, ProjectInfo, Shed
from shedbim.model.welds import Weld

__all__ = ["ANCHOR_PLACES", "COLUMNS", "PARTS", "fitted"]

COLUMNS = 3
_Z = (0.0, 0.0, 1.0)

_COLUMN = Bar(
    IPE_300,
    3017.0,
    holes=tuple(Hole((2500.0, y, 150.0 - 10.7 / 2), _Z, 18.0, 10.7) for y in (-40.0, 40.0)),
)
_BASE = Plate(
    rectangle(310.0, 210.0),
    20.0,
    tuple(Hole((x, y, 10.0), _Z, 26.0, 20.0) for x in (-100.0, 100.0) for y in (-60.0, 60.0)),
)
_CLEAT = Bar(
    FLAT,
    153.0,
    holes=(
        Hole((40.0, 0.0, 0.0), (0.0, 1.0, 0.0), 18.0, 8.0),
        Hole((110.0, 0.0, 0.0), (0.0, 1.0, 0.0), 18.0, 8.0, 6.0, (1.0, 0.0, 0.0)),
    ),
)
PARTS = (
    Part("C1", Role.COLUMN, _COLUMN, "S355", "painted"),
    Part("BP1", Role.BASE_PLATE, _BASE, "S275", "painted"),
    Part("CL1", Role.CLEAT, _CLEAT, "S275", "galvanized"),
    # Grips of 20 and of 18 take the same bolt: 18 + 3 + 14.8 + 2 = 37.8, 20 + 19.8 = 39.8, both up to 40.
    Part(
        "BG1", Role.BOLTS, BoltGroup(bolt(16.0, "8.8", 20.0), ((0.0, 0.0), (70.0, 0.0))), "8.8", "galvanized"
    ),
    Part(
        "BG2", Role.BOLTS, BoltGroup(bolt(16.0, "8.8", 18.0), ((0.0, 0.0), (70.0, 0.0), (0.0, 70.0))), "8.8",
        "galvanized",
    ),
    Part(
        "AB1", Role.ANCHORS,
        BoltGroup(anchor(20.0, "8.8", 20.0, 30.0, 300.0), tuple((h.centre[0], h.centre[1]) for h in _BASE.holes)),
        "8.8", "galvanized",
    ),
    Part("NU1", Role.NUTS, BoltGroup(bar_nuts(12.0, "4.6", 8.0), ((0.0, 0.0),)), "4.6", "galvanized"),
)  # fmt: skip

#: Where the anchors of the second column stand: its base is at (4000, 700) with the holes about it.
ANCHOR_PLACES = {(4000.0 + x, 700.0 + y, 20.0) for x in (-100.0, 100.0) for y in (-60.0, 60.0)}


def fitted() -> Shed:
    """The specimen: each column has a base plate, a cleat and a pair of bolts; one group besides, and two nuts
    that a frame holds."""
    keys, part, places, owner = [], [], [], []
    for number in range(COLUMNS):
        base = np.array([4000.0 * number, 700.0 * number, 0.0])
        for name, index, up, inside in (
            ("column", 0, 20.0, True), ("base plate", 1, 0.0, True), ("cleat", 2, 2500.0, True),
            ("anchors", 5, 20.0, False), ("bolts", 3, 2500.0, False),
        ):  # fmt: skip
            keys.append(f"{number + 1}/{name}")
            part.append(index)
            down = (0.0, 0.0, -1.0) if name == "anchors" else _Z
            places.append(placement(base + np.array([0.0, 0.0, up]), (1.0, 0.0, 0.0), down))
            owner.append(number if inside else -1)
    for name, index in (("more bolts", 4), ("nuts/1", 6), ("nuts/2", 6)):
        keys.append(name)
        part.append(index)
        places.append(IDENTITY)
        owner.append(COLUMNS if name.startswith("nuts") else -1)
    rows = 5 * np.arange(COLUMNS)[:, None]
    nothing = np.zeros((COLUMNS, 3))
    joints = JointRun(
        JointKind.PINNED_BASE, rows, np.zeros(rows.shape, np.int8), nothing, nothing[:, 0],
        rows + np.array([1, 2, 3, 4]),
        (Weld((0, 1), "fillet", 5.0, 903.4, all_round=True), Weld((0, 2), "butt", 8.0, 121.0, site=True)),
        (Clamp(3, ((1, 20.0),)), Clamp(4, ((0, 10.7), (2, 9.3)))),
    )  # fmt: skip
    return Shed(
        project=ProjectInfo("5f0c9e3a-0000-4000-8000-000000000002", "Fitted", "7", "P01"),
        georeference=None,
        grid=Grid(("A", "B"), (0.0, 12500.0), ("1", "2"), (0.0, 5200.0)),
        parts=PARTS,
        pieces=Pieces(tuple(keys), np.array(part), np.array(places), np.array(owner)),
        assembly_types=(AssemblyType("AC1", "column", "shop"), AssemblyType("F1", "frame", "site")),
        assemblies=Assemblies(
            (*(f"{number + 1}/column/shop" for number in range(COLUMNS)), "1/frame"),
            np.array([0] * COLUMNS + [1]),
            np.tile(IDENTITY, (COLUMNS + 1, 1, 1)),
            np.full(COLUMNS + 1, -1),
        ),
        joints=(joints,),
        finishes=(("painted", "two coats"), ("galvanized", "hot dip")),
    )
