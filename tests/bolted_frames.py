"""A shed made by hand whose joints fit in space: two frames and a purlin with plates, bolts, anchors and welds.

No two sizes are equal. Every bolt stands in a hole of each layer it clamps, and layers lie face to face.
"""

from __future__ import annotations

from collections.abc import Sequence
from math import sqrt

import numpy as np
import specimens
from specimens import SECTIONS

from shedbim.fasteners.fastener import Disc, Fastener
from shedbim.geometry.placements import placement
from shedbim.model.bars import Bar
from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.holes import Hole
from shedbim.model.joints import At, Clamp, JointKind, JointRun
from shedbim.model.plates import Plate, rectangle
from shedbim.model.roles import Role
from shedbim.model.shed import Assemblies, AssemblyType, Grid, Part, Pieces, ProjectInfo, Shed
from shedbim.model.welds import Weld

__all__ = ["ANCHORS", "BOLTS", "LINES", "NUTS", "SMALL_BOLTS", "bolted_frames"]

#: Numbered lines at y, mm.
LINES = (("1", 0.0), ("2", 6050.0))
#: Axes of columns, of rafters and of the purlin's web, mm.
_COLUMN_X, _RAFTER_Z, _PURLIN_X, _PURLIN_Z = 150.0, 3900.0, 1850.0, 4165.0
_FLANGE, _FACE = 10.9, 155.0  # of the I 310x150


def _bolt(
    d: float, length: float, grade: str, grip: float, across: float, head: float, nut: float
) -> Fastener:
    """A bolt with one washer under its nut; sizes of ISO 4014, 4032 and 7089 (values from memory)."""
    outer, thick = {20.0: (37.0, 3.0), 12.0: (24.0, 2.5)}[d]
    stack = (
        Disc("hexagon", across, -head, 0.0),
        Disc("round", d, 0.0, length),
        Disc("round", outer, grip, grip + thick, bore=d + 1.0),
        Disc("hexagon", across, grip + thick, grip + thick + nut, bore=d),
    )
    return Fastener("bolt", d, length, grade, grip, (0, 1), 1, stack)


BOLTS = _bolt(20.0, 60.0, "8.8", 26.9, 30.0, 12.5, 18.0)
SMALL_BOLTS = _bolt(12.0, 30.0, "4.6", 8.5, 18.0, 7.5, 10.8)
ANCHORS = Fastener(
    "anchor", 24.0, 480.0, "8.8", 20.0, (1, 0), 2,
    (
        Disc("round", 24.0, -40.0, 440.0),
        Disc("hexagon", 36.0, -29.5, -8.0, bore=24.0),
        Disc("square", 60.0, -8.0, 0.0, bore=26.0),
        Disc("square", 80.0, 410.0, 425.0, bore=24.0),
    ),
)  # fmt: skip
NUTS = Fastener(
    "nuts", 16.0, 0.0, "4.6", 2.5, (1, 1), 2,
    (
        Disc("hexagon", 24.0, -17.8, -3.0, bore=17.0),
        Disc("round", 30.0, -3.0, 0.0, bore=18.0),
        Disc("round", 30.0, 2.5, 5.5, bore=18.0),
        Disc("hexagon", 24.0, 5.5, 20.3, bore=17.0),
    ),
)  # fmt: skip

_ANCHOR_POINTS = tuple((x, y) for x in (-85.0, 70.0) for y in (-62.0, 55.0))
_BOLT_POINTS = tuple((x, y) for y in (-96.0, -11.0, 88.0) for x in (-45.0, 40.0))
_WEB_POINTS = ((0.0, -43.0), (0.0, 41.0))
_GUSSET = ((0.0, 0.0), (260.0, 0.0), (260.0, 120.0), (200.0, 180.0), (0.0, 180.0))


def _drilled(points: Sequence[tuple[float, float]], diameter: float, thickness: float) -> tuple[Hole, ...]:
    """Holes through a plate."""
    return tuple(Hole((x, y, thickness / 2), (0.0, 0.0, 1.0), diameter, thickness) for x, y in points)


def _column() -> Bar:
    """Holes in the flange that faces the rafter, at the height of its axis."""
    height, middle = _RAFTER_Z - 20.0, _FACE - _FLANGE / 2
    holes = (Hole((height + dz, -dy, middle), (0.0, 0.0, 1.0), 22.0, _FLANGE) for dy, dz in _BOLT_POINTS)
    return Bar(SECTIONS["I"], 4210.0, holes=tuple(holes))


def _purlin() -> Bar:
    """Holes for the cleats at both lines and for a sag bar between, in the web."""
    holes = [
        Hole((x, 0.0, z), (0.0, 1.0, 0.0), 14.0, 2.5) for x in (60.0, 6110.0) for _, z in _WEB_POINTS
    ]  # fmt: skip
    holes.append(Hole((2810.0, 0.0, 31.0), (0.0, 1.0, 0.0), 18.0, 2.5))
    return Bar(SECTIONS["Z"], 6195.0, holes=tuple(holes))


def _stay() -> Bar:
    """An angle with a hole in one leg at either end."""
    low_y, low_z, high_y, _ = SECTIONS["L sharp"].outline.bounds
    holes = tuple(
        Hole((x, (low_y + high_y) / 2, low_z + 3.0), (0.0, 0.0, 1.0), 14.0, 6.0) for x in (25.0, 612.0)
    )
    return Bar(SECTIONS["L sharp"], 640.0, holes=holes)


def _parts() -> tuple[Part, ...]:
    """Every part, sorted by role."""
    slot = Hole((190.0, 90.0, 6.0), (0.0, 0.0, 1.0), 18.0, 12.0, slot=9.0, along=(0.8, 0.6, 0.0))
    snipped = ((-70.0, 0.0), (70.0, 0.0), (70.0, 145.0), (45.0, 170.0), (-45.0, 170.0), (-70.0, 145.0))
    web = [(x, y + _PURLIN_Z - _RAFTER_Z - _FACE) for x, y in _WEB_POINTS]
    rounded = (0.0, 0.0, sqrt(2) - 1.0, 0.0, 0.0)
    anchors = tuple((x, -y) for x, y in _ANCHOR_POINTS)  # they point down: their frame is turned over
    made = (
        ("C1", Role.COLUMN, _column(), "S355", "painted"),
        ("R1", Role.RAFTER, Bar(SECTIONS["I"], 3829.0), "S355", "painted"),
        ("P1", Role.PURLIN, _purlin(), "S350GD", "galvanized"),
        ("SB1", Role.SAG_BAR, Bar(SECTIONS["round"], 1010.0), "S235", "galvanized"),
        ("BP1", Role.BASE_PLATE, Plate(rectangle(410.0, 230.0), 20.0, _drilled(_ANCHOR_POINTS, 30.0, 20.0)),
         "S355", "painted"),
        ("EP1", Role.END_PLATE, Plate(rectangle(170.0, 430.0), 16.0, _drilled(_BOLT_POINTS, 22.0, 16.0)),
         "S355", "painted"),
        ("GU1", Role.GUSSET, Plate(_GUSSET, 12.0, (slot,), rounded), "S275", "painted"),
        ("CL1", Role.CLEAT, Plate(snipped, 6.0, _drilled(web, 14.0, 6.0)), "S275", "painted"),
        ("FS1", Role.STAY, _stay(), "S235", "galvanized"),
        ("BG1", Role.BOLTS, BoltGroup(BOLTS, _BOLT_POINTS), "8.8", "galvanized"),
        ("BG2", Role.BOLTS, BoltGroup(SMALL_BOLTS, _WEB_POINTS), "4.6", "galvanized"),
        ("AB1", Role.ANCHORS, BoltGroup(ANCHORS, anchors), "8.8", "galvanized"),
        ("NU1", Role.NUTS, BoltGroup(NUTS, ((0.0, 0.0),)), "4.6", "galvanized"),
    )  # fmt: skip
    return tuple(Part(*row) for row in made)


_PURLIN = "1-2/purlin/A-B/1"
#: Mark, key with the number of the line, origin, x and z, and the assembly it is in: column 0, rafter 1, none -1.
_ON_A_LINE = (
    ("C1", "{}/column/A", (_COLUMN_X, 0.0, 20.0), (0, 0, 1), (1, 0, 0), 0),
    ("R1", "{}/rafter/A-B", (_COLUMN_X + _FACE + 16.0, 0.0, _RAFTER_Z), (1, 0, 0), (0, 0, 1), 1),
    ("BP1", "{}/column/A/start/base plate", (_COLUMN_X, 0.0, 0.0), (1, 0, 0), (0, 0, 1), 0),
    ("EP1", "{}/rafter/A-B/start/end plate", (_COLUMN_X + _FACE, 0.0, _RAFTER_Z), (0, 1, 0), (1, 0, 0), 1),
    ("GU1", "{}/column/A/end/gusset", (_COLUMN_X - _FACE - 260.0, 6.0, 3400.0), (1, 0, 0), (0, -1, 0), 0),
    ("BG1", "{}/rafter/A-B/start/bolts", (_COLUMN_X + _FACE - _FLANGE, 0.0, _RAFTER_Z),
     (0, 1, 0), (1, 0, 0), -1),
    ("AB1", "{}/column/A/start/anchors", (_COLUMN_X, 0.0, 20.0), (1, 0, 0), (0, 0, -1), -1),
    ("CL1", _PURLIN + "/at {}/cleat", (_PURLIN_X - 1.25, 0.0, _RAFTER_Z + _FACE), (0, -1, 0), (-1, 0, 0), 1),
    ("BG2", _PURLIN + "/at {}/bolts", (_PURLIN_X + 1.25, 0.0, _PURLIN_Z), (0, -1, 0), (-1, 0, 0), -1),
)  # fmt: skip
_BETWEEN = (
    ("P1", _PURLIN, (_PURLIN_X, -60.0, _PURLIN_Z), (0, 1, 0), (0, 0, 1)),
    ("SB1", "1-2/sag bar/A-B/1", (_PURLIN_X - 55.0, 2750.0, _PURLIN_Z + 31.0), (1, 0, 0), (0, 0, 1)),
    ("FS1", _PURLIN + "/along/stay", (_PURLIN_X + 160.0, 210.0, 3790.0), (0, 0.8, 0.6), (1, 0, 0)),
    ("NU1", "1-2/sag bar/A-B/1/along/nuts", (_PURLIN_X - 1.25, 2750.0, _PURLIN_Z + 31.0),
     (0, 1, 0), (1, 0, 0)),
)  # fmt: skip


def bolted_frames() -> Shed:
    """The specimen: on each line a frame of a column and a rafter as the shop makes them; the rest is loose."""
    parts = _parts()
    index = {part.mark: number for number, part in enumerate(parts)}
    keys, which, places, owners, groups = [], [], [], [], []
    for line, (number, y) in enumerate(LINES):
        groups += [
            (f"{number}/frame", 0, y, -1),
            (f"{number}/column with plates/A", 1, y, 3 * line),
            (f"{number}/rafter with plates/A-B", 2, y, 3 * line),
        ]
        for mark, key, origin, x, z, assembly in _ON_A_LINE:
            keys.append(key.format(number))
            which.append(index[mark])
            places.append(placement(np.add(origin, (0.0, y, 0.0)), x, z))
            owners.append(-1 if assembly < 0 else 3 * line + 1 + assembly)
    for mark, key, origin, x, z in _BETWEEN:
        keys.append(key)
        which.append(index[mark])
        places.append(placement(origin, x, z))
        owners.append(-1)
    return Shed(
        project=ProjectInfo(specimens.PROJECT_ID, "Bolted Lean-to", "F7", "P01"),
        georeference=None,
        grid=Grid(("A", "B"), (0.0, 4300.0), tuple(name for name, _ in LINES), tuple(y for _, y in LINES)),
        parts=parts,
        pieces=Pieces(tuple(keys), np.array(which), np.array(places), np.array(owners)),
        assembly_types=(
            AssemblyType("F1", "frame", "site"),
            AssemblyType("CA1", "column", "shop"),
            AssemblyType("RA1", "rafter", "shop"),
        ),
        assemblies=Assemblies(
            tuple(key for key, *_ in groups),
            np.array([kind for _, kind, *_ in groups]),
            np.array([placement((0.0, y, 0.0), (1, 0, 0), (0, 0, 1)) for *_, y, _ in groups]),
            np.array([parent for *_, parent in groups]),
        ),
        joints=_joints(tuple(keys)),
        notes=("A shed for tests.",),
    )


def _joints(keys: tuple[str, ...]) -> tuple[JointRun, ...]:
    """Every meeting with its fittings, welds and clamps; a column of the latter two counts members first."""

    def run(
        kind: JointKind,
        members: dict[str, At],
        fittings: Sequence[str],
        welds: tuple[Weld, ...] = (),
        clamps: tuple[Clamp, ...] = (),
    ) -> JointRun:
        lines = [number for number, _ in LINES] if any("{}" in key for key in members) else ["1"]
        pieces = np.array([[keys.index(key.format(line)) for key in members] for line in lines])
        added = np.array([[keys.index(key.format(line)) for key in fittings] for line in lines])
        at = np.tile(np.array(list(members.values()), np.int8), (len(lines), 1))
        zeros = np.zeros((len(lines), 3))
        return JointRun(kind, pieces, at, zeros, zeros[:, 0], added, welds, clamps)

    column, rafter, sag_bar = "{}/column/A", "{}/rafter/A-B", "1-2/sag bar/A-B/1"
    return (
        run(
            JointKind.PINNED_BASE,
            {column: At.START},
            (column + "/start/base plate", column + "/start/anchors"),
            (Weld((0, 1), "fillet", 5.0, 1150.0, all_round=True),),
            (Clamp(2, ((1, 20.0),)),),
        ),
        run(
            JointKind.RAFTER_COLUMN,
            {column: At.ALONG, rafter: At.START},
            (rafter + "/start/end plate", rafter + "/start/bolts"),
            (Weld((1, 2), "fillet", 6.0, 1130.0),),
            (Clamp(3, ((0, _FLANGE), (2, 16.0))),),
        ),
        run(
            JointKind.BRACE_GUSSET,
            {column: At.ALONG},
            (column + "/end/gusset",),
            (Weld((0, 1), "fillet", 4.0, 240.0),),
        ),
        run(
            JointKind.PURLIN_CLEAT,
            {rafter: At.ALONG, _PURLIN: At.ALONG},
            (_PURLIN + "/at {}/cleat", _PURLIN + "/at {}/bolts"),
            (Weld((0, 2), "fillet", 3.0, 280.0),),
            (Clamp(3, ((1, 2.5), (2, 6.0))),),
        ),
        run(JointKind.FLANGE_STAY, {_PURLIN: At.ALONG}, (_PURLIN + "/along/stay",)),
        run(
            JointKind.SAG_BAR_END,
            {_PURLIN: At.ALONG, sag_bar: At.ALONG},
            (sag_bar + "/along/nuts",),
            (),
            (Clamp(2, ((0, 2.5),)),),
        ),
    )
