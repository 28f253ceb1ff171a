"""The truss solver of the tests against published problems, before it judges the web patterns.

Sources named beside the numbers. "published" values come from statics problem sets (method of joints);
"computed here" means by this kind of solver, so those only guard against a change.
"""

from __future__ import annotations

import pytest
from pin_jointed import NotDeterminateError, solve

THREE_DECIMALS = 5e-4  # values below are given to three decimals


def pairs(text: str) -> list[tuple[str, str]]:
    """Read "AB BC" as bars between joints of one letter."""
    return [(word[0], word[1]) for word in text.split()]


def names(text: str) -> list[tuple[str, str]]:
    """Read "r0-m m-r2" as bars."""
    return [(word.split("-")[0], word.split("-")[1]) for word in text.split()]


@pytest.mark.parametrize(("loaded", "de"), [("E", 360.0), ("D", 0.0)])
def test_problem_417(loaded, de):
    # Published statics problem 417, method of joints: RA 120, BD -160, CD -200, CE +320; the rest
    # computed here from the joints they leave (each by hand in one line).
    joints = {"A": (0, 0), "C": (4, 0), "E": (8, 0), "F": (12, 0), "B": (4, 3), "D": (8, 3)}
    forces = solve(
        joints,
        pairs("AB AC BC BD CD CE DE DF EF"),
        {loaded: (0, -360)},
        [("A", "x"), ("A", "y"), ("F", "y")],
    )
    assert forces.reactions == pytest.approx({("A", "x"): 0, ("A", "y"): 120, ("F", "y"): 240})
    published = {"BD": -160, "CD": -200, "CE": 320}
    rest = {"AB": -200, "AC": 160, "BC": 120, "DF": -400, "EF": 320, "DE": de}
    for bar, value in {**published, **rest}.items():
        assert forces[bar[0], bar[1]] == pytest.approx(value, abs=1e-9), bar


def test_three_bars_on_a_wall():
    # Published statics solution (method of joints): AB +52, AC +64, BC -80, Ax -48, Ay 84, C 48.
    forces = solve(
        {"A": (0, 5.25), "B": (3, 4), "C": (0, 0)},
        pairs("AB AC BC"),
        {"B": (0, -84)},
        [("A", "x"), ("A", "y"), ("C", "x")],
    )
    assert forces.bars == pytest.approx({("A", "B"): 52, ("A", "C"): 64, ("B", "C"): -80})
    assert forces.reactions == pytest.approx({("A", "x"): -48, ("A", "y"): 84, ("C", "x"): 48})


def test_howe_roof_of_the_textbooks():
    # Classic textbook Howe roof truss, 32 ft span, 12 ft rise; published answer as a value from memory.
    joints = {
        "A": (0, 0), "C": (8, 0), "E": (16, 0), "G": (24, 0), "H": (32, 0), "B": (8, 6),
        "D": (16, 12), "F": (24, 6),
    }  # fmt: skip
    loads = {"B": (0, -600), "D": (0, -600), "F": (0, -600), "A": (0, -300), "H": (0, -300)}
    forces = solve(
        joints,
        pairs("AC CE EG GH AB BD DF FH BC FG BE EF DE"),
        loads,
        [("A", "x"), ("A", "y"), ("H", "y")],
    )
    assert forces.reactions == pytest.approx({("A", "x"): 0, ("A", "y"): 1200, ("H", "y"): 1200}, abs=1e-9)
    expected = {"AB": -1500, "FH": -1500, "AC": 1200, "CE": 1200, "EG": 1200, "GH": 1200, "BC": 0, "FG": 0}
    expected |= {"BD": -1000, "DF": -1000, "BE": -500, "EF": -500, "DE": 600}
    for bar, value in expected.items():
        assert forces[bar[0], bar[1]] == pytest.approx(value, abs=1e-9), bar


def test_howe_bridge_with_unequal_loads():
    # Published statics problem: geometry, loads and the reactions RA 65, RE 45; member forces computed here.
    joints = {letter: (4.0 * n, 0.0) for n, letter in enumerate("ABCDE")}
    joints |= {letter: (4.0 * n, 4.0) for n, letter in enumerate("JIHGF")}
    forces = solve(
        joints,
        pairs("AB BC CD DE JI IH HG GF AJ BI CH DG EF AI BH DH EG"),
        {"J": (0, -30), "I": (0, -20), "H": (0, -20), "G": (0, -40)},
        [("A", "x"), ("A", "y"), ("E", "y")],
    )
    assert forces.reactions == pytest.approx({("A", "x"): 0, ("A", "y"): 65, ("E", "y"): 45}, abs=1e-9)
    expected = {"AI": -49.497, "AB": 35, "BI": 15, "BH": -21.213, "BC": 50, "CD": 50, "CH": 0, "DH": -7.071}
    expected |= {"DG": 5, "DE": 45, "EG": -63.640, "EF": 0, "IH": -35, "HG": -45, "AJ": -30}
    for bar, value in expected.items():
        assert forces[bar[0], bar[1]] == pytest.approx(value, abs=THREE_DECIMALS), bar


def test_compound_fink():
    # Fink of eight rafter panels at quarter pitch, computed here; the coefficients equal the classical
    # handbook table (value from memory).
    left = {"r0": (0, 0), "r1": (2, 1), "r2": (4, 2), "r3": (6, 3), "m": (5, 0), "a": (2.5, 0), "c": (6.5, 2)}
    joints: dict[str, tuple[float, float]] = {"r4": (8.0, 4.0), **left}
    joints |= {name + "'": (16 - x, y) for name, (x, y) in left.items()}
    half = "r0-r1 r1-r2 r2-r3 r3-r4 r0-a a-m m-c c-r4 r2-m r1-a r3-c r2-a r2-c"
    mirrored = [tuple(end if end == "r4" else end + "'" for end in bar) for bar in names(half)]
    loads = {name: (0.0, -10.0) for name in joints if name.startswith("r")}
    loads |= {"r0": (0.0, -5.0), "r0'": (0.0, -5.0)}
    forces = solve(
        joints,
        [*names(half), *((a, b) for a, b in mirrored), ("m", "m'")],
        loads,
        [("r0", "x"), ("r0", "y"), ("r0'", "y")],
    )
    assert forces.reactions == pytest.approx({("r0", "x"): 0, ("r0", "y"): 40, ("r0'", "y"): 40}, abs=1e-9)
    expected = {
        "r0-r1": -78.262, "r1-r2": -73.790, "r2-r3": -69.318, "r3-r4": -64.846, "r0-a": 70, "a-m": 60,
        "m-m'": 40, "m-c": 20, "c-r4": 30, "r2-m": -17.889, "r1-a": -8.944, "r3-c": -8.944,
        "r2-a": 10, "r2-c": 10,
    }  # fmt: skip
    for bar, value in expected.items():
        assert forces[names(bar)[0]] == pytest.approx(value, abs=THREE_DECIMALS), bar
    for one, other in zip(names(half), mirrored, strict=True):
        assert forces[one] == pytest.approx(forces[other[0], other[1]], abs=1e-9), one


def test_simple_fink():
    # Fink of four rafter panels, span 12, rise 3, tie nodes at the thirds; computed here.
    joints = {
        "r0": (0, 0),
        "r1": (3, 1.5),
        "r2": (6, 3),
        "r3": (9, 1.5),
        "r4": (12, 0),
        "m": (4, 0),
        "n": (8, 0),
    }
    loads = {"r0": (0, -5), "r1": (0, -10), "r2": (0, -10), "r3": (0, -10), "r4": (0, -5)}
    bars = names("r0-r1 r1-r2 r2-r3 r3-r4 r0-m m-n n-r4 r1-m m-r2 r3-n n-r2")
    forces = solve(joints, bars, loads, [("r0", "x"), ("r0", "y"), ("r4", "y")])
    assert forces.reactions == pytest.approx({("r0", "x"): 0, ("r0", "y"): 20, ("r4", "y"): 20}, abs=1e-9)
    expected = {"r0-r1": -33.541, "r1-r2": -27.951, "r0-m": 30, "m-n": 20, "r1-m": -9.014, "m-r2": 9.014}
    for bar, value in expected.items():
        assert forces[names(bar)[0]] == pytest.approx(value, abs=THREE_DECIMALS), bar


def test_what_equilibrium_cannot_solve_is_refused():
    square = {"A": (0, 0), "B": (4, 0), "C": (4, 3), "D": (0, 3)}
    held = [("A", "x"), ("A", "y"), ("B", "y")]
    solve(square, pairs("AB BC CD DA AC"), {}, held)
    with pytest.raises(NotDeterminateError, match="7 unknowns for 8"):
        solve(square, pairs("AB BC CD DA"), {}, held)
    with pytest.raises(NotDeterminateError, match="9 unknowns for 8"):
        solve(square, pairs("AB BC CD DA AC BD"), {}, held)
    # The right count in the wrong place: two squares, one braced twice and one not at all.
    double = {**square, "E": (9, 0), "F": (9, 3)}
    with pytest.raises(NotDeterminateError, match="mechanism"):
        solve(double, pairs("AB BC CD DA AC BD BE EF FC"), {}, held)
