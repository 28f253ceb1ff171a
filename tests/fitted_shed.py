"""A shed made by hand in which every shape stands: plates, bolts, anchors, nuts, drilled and notched bars, welds.

Two frames of one column and one rafter, and a purlin between them; no two numbers equal. Parts fit together only
as far as relations go: that they do in space is the business of the joints' own tests.
"""

from __future__ import annotations

from math import cos, radians, sin, tan

import numpy as np
import specimens

from shedbim.fasteners.anchors import anchor
from shedbim.fasteners.bolts import bolt
from shedbim.fasteners.nuts import bar_nuts
from shedbim.geometry.placements import compose, placement, rotation, translation
from shedbim.model.bars import Bar, EndCut
from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.holes import Hole, Notch
from shedbim.model.joints import At, Clamp, JointKind, JointRun
from shedbim.model.plates import Plate
from shedbim.model.roles import Role
from shedbim.model.shapes import Shape
from shedbim.model.shed import Assemblies, AssemblyType, Part, Pieces, Shed
from shedbim.model.welds import Weld

__all__ = ["PER_FRAME", "fitted", "joints", "parts"]

_X, _Y, _Z = (1.0, 0.0, 0.0), (0.0, 1.0, 0.0), (0.0, 0.0, 1.0)
_SLANTED = (0.0, cos(radians(37)), sin(radians(37)))


def _drilled_column() -> Bar:
    """An I with holes in web and flange, a slot, a cope, and a slanted end."""
    section = specimens.SECTIONS["I"]
    holes = (
        *(Hole((411.0 + 83.0 * i, 0.0, 31.0 * (-1) ** i), _Y, 22.0, 7.2) for i in range(3)),
        Hole((1203.0, 47.0, 155.0 - 5.45), _Z, 18.0, 10.9),
        Hole((1409.0, -41.0, -155.0 + 5.45), (0.0, 0.0, -1.0), 18.0, 10.9, 9.0, _X),
        Hole((1711.0, 0.0, 13.0), _Y, 14.0, 7.2, 37.0, (sin(radians(20)), 0.0, cos(radians(20)))),
    )
    cope = Notch(
        ((0.0, 0.0), (63.0, 0.0), (63.0, 45.0), (0.0, 45.0)), (0.0, -80.0, 156.0), _X, (0.0, 0.0, -1.0), 160.0
    )
    # u x v is +y: the cope runs across the whole width of the flange.
    return Bar(section, 3107.0, end=EndCut(((0.21, -0.4),)), holes=holes, notches=(cope,))


def _drilled_tubes() -> tuple[Bar, Bar]:
    """A rectangular tube with a hole in one wall and a slotted end, and a round one bored through one wall."""
    flat, round_ = specimens.SECTIONS["RHS"], specimens.SECTIONS["CHS"]
    # u x v is -z: it runs down through the tube from above.
    corners = ((0.0, -6.0), (117.0, -6.0), (117.0, 6.0), (0.0, 6.0))
    slot = Notch(corners, (-10.0, 0.0, 91.0), _X, (0.0, -1.0, 0.0), 182.0)
    holes = (
        Hole((903.0, 45.0 - 3.15, 22.0), _Y, 26.0, 6.3),
        Hole((1507.0, 0.0, -80.0 + 3.15), _Z, 13.0, 6.3, 21.0, _X),
    )
    rafter = Bar(flat, 2311.0, end=EndCut(((0.0, tan(radians(9))),)), holes=holes, notches=(slot,))
    middle = 88.9 / 2 - 2.5
    _, y, z = _SLANTED
    vents = (
        Hole((811.0, y * middle, z * middle), _SLANTED, 30.0, 5.0),
        Hole((1009.0, -middle, 0.0), _Y, 12.0, 5.0, 25.0, _X),
    )
    brace = Bar(round_, 1723.0, start=EndCut(((0.15, 0.7), (-0.1, -0.45)), notched=True), holes=vents)
    return rafter, brace


def _plates() -> tuple[Plate, Plate, Plate]:
    """A base plate with snipped corners, a gusset with an arc and a slot, and a plain cleat."""
    anchors = tuple(Hole((x, y, 12.5), _Z, 30.0, 25.0) for x in (-95.0, 95.0) for y in (-117.0, 117.0))
    base = Plate(
        ((-150.0, -190.0), (150.0, -190.0), (150.0, 160.0), (120.0, 190.0), (-150.0, 190.0)), 25.0, anchors
    )
    gusset = Plate(
        ((0.0, 0.0), (240.0, 0.0), (310.0, 70.0), (310.0, 200.0), (40.0, 260.0)),
        12.0,
        (
            Hole((83.0, 61.0, 6.0), _Z, 22.0, 12.0),
            Hole((171.0, 113.0, 6.0), _Z, 18.0, 12.0, 23.0, (cos(radians(31)), sin(radians(31)), 0.0)),
        ),
        (0.0, tan(radians(90 / 4)), 0.0, 0.0, -0.13),
    )
    return base, gusset, Plate(((0.0, 0.0), (80.0, 0.0), (80.0, 150.0), (0.0, 150.0)), 8.0)


def parts() -> tuple[Part, ...]:
    """Every part, by role."""
    column, (rafter, brace), (base, gusset, cleat) = _drilled_column(), _drilled_tubes(), _plates()
    around = tuple((hole.centre[0], hole.centre[1]) for hole in base.holes)
    square = ((-35.0, -41.0), (35.0, -41.0), (35.0, 41.0), (-35.0, 41.0))
    angle = specimens.SECTIONS["L"]
    left, _, _, top = angle.outline.bounds
    bracket = Bar(angle, 161.0, holes=(Hole((53.0, left + 4.5, top - 33.0), _Y, 14.0, 9.0),))
    rows: list[tuple[str, Role, Shape, str]] = [
        ("C1", Role.COLUMN, column, "S355"),
        ("R1", Role.RAFTER, rafter, "S355"),
        ("P1", Role.PURLIN, Bar(specimens.SECTIONS["Z"], 5994.0), "S350GD"),
        ("WB1", Role.WALL_BRACE, brace, "S235"),
        ("BP1", Role.BASE_PLATE, base, "S355"),
        ("SK1", Role.SHEAR_KEY, Bar(specimens.SECTIONS["I"], 131.0), "S355"),
        ("GU1", Role.GUSSET, gusset, "S275"),
        ("CL1", Role.CLEAT, cleat, "S275"),
        ("CL2", Role.CLEAT, bracket, "S275"),
        ("SL1", Role.SLEEVE, Bar(specimens.SECTIONS["Z"], 611.0), "S350GD"),
        ("FS1", Role.STAY, Plate(((0.0, -20.0), (730.0, -20.0), (730.0, 20.0), (0.0, 20.0)), 5.0), "S235"),
        ("BG1", Role.BOLTS, BoltGroup(bolt(20.0, "8.8", 32.0), square), "8.8"),
        ("BG2", Role.BOLTS, BoltGroup(bolt(12.0, "10.9", 10.5, (1, 1)), ((0.0, 0.0), (47.0, 0.0))), "10.9"),
        ("AB1", Role.ANCHORS, BoltGroup(anchor(24.0, "8.8", 25.0, 40.0, 400.0), around), "8.8"),
        ("NU1", Role.NUTS, BoltGroup(bar_nuts(16.0, "4.6", 8.0), ((0.0, 0.0),)), "4.6"),
    ]  # fmt: skip
    return tuple(Part(mark, role, shape, grade, "galvanized") for mark, role, shape, grade in rows)


#: What stands in each frame: name, mark, in the column's assembly or not, origin, x, z in the frame.
_FRAMED = (
    ("column/A", "C1", True, (0.0, 0.0, 25.0), _Z, _X),
    ("column/A/start/base plate", "BP1", True, (0.0, 0.0, 0.0), _X, _Z),
    ("column/A/start/key", "SK1", True, (0.0, 0.0, -131.0), _Z, _X),
    ("column/A/end/gusset", "GU1", True, (171.0, -6.0, 2410.0), _X, (0.0, -1.0, 0.0)),
    ("column/A/along/1/cleat", "CL1", True, (-163.0, 4.0, 1207.0), _X, _Y),
    ("column/A/along/2/bracket", "CL2", True, (-203.0, 91.0, 1709.0), _Z, _Y),
    ("column/A/start/anchors", "AB1", False, (0.0, 0.0, 25.0), _X, (0.0, 0.0, -1.0)),
    ("rafter/A-B", "R1", False, (409.0, 21.0, 2503.0), (1, 0, 0.16), _Z),
    ("rafter/A-B/start/bolts", "BG1", False, (257.0, -6.0, 2471.0), _X, _Y),
    ("wall brace/A", "WB1", False, (23.0, 313.0, 1003.0), (0, 1, 0.7), _X),
    ("wall brace/A/start/bolts", "BG2", False, (29.0, 331.0, 1031.0), _Y, _X),
)
PER_FRAME = len(_FRAMED)
#: Loose pieces: key, mark, origin, x, z in the building.
_LOOSE = (
    ("1-2/purlin/A-B/1", "P1", (811.0, 3.0, 2911.0), _Y, (-0.1, 0, 1)),
    ("1-2/purlin/A-B/1/end/sleeve", "SL1", (811.0, 5703.0, 2913.0), _Y, (-0.1, 0, 1)),
    ("1-2/purlin/A-B/1/along/stay", "FS1", (913.0, 3001.0, 2703.0), (0.3, 0, 1), _Y),
    ("1-2/purlin/A-B/1/along/nuts", "NU1", (815.0, 3003.0, 2905.0), _X, (0, 0.2, 1)),
)


def fitted(frames: int = 2) -> Shed:
    """The shed."""
    made = parts()
    index = {part.mark: i for i, part in enumerate(made)}
    keys, which, places, owners = [], [], [], []
    lines = []
    for line in range(frames):
        frame = compose(translation((0.0, 6011.0 * line, 0.0)), rotation((0, 0, 1), radians(2.3 * line)))
        lines.append(frame)
        for name, mark, in_column, origin, x, z in _FRAMED:
            keys.append(f"{line + 1}/{name}")
            which.append(index[mark])
            places.append(compose(frame, placement(origin, x, z)))
            owners.append(line if not in_column else frames + line)
    for key, mark, origin, x, z in _LOOSE:
        keys.append(key)
        which.append(index[mark])
        places.append(placement(origin, x, z))
        owners.append(-1)
    plain = specimens.shed()
    inner = [compose(frame, translation((17.0, 0.0, 0.0))) for frame in lines]
    return Shed(
        project=plain.project,
        georeference=plain.georeference,
        grid=plain.grid,
        parts=made,
        pieces=Pieces(tuple(keys), np.array(which), np.array(places), np.array(owners)),
        assembly_types=(AssemblyType("F1", "frame", "site"), AssemblyType("CA1", "column", "shop")),
        assemblies=Assemblies(
            tuple(f"{line + 1}/{name}" for name in ("frame", "column/A/shop") for line in range(frames)),
            np.repeat([0, 1], frames),
            np.array([*lines, *inner]),
            np.array([-1] * frames + list(range(frames))),
        ),
        joints=joints(frames),
    )


def joints(frames: int = 2) -> tuple[JointRun, ...]:
    """Joints with all that can realize them: fittings and welds, bolts alone, welds alone, and nothing."""
    loose = PER_FRAME * frames

    def each(*names: int) -> np.ndarray:
        """Rows of the same pieces in each frame."""
        return np.add.outer(PER_FRAME * np.arange(frames), names)

    base = [Weld((0, 1), "fillet", 6.0, 871.4, all_round=True), Weld((1, 2), "butt", 10.0, 311.0)]
    gusset = [Weld((0, 2), "fillet", 5.0, 240.0), Weld((1, 2), "fillet", 5.0, 180.0, site=True)]
    return (
        _run(JointKind.PINNED_BASE, each(0), each(1, 2, 6), base, (Clamp(3, ((1, 25.0),)),)),
        _run(JointKind.RAFTER_COLUMN, each(0, 7), each(3, 8), gusset),
        _run(JointKind.RAIL_CLEAT, each(0, 5), None, [Weld((0, 1), "fillet", 5.0, 240.3)] * 2),
        _run(JointKind.BRACE_GUSSET, each(0, 9), each(10), []),
        _run(JointKind.NODE, each(0, 4), None, []),
        _run(
            JointKind.PURLIN_CLEAT, np.array([[7, loose, loose + 1]]), np.array([[loose + 2, loose + 3]]), []
        ),
        _run(JointKind.STRUT_END, np.array([[7, loose]]), None, []),
        _run(JointKind.FREE, np.array([[loose]]), None, []),
    )


def _run(
    kind: JointKind,
    pieces: np.ndarray,
    fittings: np.ndarray | None,
    welds: list[Weld],
    clamps: tuple[Clamp, ...] = (),
) -> JointRun:
    zeros = np.zeros((len(pieces), 3))
    added = np.zeros((len(pieces), 0), np.int64) if fittings is None else fittings
    ends = np.full(pieces.shape, int(At.ALONG), np.int8)
    return JointRun(kind, pieces, ends, zeros, zeros[:, 0], added, tuple(welds), clamps)
