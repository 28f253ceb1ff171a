"""A long shed of many pieces, and what writing it costs; run it to see the figures."""

from __future__ import annotations

import io
import time

import numpy as np
import specimens

from shedbim.geometry.placements import compose, placement, translation
from shedbim.model.bars import Bar, EndCut
from shedbim.model.joints import At, JointKind, JointRun
from shedbim.model.roles import Role
from shedbim.model.shed import Assemblies, AssemblyType, Grid, Part, Pieces, ProjectInfo, Shed
from shedbim.writers.ifc import write

_WEBS, _PURLINS, _RAILS = 36, 22, 12


def long_shed(frames: int) -> Shed:
    """A shed of so many frames: 42 pieces in each and 56 in each bay between two."""
    cut = EndCut(((0.0, 0.4),))
    parts = [
        Part("C1", Role.COLUMN, Bar(specimens.SECTIONS["I"], 8000.0), "S355", "painted"),
        Part("TC1", Role.TOP_CHORD, Bar(specimens.SECTIONS["RHS"], 15100.0, end=cut), "S355", "painted"),
        Part("BC1", Role.BOTTOM_CHORD, Bar(specimens.SECTIONS["RHS"], 14900.0), "S355", "painted"),
    ]
    parts += [
        Part(
            f"D{i}",
            Role.DIAGONAL,
            Bar(specimens.SECTIONS["CHS"], 1800.0 + 7 * i, cut, cut),
            "S355",
            "painted",
        )
        for i in range(_WEBS // 2)
    ]
    first = len(parts)
    parts += [
        Part("P1", Role.PURLIN, Bar(specimens.SECTIONS["Z"], 5994.0), "S350GD", "galvanized"),
        Part("SR1", Role.SIDE_RAIL, Bar(specimens.SECTIONS["C"], 5994.0), "S350GD", "galvanized"),
        Part("SB1", Role.SAG_BAR, Bar(specimens.SECTIONS["round"], 1700.0), "S235", "galvanized"),
    ]
    # In a frame: two columns, four chords, webs.
    framed = [(0, "column/A", 0.0, 0), (0, "column/B", 29700.0, 0)]
    framed += [
        (1 + k // 2, f"truss/{'top' if k < 2 else 'bottom'} chord/A-B/{k % 2}", 15000.0 * (k % 2), 1)
        for k in range(4)
    ]
    framed += [(3 + k // 2, f"truss/diagonal/A-B/{k + 1}", 311.7 + 811.3 * k, 1) for k in range(_WEBS)]
    inner = np.array(
        [placement((x, 0.0, 37.1 * part), (1, 0, 0.1 * part), (0, 1, 0)) for part, _, x, _ in framed]
    )
    bayed = [
        (first, f"purlin/A-B/{k + 1}", 1381.37 * k, 9100.0 + 83.21 * min(k, _PURLINS - k))
        for k in range(_PURLINS)
    ]
    bayed += [
        (first + 1, f"side rail/{'AB'[k % 2]}/{k // 2 + 1}", 30000.0 * (k % 2), 311.0 + 1423.0 * (k // 2))
        for k in range(_RAILS)
    ]
    bayed += [
        (first + 2, f"sag bar/A-B/{k + 1}", 1381.37 * k, 9083.0 + 83.21 * min(k, _PURLINS - k))
        for k in range(_PURLINS)
    ]
    outer = np.array([placement((x, 0.0, z), (0, 1, 0), (0.1, 0, 1)) for _, _, x, z in bayed])
    lines = translation(np.outer(6011.3 * np.arange(frames), (0.0, 1.0, 0.0)))
    truss = compose(lines, translation((0.0, 0.0, 8000.0)))
    keys, part, owner, places = [], [], [], []
    for line in range(frames):
        keys += [f"{line + 1}/{name}" for _, name, _, _ in framed]
        part += [each for each, _, _, _ in framed]
        owner += [2 * line + inside for _, _, _, inside in framed]
        holders = np.where(
            np.array([inside for *_, inside in framed])[:, None, None], truss[line], lines[line]
        )
        places.append(compose(holders, inner))
        if line + 1 < frames:
            keys += [f"{line + 1}-{line + 2}/{name}" for _, name, _, _ in bayed]
            part += [each for each, _, _, _ in bayed]
            owner += [-1] * len(bayed)
            places.append(compose(lines[line], outer))
    step = len(framed) + len(bayed)
    at = step * np.arange(frames)[:, None, None]
    webs = np.array([[2 + k % 4, 6 + k, 6 + k + 1] for k in range(_WEBS - 1)])
    cleats = np.array([[2 + k % 2, len(framed) + k, len(framed) + k - step] for k in range(_PURLINS)])
    bars = np.array([[len(framed) + k, len(framed) + _PURLINS + _RAILS + k] for k in range(_PURLINS)])
    rails = np.array([[k % 2, len(framed) + _PURLINS + k] for k in range(_RAILS)])
    runs = (
        _run(JointKind.NODE, (at + webs).reshape(-1, 3)),
        _run(JointKind.PURLIN_CLEAT, (at[1:-1] + cleats).reshape(-1, 3)),
        _run(JointKind.SAG_BAR_END, (at[:-1] + bars).reshape(-1, 2)),
        _run(JointKind.RAIL_CLEAT, (at[:-1] + rails).reshape(-1, 2)),
    )
    names = [name for line in range(frames) for name in (f"{line + 1}/frame", f"{line + 1}/truss/A-B")]
    return Shed(
        project=ProjectInfo(specimens.PROJECT_ID, "Long shed", "", "P01"),
        georeference=specimens.GEOREFERENCE,
        grid=Grid(
            ("A", "B"), (0.0, 30000.0), tuple(map(str, range(1, frames + 1))), tuple(lines[:, 1, 3].tolist())
        ),
        parts=tuple(parts),
        pieces=Pieces(tuple(keys), np.array(part), np.vstack(places), np.array(owner)),
        assembly_types=(AssemblyType("F1", "frame", "site"), AssemblyType("TR1", "truss", "shop")),
        assemblies=Assemblies(
            tuple(names),
            np.tile([0, 1], frames),
            np.stack([lines, truss], axis=1).reshape(-1, 3, 4),
            np.stack([np.full(frames, -1), 2 * np.arange(frames)], axis=1).reshape(-1),
        ),
        joints=runs,
    )


def _run(kind: JointKind, rows: np.ndarray) -> JointRun:
    zeros = np.zeros((len(rows), 3))
    return JointRun(kind, rows, np.full(rows.shape, int(At.ALONG), np.int8), zeros, zeros[:, 0])


def measure(shed: Shed, **options: object) -> tuple[float, float]:
    """Give the microseconds and the bytes that a piece costs."""
    sink = io.BytesIO()
    begun = time.process_time()
    write(shed, sink, **options)  # type: ignore[arg-type]
    spent = time.process_time() - begun
    return spent / len(shed.pieces) * 1e6, len(sink.getvalue()) / len(shed.pieces)


if __name__ == "__main__":
    for count in (10, 102, 1020):
        made = long_shed(count)
        for chosen in (
            {},
            {"shop_joints": False},
            {"full_keys": True},
            {"full_keys": True, "shop_joints": False},
            {"schema": "IFC2X3"},
        ):
            pairs = sum(len(run.pieces) * (run.pieces.shape[1] - 1) for run in made.joints) / len(made.pieces)
            spent, size = measure(made, **chosen)
            print(
                f"{len(made.pieces):7} pieces, {pairs:.2f} pairs each {chosen!s:46} {spent:6.1f} us {size:6.0f} B"
            )
