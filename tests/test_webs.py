"""Web patterns: named by the signs of their forces under gravity, determinate, mirrored with their line.

Forces come from the solver in pin_jointed.py, which test_pin_jointed.py holds against published problems.
Every test that runs over PATTERNS takes a new pattern in by itself.
"""

from __future__ import annotations

import pkgutil
from collections import Counter
from dataclasses import replace
from itertools import pairwise

import numpy as np
import pytest
from hypothesis import assume, given
from hypothesis import strategies as st
from trusses import (
    SPECIMENS,
    Node,
    Solved,
    between,
    crooked_trusses,
    gable_trusses,
    lines,
    nodes_and_bars,
    solved,
    straight,
    straight_trusses,
    takes,
)

import shedbim.webs
from shedbim.errors import ModelError
from shedbim.webs import PATTERNS
from shedbim.webs.pattern import pattern_table
from shedbim.webs.topology import Topology, TrussLine, Web

THREE_DECIMALS = 5e-4  # the values of the worked examples are given to three decimals
NO_FORCE = 1e-9  # of the largest force in the truss: rounding of the solver

CAST = [
    pytest.param(name, shape, id=f"{name}: {word}")
    for name in PATTERNS
    for word, shape in SPECIMENS.items()
    if takes(name, shape.line)
]


# The names


@pytest.mark.parametrize("form", ["straight", "gable", "crooked"])
@given(data=st.data())
def test_gravity_pulls_pratt_diagonals_and_presses_howe_diagonals(form, data):
    shape = data.draw(
        {"straight": straight_trusses(), "gable": gable_trusses(), "crooked": crooked_trusses()}[form]
    )
    pratt, howe = solved("pratt", shape), solved("howe", shape)
    assert len(pratt.diagonals()) == shape.line.panels - (0 if shape.line.end_posts else 2)
    assert all(force >= -NO_FORCE * pratt.largest for force in pratt.diagonals())
    assert all(force <= NO_FORCE * howe.largest for force in howe.diagonals())


@given(st.integers(1, 8), between(6, 60), between(0.3, 4))
def test_warren_diagonals_alternate_from_compression_at_the_support(half, span, depth):
    for name, panels in [("warren", 2 * half), ("warren", 2 * half + 1), ("warren-with-posts", 2 * half)]:
        result = solved(name, straight(panels, span, depth))
        forces = result.diagonals()[: len(result.diagonals()) // 2]
        if name == "warren" and panels % 2 == 0:
            assert abs(forces.pop()) < NO_FORCE * result.largest  # at midspan, where there is no shear
        assert [force > 0 for force in forces] == [number % 2 == 1 for number in range(len(forces))]


def test_diagonals_run_as_the_trade_draws_them():
    def first(name: str, word: str) -> tuple[int, int]:
        diagonals = [
            web for web in PATTERNS[name].topology(SPECIMENS[word].line).webs if web.kind == "diagonal"
        ]
        return diagonals[0].bottom, diagonals[0].top

    # Common practice: parallel chords, Pratt falls towards midspan and Howe rises; triangular, the reverse.
    assert first("pratt", "level, even") == (1, 0)
    assert first("howe", "level, even") == (0, 1)
    assert first("pratt", "triangular") == (1, 2)
    assert first("howe", "triangular") == (2, 1)


# Worked examples


def test_pratt_howe_and_warren_with_posts_between_parallel_chords():
    # 18 m, 6 panels, 1.8 m deep, 20 kN on inner top nodes and 10 on the end ones; computed here by joint
    # equilibrium, chords also by M/h and diagonals by V/sin in the closed form.
    shape = SPECIMENS["level, even"]
    expected = {
        "pratt": {
            "b0b1": 0, "b1b2": 83.333, "b2b3": 133.333, "t0t1": -83.333, "t1t2": -133.333, "t2t3": -150,
            "b0t0": -60, "b1t1": -50, "b2t2": -30, "b3t3": -20,
            "t0b1": 97.183, "t1b2": 58.310, "t2b3": 19.437,
        },
        "howe": {
            "b0b1": 83.333, "b1b2": 133.333, "b2b3": 150, "t0t1": 0, "t1t2": -83.333, "t2t3": -133.333,
            "b0t0": -10, "b1t1": 30, "b2t2": 10, "b3t3": 0, "b0t1": -97.183, "b1t2": -58.310, "b2t3": -19.437,
        },
        "warren-with-posts": {
            "b0b1": 83.333, "b1b2": 83.333, "b2b3": 150, "t0t1": 0, "t1t2": -133.333, "t2t3": -133.333,
            "b0t0": -10, "b1t1": 0, "b2t2": -20, "b3t3": 0, "b0t1": -97.183, "t1b2": 58.310, "b2t3": -19.437,
        },
    }  # fmt: skip
    for name, values in expected.items():
        check_symmetric(solved(name, shape, load=20 / 3), values, mirror={"b": 6, "t": 6})


def test_warren_between_parallel_chords():
    # 18 m, 6 panels, 1.8 m deep, 20 kN on the 6 top nodes; computed here by joint equilibrium.
    expected = {
        "b0b1": 50, "b1b2": 116.667, "b2b3": 150, "t0t1": -83.333, "t1t2": -133.333, "t2t3": -150,
        "b0t0": -78.102, "t0b1": 52.068, "b1t1": -52.068, "t1b2": 26.034, "b2t2": -26.034, "t2b3": 0,
    }  # fmt: skip
    result = solved("warren", SPECIMENS["level, even"], load=20 / 3)
    assert set(result.loads.values()) == {20.0}
    check_symmetric(result, expected, mirror={"b": 6, "t": 5})


def test_pratt_and_howe_under_rafters():
    # 18 m, rise 3 m, 6 panels, 10 kN on rafter nodes and 5 at the heels; computed here by joint equilibrium.
    expected = {
        "pratt": {
            "b0b1": 75, "b1b2": 60, "b2b3": 45, "b0t1": -79.057, "t1t2": -79.057, "t2t3": -63.246,
            "b1t1": -10, "b2t2": -15, "b3t3": 0, "b1t2": 18.028, "b2t3": 21.213,
        },
        "howe": {
            "b0b1": 75, "b1b2": 75, "b2b3": 60, "b0t1": -79.057, "t1t2": -63.246, "t2t3": -47.434,
            "b1t1": 0, "b2t2": 5, "b3t3": 20, "t1b2": -15.811, "t2b3": -18.028,
        },
    }  # fmt: skip
    for name, values in expected.items():
        result = solved(name, SPECIMENS["triangular"], load=10 / 3)
        check_symmetric(result, values, mirror={"b": 6, "t": 6})


def check_symmetric(result: Solved, expected: dict[str, float], mirror: dict[str, int]) -> None:
    """Hold every bar against the expected forces, which name the left half only."""
    seen = set()
    for bar, value in expected.items():
        image = "".join(f"{bar[at]}{mirror[bar[at]] - int(bar[at + 1])}" for at in (0, 2))
        assert result[bar] == pytest.approx(value, abs=THREE_DECIMALS), bar
        assert result[image] == pytest.approx(value, abs=THREE_DECIMALS), image
        seen |= {frozenset([(name[0], int(name[1])), (name[2], int(name[3]))]) for name in (bar, image)}
    assert {frozenset(bar) for bar in result.forces.bars} == seen


# Statics that every pattern obeys


@pytest.mark.parametrize(("name", "shape"), CAST)
def test_every_pattern_is_just_determinate(name, shape):
    places, _, chords, webs = nodes_and_bars(PATTERNS[name].topology(shape.line), shape)
    bars = len(chords["b"]) + len(chords["t"]) + len(webs)
    assert bars == 2 * len(places) - 3
    solved(name, shape)  # refused if it were a mechanism all the same


@pytest.mark.parametrize(("name", "shape"), CAST)
def test_chord_forces_are_moment_over_depth_at_the_opposite_node(name, shape):
    # Closed form (method of sections): moments about the node opposite a chord bar.
    result = solved(name, shape, load=3.7)
    neighbours: dict[Node, set[Node]] = {node: set() for node in result.places}
    for a, b in result.forces.bars:
        neighbours[a].add(b)
        neighbours[b].add(a)
    for chord, sign in [("b", 1), ("t", -1)]:
        for a, b in result.chords[chord]:
            (opposite,) = neighbours[a] & neighbours[b]  # each chord bar closes one triangle
            (xa, za), (xb, zb), (x, z) = (result.places[node] for node in (a, b, opposite))
            slope = (zb - za) / (xb - xa)
            depth = abs(z - za - slope * (x - xa))
            moment = result.moment(x, until=xa if chord == "t" else x)  # loads left of the cut
            along = result.forces[a, b] / np.hypot(1, slope)
            assert along == pytest.approx(sign * moment / depth, abs=NO_FORCE * result.largest)


@given(between(6, 60), between(0.3, 4), st.integers(2, 10))
def test_parallel_chords_carry_moment_over_height(span, height, panels):
    # Closed form M/h: a diagonal in tension leaves the smaller moment of its panel to the bottom chord.
    points = np.linspace(0, span, panels + 1)
    at_points = points * (span - points) / 2 / height
    smaller, larger = (pick(at_points[:-1], at_points[1:]) for pick in (np.minimum, np.maximum))
    for name, bottom, top in [("pratt", smaller, larger), ("howe", larger, smaller)]:
        result = solved(name, straight(panels, span, height))
        for chord, expected in [("b", bottom), ("t", -top)]:
            forces = [result.forces[bar] for bar in result.chords[chord]]
            assert forces == pytest.approx(list(expected), abs=NO_FORCE * result.largest)


# Shape


@pytest.mark.parametrize("name", PATTERNS)
@given(line=lines())
def test_nodes_and_webs_are_in_order_and_in_use(name, line):
    assume(takes(name, line))
    topology = PATTERNS[name].topology(line)
    for row in (topology.top, topology.bottom):
        assert all(0 <= node <= line.panels for node in row)
        assert all(a < b for a, b in pairwise(row))
    assert len({(web.bottom, web.top) for web in topology.webs}) == len(topology.webs)
    ends = [(topology.bottom[web.bottom], topology.top[web.top]) for web in topology.webs]
    middles = [sum(pair) / 2 for pair in ends]
    assert all(a < b for a, b in pairwise(middles))
    for web, (bottom, top) in zip(topology.webs, ends, strict=True):
        assert (web.kind == "post") == (bottom == top)
        assert abs(bottom - top) <= 1
    used = {("b", web.bottom) for web in topology.webs} | {("t", web.top) for web in topology.webs}
    for chord, row in [("b", topology.bottom), ("t", topology.top)]:
        for number, node in enumerate(row):
            reached = line.end_posts or 0 < node < line.panels
            assert ((chord, number) in used) == reached
    for kink, row in [(line.top_kink, topology.top), (line.bottom_kink, topology.bottom)]:
        assert not kink or line.ridge in row


def mirrored(topology: Topology, panels: int) -> Topology:
    return Topology(
        top=tuple(panels - node for node in reversed(topology.top)),
        bottom=tuple(panels - node for node in reversed(topology.bottom)),
        webs=tuple(
            Web(web.kind, len(topology.bottom) - 1 - web.bottom, len(topology.top) - 1 - web.top)
            for web in reversed(topology.webs)
        ),
    )


@pytest.mark.parametrize("name", PATTERNS)
@given(line=lines())
def test_a_mirrored_line_has_mirrored_webs(name, line):
    assume(takes(name, line))
    half = line.panels // 2
    tied_middle = line.ridge is None and line.panels % 2 and line.leverage[half] == line.leverage[half + 1]
    assume(not (tied_middle and name in {"pratt", "howe"}))  # no symmetric diagonal, see the next test
    ridge = None if line.ridge is None else line.panels - line.ridge
    other = replace(line, ridge=ridge, leverage=line.leverage[::-1])
    assert PATTERNS[name].topology(other) == mirrored(PATTERNS[name].topology(line), line.panels)


@pytest.mark.parametrize("name", ["pratt", "howe"])
def test_the_idle_middle_panel_of_an_odd_truss_is_the_only_asymmetry(name):
    shape = straight(7, 24.5, 1.6)
    topology = PATTERNS[name].topology(shape.line)
    webs, images = Counter(topology.webs), Counter(mirrored(topology, 7).webs)
    assert {web.bottom + web.top for web in (webs - images)} == {3 + 4}
    idle = [force for force in solved(name, shape).diagonals() if abs(force) < 1e-9]
    assert len(idle) == 1
    for noise in (1 - 1e-15, 1 + 1e-15):  # rounding of the caller must not turn it over
        values = list(shape.line.leverage)
        values[4] = values[3] * noise
        assert PATTERNS[name].topology(replace(shape.line, leverage=tuple(values))) == topology


def test_posts_stand_at_every_panel_point_but_where_chords_meet():
    for name in ("pratt", "howe", "warren-with-posts"):
        for shape in SPECIMENS.values():
            if takes(name, shape.line):
                webs = PATTERNS[name].topology(shape.line).webs
                first = 0 if shape.line.end_posts else 1
                posts = [web.bottom for web in webs if web.kind == "post"]
                assert posts == list(range(first, shape.line.panels + 1 - first))


def test_warren_takes_a_ridge_post_only_where_the_top_chord_kinks():
    line = TrussLine(5, 2, top_kink=True, bottom_kink=True, leverage=(0, 2, 3, 3, 2, 0))
    topology = PATTERNS["warren"].topology(line)
    assert topology.top == (0.5, 1.5, 2, 2.5, 3.5, 4.5)
    assert topology.bottom == (0, 1, 2, 3, 4, 5)
    assert [web for web in topology.webs if web.kind == "post"] == [Web("post", bottom=2, top=2)]
    for other in (
        replace(line, top_kink=False),
        replace(line, ridge=None, top_kink=False, bottom_kink=False),
    ):
        webs = PATTERNS["warren"].topology(other).webs
        assert [web.kind for web in webs] == ["diagonal"] * 10


def test_warren_with_posts_alternates_from_both_supports_to_an_unequal_ridge():
    line = TrussLine(7, 3, top_kink=True, bottom_kink=False, leverage=(0, 1, 2, 3, 3, 2, 1, 0))
    webs = PATTERNS["warren-with-posts"].topology(line).webs
    diagonals = [(web.bottom, web.top) for web in webs if web.kind == "diagonal"]
    assert diagonals == [(0, 1), (2, 1), (2, 3), (3, 4), (5, 4), (5, 6), (7, 6)]


def test_an_odd_straight_warren_with_posts_is_refused():
    with pytest.raises(ModelError, match="even number of panels, not 7"):
        PATTERNS["warren-with-posts"].topology(SPECIMENS["level, odd"].line)


@pytest.mark.parametrize(
    ("change", "message"),
    [
        ({"panels": 0}, "at least 1 panels, not 0"),
        ({"panels": 1, "end_posts": False}, "at least 2 panels, not 1"),
        ({"ridge": 4}, "ridge 4 is not between"),
        ({"ridge": 0}, "ridge 0 is not between"),
        ({"ridge": None}, "no ridge"),
        ({"panels": 5}, "5 panels need 6 leverages, not 5"),
        ({"leverage": (0, 1, float("nan"), 1, 0)}, "finite"),
    ],
)
def test_a_line_that_contradicts_itself_is_refused(change, message):
    line = TrussLine(4, 2, top_kink=True, bottom_kink=False, leverage=(0, 1, 2, 1, 0))
    with pytest.raises(ModelError, match=message):
        replace(line, **change)


# The table


def test_each_pattern_is_one_file_and_one_row():
    shared = {"topology", "pattern", "tension", "posted"}
    files = {module.name for module in pkgutil.iter_modules(shedbim.webs.__path__)} - shared
    assert {name.replace("-", "_") for name in PATTERNS} == files
    for name, pattern in PATTERNS.items():
        assert pattern.name == name
        assert pattern.topology.__module__ == f"shedbim.webs.{name.replace('-', '_')}"
        assert pattern.description


def test_the_table_refuses_doubles_and_changes():
    rows = list(PATTERNS.values())
    assert pattern_table(rows) == PATTERNS
    with pytest.raises(ModelError, match="'howe' is listed twice"):
        pattern_table([*rows, replace(rows[0], name="howe")])
    with pytest.raises(TypeError):
        PATTERNS["pratt"] = rows[0]
