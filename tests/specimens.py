"""Sheds made by hand from the model's own dataclasses: every profile, every cut, no two numbers equal."""

from __future__ import annotations

from dataclasses import dataclass
from math import radians

import numpy as np

from shedbim.geometry.outlines import Outline, circle, rounded
from shedbim.geometry.placements import compose, placement, rotation, translation
from shedbim.model.bars import SQUARE, Bar, EndCut
from shedbim.model.joints import At, JointKind, JointRun
from shedbim.model.roles import Role
from shedbim.model.shed import (
    Assemblies,
    AssemblyType,
    Georeference,
    Grid,
    Part,
    Pieces,
    ProjectInfo,
    Shed,
)
from shedbim.sections.profiles import Angle, Channel, Flat, Hollow, IShape, LippedC, LippedZ, Pipe, Round
from shedbim.sections.section import Profile, Section, Symmetry

PROJECT_ID = "8c0f5a2e-6d1b-4f39-9a77-31c2e0b4d5f6"


@dataclass(frozen=True)
class Keyhole:
    """A profile no schema has: a rounded wedge with a hole off its middle."""

    b: float

    @property
    def outline(self) -> Outline:
        outer = rounded(
            [(0.0, 0.0, 0.0), (self.b, 0.0, 12.0), (self.b * 0.7, self.b, 7.0), (0.0, self.b * 0.8, 0.0)]
        )
        return Outline(outer, (circle(self.b / 3, clockwise=True).moved(self.b * 0.4, self.b * 0.42),))

    @property
    def symmetry(self) -> Symmetry:
        return Symmetry(turns=1, mirror=None)

    @property
    def thickness(self) -> float:
        return self.b


def section(name: str, profile: Profile) -> Section:
    return Section(name, name.partition(" ")[0], profile, "made for a test")


SECTIONS = {
    "I": section("I 310x150", IShape(h=310.0, b=150.0, tw=7.2, tf=10.9, r=15.0)),
    "U": section("U 220x85", Channel(h=220.0, b=85.0, tw=6.5, tf=12.0, r=13.0)),
    "L": section("L 120x80x9", Angle(h=120.0, b=80.0, t=9.0, r=11.0, r2=5.5)),
    "L sharp": section("L 70x50x6", Angle(h=70.0, b=50.0, t=6.0, r=0.0, r2=0.0)),
    "RHS": section("RHS 160x90x6.3", Hollow(h=160.0, b=90.0, t=6.3, ro=9.45, ri=6.3)),
    "CHS": section("CHS 88.9x5", Pipe(d=88.9, t=5.0)),
    "C": section("C 205x65x20x2", LippedC(h=205.0, b=65.0, c=20.0, t=2.0, ri=3.0)),
    "Z": section("Z 200x75x21x2.5", LippedZ(h=200.0, b=75.0, c=21.0, t=2.5, ri=4.0)),
    "flat": section("FL 90x11", Flat(b=90.0, t=11.0)),
    "round": section("RD 17", Round(d=17.0)),
    "keyhole": section("KEYHOLE 130", Keyhole(b=130.0)),
}

PLANE = EndCut(((0.35, -0.6),))
POINT = EndCut(((0.2, 0.9), (-0.3, -0.5)))
NOTCH = EndCut(((0.15, 0.7), (-0.1, -0.45)), notched=True)
FLAT_NOTCH = EndCut(((0.02, 0.11), (0.0, -0.07)), notched=True)

#: Mark, role, section, length, start, end: each profile, and each cut at both ends.
_PARTS = (
    ("C1", Role.COLUMN, "I", 6120.0, SQUARE, SQUARE),
    ("GP1", Role.GABLE_POST, "I", 5233.0, SQUARE, PLANE),
    ("R1", Role.RAFTER, "I", 7411.0, PLANE, EndCut(((-0.1, 0.25),))),
    ("TC1", Role.TOP_CHORD, "RHS", 4317.0, EndCut(((0.0, 0.4),)), SQUARE),
    ("BC1", Role.BOTTOM_CHORD, "RHS", 4209.0, POINT, NOTCH),
    ("D1", Role.DIAGONAL, "CHS", 1723.0, POINT, POINT),
    ("D2", Role.DIAGONAL, "CHS", 1331.0, NOTCH, EndCut(((0.0, -0.83),))),
    ("V1", Role.POST, "RHS", 987.0, FLAT_NOTCH, FLAT_NOTCH),
    ("P1", Role.PURLIN, "Z", 5994.0, SQUARE, SQUARE),
    ("P2", Role.PURLIN, "Z", 3011.0, SQUARE, PLANE),
    ("SR1", Role.SIDE_RAIL, "C", 5561.0, SQUARE, PLANE),
    ("ER1", Role.GABLE_RAIL, "C", 4103.0, NOTCH, POINT),
    ("ES1", Role.EAVES_STRUT, "U", 5017.0, PLANE, NOTCH),
    ("VS1", Role.VALLEY_STRUT, "keyhole", 913.0, SQUARE, PLANE),
    ("S1", Role.STRUT, "keyhole", 1117.0, POINT, NOTCH),
    ("RB1", Role.ROOF_BRACE, "L", 6607.0, SQUARE, PLANE),
    ("WB1", Role.WALL_BRACE, "L sharp", 3709.0, EndCut(((0.5, 0.5),)), SQUARE),
    ("T1", Role.TIE, "flat", 2801.0, PLANE, NOTCH),
    ("SB1", Role.SAG_BAR, "round", 1613.0, SQUARE, EndCut(((0.3, 0.1),))),
)  # fmt: skip

#: Pieces that stand in frames (mark, in the truss or not, origin, x, z within the assembly) ...
_FRAMED = (
    ("C1", False, (150.0, 0.0, 0.0), (0, 0, 1), (0, 1, 0)),
    ("R1", False, (420.0, 31.0, 6000.0), (1, 0, 0.2), (0, 0, 1)),
    ("TC1", True, (0.0, 0.0, 1210.0), (1, 0, 0.1), (0, 0, 1)),
    ("BC1", True, (35.0, 0.0, 0.0), (1, 0, 0), (0, 0, 1)),
    ("D1", True, (88.0, 0.0, 93.0), (1, 0, 0.7), (0, 1, 0.1)),
    ("D2", True, (1901.0, 0.0, 57.0), (-1, 0.05, 0.9), (0, 1, 0)),
    ("V1", True, (2309.0, 4.0, 71.0), (0, 0, 1), (0, 1, 0)),
    ("V1", True, (3207.0, 4.0, 83.0), (0, 0, 1), (0, -1, 0)),
)
#: ... and loose ones (key, mark, origin, x, z in the building).
_LOOSE = (
    ("1/gable post/B", "GP1", (3021.0, -133.0, 12.0), (0, 0, 1), (0, 1, 0)),
    ("1-2/purlin/A-B/1", "P1", (811.0, 3.0, 7411.0), (0, 1, 0), (-0.1, 0, 1)),
    ("1-2/purlin/A-B/2", "P1", (2403.0, 3.0, 7613.125), (0, 1, 0), (-0.1, 0, 1)),
    ("2-3/purlin/A-B/1", "P2", (811.0, 6103.0, 7411.0), (0, 1, 0), (-0.1, 0, 1)),
    ("1-2/side rail/A/1", "SR1", (-207.0, 3.0, 333.0), (0, 1, 0), (-1, 0, 0)),
    ("1/gable rail/A-B/1", "ER1", (77.0, -307.0, 1409.0), (1, 0, 0), (0, 1, 0)),
    ("1-2/eaves strut/A", "ES1", (11.0, 143.0, 6301.0), (0, 1, 0.03), (0, 0, 1)),
    ("1-2/valley strut/B", "VS1", (6059.0, 149.0, 6317.0), (0, 1, 0), (0.3, 0, 1)),
    ("1-2/strut/B", "S1", (3059.0, 149.0, 6917.0), (0, 1, 0), (0, 0, 1)),
    ("1-2/roof brace/A-B/1", "RB1", (171.0, 67.0, 6801.0), (0.6, 1, 0.1), (0, 0, 1)),
    ("1-2/wall brace/A/1", "WB1", (19.0, 71.0, 501.0), (0, 1, 0.8), (1, 0, 0)),
    ("1-2/wall brace/A/2", "WB1", (41.0, 3007.0, 517.0), (0, -1, 0.8), (-1, 0, 0.1)),
    ("1-2/tie/B", "T1", (3301.0, 101.0, 5003.0), (0, 1, 0), (0, 0, 1)),
    ("1-2/sag bar/A-B/1/1", "SB1", (823.0, 3001.0, 7413.0), (1, 0, 0.13), (0, 1, 0)),
)  # fmt: skip

GRID = Grid(("A", "B", "C"), (0.0, 6100.0, 13700.0), ("1", "2", "3"), (0.0, 6050.0, 11930.0))
GEOREFERENCE = Georeference("EPSG:25832", 512340125.0, 5403120500.0, 212350.0, radians(14.0))


def parts() -> tuple[Part, ...]:
    """Every part of the specimen."""
    return tuple(
        Part(
            mark, role, Bar(SECTIONS[name], length, start, end), "S355" if name in "IU" else "S235", "painted"
        )
        for mark, role, name, length, start, end in _PARTS
    )


def shed(
    *,
    georeference: Georeference | None = GEOREFERENCE,
    project: ProjectInfo | None = None,
    frames: int = 2,
    prefix: str = "",
) -> Shed:
    """The specimen: frames that hold a truss each, and loose pieces; ``prefix`` begins every key."""
    made = parts()
    index = {part.mark: i for i, part in enumerate(made)}
    keys: list[str] = []
    which: list[int] = []
    places: list[np.ndarray] = []
    owners: list[int] = []
    groups: list[tuple[str, int, np.ndarray, int]] = []
    for line in range(frames):
        frame = translation((0.0, 6050.0 * line + 137.0 * line**2, 0.0))
        # Every second one is turned about the upright axis: a placement within must be turned back.
        frame = compose(frame, rotation((0, 0, 1), radians(1.7 * (line % 2))))
        truss = compose(frame, placement((307.0, 0.0, 5041.0), (1, 0, 0.05), (0, 0, 1)))
        owner = len(groups)
        groups += [
            (f"{prefix}{line + 1}/frame", 0, frame, -1),
            (f"{prefix}{line + 1}/truss/A-B", 1, truss, owner),
        ]
        for count, (mark, in_truss, origin, x, z) in enumerate(_FRAMED):
            keys.append(f"{prefix}{line + 1}/{made[index[mark]].role.word}/{count}")
            which.append(index[mark])
            places.append(compose(truss if in_truss else frame, placement(origin, x, z)))
            owners.append(owner + in_truss)
    for key, mark, origin, x, z in _LOOSE:
        keys.append(prefix + key)
        which.append(index[mark])
        places.append(placement(origin, x, z))
        owners.append(-1)
    return Shed(
        project=project or ProjectInfo(PROJECT_ID, "Saltmarsh Seed Store", "2417", "P01"),
        georeference=georeference,
        grid=GRID,
        parts=made,
        pieces=Pieces(tuple(keys), np.array(which), np.array(places), np.array(owners)),
        assembly_types=(AssemblyType("F1", "frame", "site"), AssemblyType("TR1", "truss", "shop")),
        assemblies=Assemblies(
            tuple(key for key, *_ in groups),
            np.array([kind for _, kind, _, _ in groups]),
            np.array([place for _, _, place, _ in groups]),
            np.array([parent for *_, parent in groups]),
        ),
        joints=joints(),
        defaults=(("purlins.gap", "6 mm"),),
        notes=("A note.", "A second note."),
    )


def joints() -> tuple[JointRun, ...]:
    """Joints in the first frame and at its loose pieces: two of them meet twice, one end is free."""
    first_loose = 2 * len(_FRAMED)
    return (
        _run(JointKind.NODE, [[2, 4, 5], [3, 4, 6], [3, 5, 7]]),
        _run(JointKind.RAFTER_COLUMN, [[0, 1]]),
        _run(JointKind.BRACE_GUSSET, [[0, first_loose + 10], [0, first_loose + 11]]),
        _run(JointKind.BRACE_CROSSING, [[first_loose + 10, first_loose + 11]] * 2),
        _run(JointKind.FREE, [[first_loose + 3]]),
    )


def _run(kind: JointKind, pieces: list[list[int]]) -> JointRun:
    rows = np.array(pieces)
    zeros = np.zeros((len(rows), 3))
    return JointRun(kind, rows, np.full(rows.shape, int(At.ALONG), np.int8), zeros, zeros[:, 0])
