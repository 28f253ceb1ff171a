"""A tiny shed made by hand, with unequal numbers throughout: nested assemblies, cut ends, text that bites."""

from __future__ import annotations

from math import tan

import numpy as np

from shedbim.geometry.placements import IDENTITY
from shedbim.model.bars import Bar, EndCut
from shedbim.model.joints import JointKind, JointRun
from shedbim.model.roles import Role
from shedbim.model.shed import Assemblies, AssemblyType, Grid, Part, Pieces, ProjectInfo, Shed
from shedbim.sections.profiles import Flat, Hollow, IShape
from shedbim.sections.section import Section

# Rolled dimensions of IPE 300: EN 10365 (h 300, b 150, tw 7.1, tf 10.7, r 15).
IPE_300 = Section("IPE 300", "IPE", IShape(300, 150, 7.1, 10.7, 15), "EN 10365")
SHS_100 = Section("SHS 100x100x5", "SHS", Hollow(100, 100, 5, 10, 5), "EN 10210-2")
FLAT = Section("FL 60x8", "FL", Flat(60, 8), "by dimension")

PITCH = 0.1
PARTS = (
    Part("C1", Role.COLUMN, Bar(IPE_300, 6187.25), "S355", "painted"),
    Part("TC1", Role.TOP_CHORD, Bar(SHS_100, 4020.0, end=EndCut(((0.0, tan(PITCH)),))), "S355", "painted"),
    Part("D1", Role.DIAGONAL, Bar(SHS_100, 1711.5), "S275", "painted"),
    Part("T1", Role.TIE, Bar(FLAT, 905.4), "S355", "galvanized"),
)
#: Pieces of each part: columns in frames, chords and diagonals in trusses, ties loose.
QUANTITIES = (4, 2, 6, 3)

#: Text a user could write to be taken for a formula, a footer code, a terminal code or markup.
NASTY = '=HYPERLINK("x") &P [bold]"ü", <b>\x1b[31m'


def shed(**changes: object) -> Shed:
    """Give the specimen; keyword arguments replace fields of the Shed."""
    # Frames 0 and 1 (site) hold two columns and a truss; trusses 2 and 3 (shop) one chord, three webs.
    part = [0, 0, 1, 2, 2, 2] * 2 + [3] * 3
    assembly = [0, 0, 2, 2, 2, 2, 1, 1, 3, 3, 3, 3, -1, -1, -1]
    count = len(part)
    keys = tuple(f"piece/{number}" for number in range(count))
    fields: dict[str, object] = {
        "project": ProjectInfo("5f0c9e3a-0000-4000-8000-000000000001", NASTY, "+2417", "P01"),
        "georeference": None,
        "grid": Grid(("A", "B"), (0.0, 12500.0), ("1", "2", "3"), (0.0, 5200.0, 11000.0)),
        "parts": PARTS,
        "pieces": Pieces(keys, np.array(part), np.tile(IDENTITY, (count, 1, 1)), np.array(assembly)),
        "assembly_types": (AssemblyType("F1", "frame", "site"), AssemblyType("A1", "truss", "shop")),
        "assemblies": Assemblies(
            ("1/frame", "2/frame", "1/truss", "2/truss"),
            np.array([0, 0, 1, 1]),
            np.tile(IDENTITY, (4, 1, 1)),
            np.array([-1, -1, 0, 1]),
        ),
        "joints": (
            _joints(JointKind.PINNED_BASE, [[0], [1], [6], [7]], [0.0, 0.0, 0.0, 0.0]),
            _joints(JointKind.NODE, [[2, 3, 4], [8, 9, 10]], [12.5, -17.25]),
        ),
        "defaults": (("frames.columns.grade", "S355"), ("purlins.gap", "6 mm")),
        "notes": ("The ridge is assumed level.",),
    }
    return Shed(**{**fields, **changes})  # type: ignore[arg-type]


def _joints(kind: JointKind, pieces: list[list[int]], missed: list[float]) -> JointRun:
    rows = np.array(pieces)
    points = np.arange(3.0 * len(rows)).reshape(-1, 3) * 1000
    return JointRun(kind, rows, np.zeros(rows.shape, np.int8), points, np.array(missed))
