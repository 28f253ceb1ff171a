"""Which bars are the same thing to make: checked on the solids, which know nothing of how it was decided."""

from __future__ import annotations

from math import cos, pi, sin

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from manifold3d import Manifold

from shedbim.geometry.placements import compose
from shedbim.model.bars import SQUARE, Bar, EndCut, bar_on_axis
from shedbim.model.congruence import congruence, is_free_to_turn, ranks, symmetries
from shedbim.model.solids import solid
from shedbim.sections.profiles import (
    Angle,
    Channel,
    Flat,
    Hollow,
    IShape,
    LippedC,
    LippedZ,
    Pipe,
    Round,
)
from shedbim.sections.section import Profile, Section
from shedbim.tolerance import SAME_LENGTH

PROFILES: dict[str, Profile] = {
    "I": IShape(120.0, 64.0, 4.4, 6.3, 7.0),
    "U": Channel(120.0, 60.0, 5.0, 8.0, 12.0),
    "SHS": Hollow(60.0, 60.0, 4.0, 6.0, 4.0),
    "RHS": Hollow(80.0, 40.0, 4.0, 6.0, 4.0),
    "CHS": Pipe(60.3, 4.0),
    "L": Angle(50.0, 50.0, 6.0, 7.0, 3.5),
    "L unequal": Angle(75.0, 50.0, 6.0, 7.0, 3.5),
    "C": LippedC(150.0, 60.0, 18.0, 2.0, 3.0),
    "Z": LippedZ(150.0, 60.0, 18.0, 2.0, 3.0),
    "FL": Flat(60.0, 14.0),
    "SQ": Flat(20.0, 20.0),
    "RD": Round(24.0),
}
SECTIONS = {name: Section(name, name, profile, "test") for name, profile in PROFILES.items()}
ROUND = {"CHS", "RD"}
#: Of each section by hand: turns about the axis, and mirror axes that allow flips (degrees from y).
TURNS = {"I": 2, "U": 1, "SHS": 4, "RHS": 2, "L": 1, "L unequal": 1, "C": 1, "Z": 2, "FL": 2, "SQ": 4}
MIRRORS = {
    "I": (0, 90), "U": (0,), "SHS": (0, 45, 90, 135), "RHS": (0, 90), "L": (45,), "L unequal": (),
    "C": (0,), "Z": (), "FL": (0, 90), "SQ": (0, 45, 90, 135),
}  # fmt: skip
#: Solids are compared with arcs this near to true; see ``apart``.
CHORD = 0.02

steps = st.integers(-4, 4).map(lambda i: 0.2 * i)
pairs = st.tuples(steps, steps)
cuts = st.one_of(
    st.just(SQUARE),
    pairs.map(lambda p: EndCut((p,))),
    st.builds(lambda p, q, n: EndCut((p, q), notched=n), pairs, pairs, st.booleans()),
)


@st.composite
def bars(draw: st.DrawFn, names: tuple[str, ...] = tuple(SECTIONS)) -> Bar:
    section = SECTIONS[draw(st.sampled_from(names))]
    # Some bars with ends alike, so that symmetric ones are not rare.
    start = draw(cuts)
    end = draw(st.one_of(cuts, st.just(start), st.just(turned_cut(start, np.diag([-1.0, -1.0])))))
    return bar_on_axis(section, draw(st.sampled_from([300.0, 417.3])), start, end)


def turned_cut(cut: EndCut, matrix: np.ndarray) -> EndCut:
    slopes = np.array(cut.slopes) @ matrix.T
    return EndCut(tuple((float(a), float(b)) for a, b in slopes), cut.notched)


def rotation(angle: float) -> np.ndarray:
    return np.array([[cos(angle), -sin(angle)], [sin(angle), cos(angle)]])


def turned(bar: Bar, angle: float) -> Bar:
    """The same steel seen from a frame that is turned about x."""
    q = rotation(angle)
    return Bar(bar.section, bar.length, turned_cut(bar.start, q), turned_cut(bar.end, q))


def reflection(angle: float) -> np.ndarray:
    return rotation(2 * angle) @ np.diag([1.0, -1.0])


def flipped(bar: Bar, angle: float) -> Bar:
    """The same steel seen from the other end, after a half turn about the axis at ``angle`` from y."""
    m = -reflection(angle)
    return Bar(bar.section, bar.length, turned_cut(bar.end, m), turned_cut(bar.start, m))


def mirrored(bar: Bar) -> Bar:
    """The mirror image in the plane across its middle."""
    m = np.diag([-1.0, -1.0])
    return Bar(bar.section, bar.length, turned_cut(bar.end, m), turned_cut(bar.start, m))


def swapped(bar: Bar) -> Bar:
    """The same steel, the two planes of each end named the other way about."""
    start, end = (EndCut(cut.slopes[::-1], cut.notched) for cut in (bar.start, bar.end))
    return Bar(bar.section, bar.length, start, end)


def apart(one: Manifold, other: Manifold, bar: Bar) -> bool:
    """Whether two solids differ by more than the facets of their arcs and the noise can explain."""
    boxes = np.abs(np.subtract(one.bounding_box(), other.bounding_box()))
    if boxes.max() > 0.5 or abs(one.volume() - other.volume()) > 0.01 * bar.volume:
        return True
    facets = (
        CHORD * bar.section.outline.outer_perimeter * 2 * bar.length
        if bar.section.designation in ROUND
        else 0.0
    )
    return bool((one - other).volume() + (other - one).volume() > facets + 1e-5 * bar.volume)


def carries(motion: np.ndarray, inner: Bar, outer: Bar) -> bool:
    return not apart(solid(inner, CHORD).transform(motion), solid(outer, CHORD), outer)


def every_motion(bar: Bar) -> list[np.ndarray]:
    """All turns by eighths and all flips about axes at sixteenths of a turn, whatever the section."""
    found = []
    for i in range(8):
        q = rotation(i * pi / 4)
        found.append(np.block([[np.eye(1), np.zeros((1, 3))], [np.zeros((2, 1)), q, np.zeros((2, 1))]]))
        m = reflection(i * pi / 8)
        found.append(
            np.block(
                [
                    [-np.eye(1), np.zeros((1, 2)), np.full((1, 1), bar.length)],
                    [np.zeros((2, 1)), m, np.zeros((2, 1))],
                ]
            )
        )
    return found


def allowed_change(data: st.DataObject, bar: Bar) -> Bar:
    name = bar.section.designation
    if name in ROUND:
        seen = turned(bar, data.draw(st.floats(0, 6.28)))
        return flipped(seen, 0.0) if data.draw(st.booleans()) else seen
    seen = turned(bar, 2 * pi / TURNS[name] * data.draw(st.integers(0, TURNS[name] - 1)))
    axes = MIRRORS[name]
    if data.draw(st.booleans()) and axes:
        seen = flipped(seen, np.radians(axes[data.draw(st.integers(0, len(axes) - 1))]))
    return swapped(seen) if data.draw(st.booleans()) else seen


@settings(max_examples=80, deadline=None)
@given(st.data())
def test_a_bar_turned_or_flipped_is_the_same_shape(data: st.DataObject) -> None:
    bar = data.draw(bars())
    other = allowed_change(data, bar)
    found = congruence([bar, other], [0, 0])
    assert len(found.shapes) == 1
    assert found.shape_of.tolist() == [0, 0]
    for each, motion, flip in zip((bar, other), found.motion, found.flipped, strict=True):
        assert np.allclose(motion[:, :3] @ motion[:, :3].T, np.eye(3), atol=1e-12)
        assert np.linalg.det(motion[:, :3]) == pytest.approx(1.0)
        assert carries(motion, found.shapes[0], each)
        assert flip == (motion[0, 0] < 0)
    # From whichever end and side one looks, and alone or in company, the shape is the same.
    alone = congruence([other], [0]).shapes[0]
    assert alone.length == found.shapes[0].length
    for cut, same in ((alone.start, found.shapes[0].start), (alone.end, found.shapes[0].end)):
        assert np.allclose(cut.slopes, same.slopes, atol=1e-9)
        assert cut.notched == same.notched


@settings(max_examples=60, deadline=None)
@given(st.data())
def test_a_mirrored_bar_is_another_shape_unless_some_motion_lays_it_on_the_first(data: st.DataObject) -> None:
    name = data.draw(st.sampled_from(list(SECTIONS)))
    bar = data.draw(bars((name,)))
    if name in ROUND:
        # Leaning by eighths of a turn, so that the motions tried below are enough.
        eighths = st.tuples(st.sampled_from([0.3, 0.7]), st.integers(0, 7))
        lean = eighths.map(lambda e: EndCut(((e[0] * cos(e[1] * pi / 4), e[0] * sin(e[1] * pi / 4)),)))
        bar = bar_on_axis(bar.section, 300.0, data.draw(lean), data.draw(lean))
    image = mirrored(bar)
    body, target = solid(image, CHORD), solid(bar, CHORD)
    own_mirror = any(not apart(body.transform(motion), target, bar) for motion in every_motion(bar))
    assert len(congruence([bar, image], [0, 0]).shapes) == (1 if own_mirror else 2)


def unlike_ends(name: str, first: float, second: float) -> tuple[EndCut, EndCut]:
    """Two ends that lean by so many mm at the edge of the section, each in its own way."""
    low_y, low_z, high_y, high_z = SECTIONS[name].outline.bounds
    y, z = max(-low_y, high_y), max(-low_z, high_z)
    if name == "CHS":
        fork, ridge = ((first / y, 0.0), (0.0, first / y)), ((second / y, 0.0), (-second / y, 0.0))
        return EndCut(fork), EndCut(ridge)
    if name == "SHS":
        return EndCut(((first / y, 0.0),)), EndCut(((second / y * cos(pi / 4), second / y * sin(pi / 4)),))
    return EndCut(((first / y, 0.0),)), EndCut(((0.0, second / z),))


@pytest.mark.parametrize("name", ["I", "SHS", "RHS", "CHS"])
@pytest.mark.parametrize("grown", [(0.2, 0.0), (0.0, 0.2)])
@pytest.mark.parametrize("change", range(4))
def test_bars_nearly_equal_whose_canonical_views_are_not(
    name: str, grown: tuple[float, float], change: int
) -> None:
    # Which end leans more, and so comes second, differs by a hair; the motion must look past that.
    plain = Bar(SECTIONS[name], 500.0, *unlike_ends(name, 12.0, 12.1))
    other = Bar(SECTIONS[name], 500.0, *unlike_ends(name, 12.0 + grown[0], 12.0 + grown[1]))
    if change % 2:
        other = turned(other, pi)
    if change // 2:
        other = flipped(other, 0.0)
    found = congruence([plain, other], [0, 0])
    assert len(found.shapes) == 1
    assert found.flipped.tolist() == (found.motion[:, 0, 0] < 0).tolist()
    for bar, motion in zip((plain, other), found.motion, strict=True):
        placed, body = solid(found.shapes[0], 0.002).transform(motion), solid(bar, 0.002)
        shared = (placed ^ body).volume()
        assert placed.volume() + body.volume() - 2 * shared < 2 * SAME_LENGTH * bar.section.area


def test_handed_bars_by_name() -> None:
    lean_y, lean_z, skew = EndCut(((0.5, 0.0),)), EndCut(((0.0, 0.5),)), EndCut(((0.4, 0.2),))

    def count(name: str, cut: EndCut) -> int:
        bar = bar_on_axis(SECTIONS[name], 500.0, SQUARE, cut)
        return len(congruence([bar, mirrored(bar)], [0, 0]).shapes)

    assert [count("I", c) for c in (SQUARE, lean_y, lean_z, skew)] == [1, 1, 1, 2]
    assert [count("C", c) for c in (SQUARE, lean_y, lean_z, skew)] == [1, 1, 2, 2]
    assert [count("L", c) for c in (SQUARE, lean_y, lean_z)] == [1, 2, 2]
    assert count("L", EndCut(((0.4, 0.4),))) == 1
    # A Z and an unequal angle are handed themselves, but cut square they are their own mirror lengthwise.
    assert [count("Z", c) for c in (SQUARE, lean_z)] == [1, 2]
    assert [count("L unequal", c) for c in (SQUARE, lean_y)] == [1, 2]
    assert [count("CHS", c) for c in (SQUARE, lean_y, lean_z, skew)] == [1, 1, 1, 1]


@settings(max_examples=40, deadline=None)
@given(bars())
def test_symmetries_are_those_that_the_solid_has(bar: Bar) -> None:
    found = symmetries(bar)
    assert np.array_equal(found[0], np.eye(3, 4))
    for one in found:
        for other in found:
            product = compose(one, other)
            assert min(np.abs(product - third).max() for third in found) < 1e-6
    if bar.section.designation not in ROUND:
        body = solid(bar, CHORD)
        held = [m for m in every_motion(bar) if not apart(body.transform(m), body, bar)]
        assert len(found) == len(held)
        assert all(min(np.abs(m - other).max() for other in held) < 1e-9 for m in found)
    else:
        assert all(carries(motion, bar, bar) for motion in found)
    flat = all(slope == (0.0, 0.0) for cut in (bar.start, bar.end) for slope in cut.slopes)
    assert is_free_to_turn(bar) == (flat and bar.section.designation in ROUND)


@pytest.mark.parametrize("name", SECTIONS)
def test_lengths_within_the_tolerance_are_one_shape_and_beyond_it_two(name: str) -> None:
    lean = EndCut(((0.3, 0.2),))

    def shapes(stretch: float) -> int:
        pair = [bar_on_axis(SECTIONS[name], 3000.0 + d, lean) for d in (0.0, stretch)]
        return len(congruence(pair, [0, 0]).shapes)

    assert [shapes(d) for d in (0.0, 0.2, 0.499, 0.5, 0.501, 3.0)] == [1, 1, 1, 2, 2, 2]


def test_the_shape_is_the_shortest_and_lies_in_the_middle() -> None:
    square = [Bar(SECTIONS["I"], length) for length in (3000.3, 3000.1, 3000.4)]
    found = congruence(square, [0, 0, 0])
    assert [bar.length for bar in found.shapes] == [3000.1]
    assert found.motion[:, 0, 3] == pytest.approx([0.1, 0.0, 0.15])
    leaning = EndCut(((0.0, 0.4),))
    pair = [
        Bar(SECTIONS["I"], 3000.0, SQUARE, leaning),
        flipped(Bar(SECTIONS["I"], 3000.4, SQUARE, leaning), 0.0),
    ]
    found = congruence(pair, [0, 0])
    assert found.flipped.tolist() == [False, True]
    assert found.motion[1, 0, 3] == pytest.approx(3000.2)


@pytest.mark.parametrize("name", ["I", "C", "L unequal", "CHS"])
def test_cuts_are_compared_by_what_they_move_at_the_edge_of_the_section(name: str) -> None:
    section = SECTIONS[name]
    low, high = section.outline.bounds[0], section.outline.bounds[2]
    edge = max(-low, high)

    def shapes(move: float) -> int:
        pair = [Bar(section, 900.0, EndCut(((a, 0.0),))) for a in (0.3, 0.3 + move / edge)]
        return len(congruence(pair, [0, 0]).shapes)

    assert [shapes(m) for m in (0.3, 0.49, 0.51)] == [1, 1, 2]


def test_no_boundary_parts_equal_bars() -> None:
    rng = np.random.default_rng(5)
    for boundary in (0.0, 0.24999, 0.25, 0.25001, 0.49999, 0.5, 0.50001, 0.75):
        lengths = 4000.0 + boundary + rng.choice([-1e-9, 0.0, 1e-9, 2e-5], 12)
        slopes = 0.25 + boundary / 60 + rng.choice([-1e-11, 0.0, 1e-11], 12)
        mix = [
            Bar(SECTIONS["I"], float(x), SQUARE, EndCut(((0.0, float(s)),)))
            for x, s in zip(lengths, slopes, strict=True)
        ]
        mix = [flipped(bar, pi / 2) if rng.random() < 0.5 else bar for bar in mix]
        assert len(congruence(mix, [0] * 12).shapes) == 1


def test_a_long_chain_of_small_steps_is_not_one_shape() -> None:
    chain = [Bar(SECTIONS["U"], 2000.0 + 0.2 * i) for i in range(40)]
    found = congruence(chain, [0] * 40)
    length = np.array([found.shapes[i].length for i in found.shape_of])
    over = np.array([bar.length for bar in chain]) - length
    assert over.min() >= 0
    assert over.max() < SAME_LENGTH
    # Steps of 0.2: three lie within half a millimetre of the shortest.
    assert np.bincount(found.shape_of).tolist() == [3] * 13 + [1]


def test_classes_keep_equal_bars_apart() -> None:
    bar = Bar(SECTIONS["I"], 1000.0)
    assert congruence([bar, bar, bar], [1, 0, 1]).shape_of.tolist() == [1, 0, 1]


def test_round_bars_fit_by_the_best_turn_when_one_cut_hardly_leans() -> None:
    steep, slight = EndCut(((0.6, 0.0),)), 0.2 / 30.0
    one = Bar(SECTIONS["CHS"], 800.0, EndCut(((slight, 0.0),)), steep)
    other = turned(Bar(SECTIONS["CHS"], 800.0, EndCut(((0.0, slight),)), steep), 1.234)
    found = congruence([one, other], [0, 0])
    assert len(found.shapes) == 1
    relative = found.motion[1, 1:, 1:3] @ found.motion[0, 1:, 1:3].T
    assert np.arctan2(relative[1, 0], relative[0, 0]) == pytest.approx(1.234, abs=0.01)


def test_a_square_end_comes_first_and_slopes_lean_to_positive() -> None:
    bar = Bar(SECTIONS["RHS"], 1000.0, EndCut(((-0.3, -0.1),)), SQUARE)
    shape = congruence([bar], [0]).shapes[0]
    assert shape.start == SQUARE
    assert shape.end == EndCut(((0.3, 0.1),)) or shape.end == EndCut(((0.3, -0.1),))
    tube = congruence([Bar(SECTIONS["CHS"], 1000.0, SQUARE, EndCut(((-0.3, 0.4),)))], [0]).shapes[0]
    assert np.allclose(tube.end.slopes, [(0.5, 0.0)])


def test_two_equal_planes_are_one() -> None:
    double = Bar(SECTIONS["SHS"], 700.0, EndCut(((0.2, 0.0), (0.2, 0.0)), notched=True))
    found = congruence([double, Bar(SECTIONS["SHS"], 700.0, EndCut(((0.2, 0.0),)))], [0, 0])
    assert len(found.shapes) == 1
    assert sorted(len(c.slopes) for c in (found.shapes[0].start, found.shapes[0].end)) == [1, 1]


def test_a_point_is_no_notch() -> None:
    ends = [EndCut(((0.2, 0.0), (-0.2, 0.0)), notched=n) for n in (False, True)]
    assert len(congruence([Bar(SECTIONS["SHS"], 700.0, end) for end in ends], [0, 0]).shapes) == 2


def test_ranks_part_values_by_gaps_only() -> None:
    assert ranks([[3.0, 1.0], [1.0 + 1e-9, 2.0]]).tolist() == [[3, 1], [1, 2]]
    assert ranks([0.0, 0.4, 0.8, 2.0], gap=0.5).tolist() == [1, 1, 1, 2]
    assert ranks([]).shape == (0,)


def test_the_oracle_can_fail() -> None:
    bar = Bar(SECTIONS["I"], 400.0, SQUARE, EndCut(((0.0, 0.2),)))
    other = Bar(SECTIONS["I"], 400.0, SQUARE, EndCut(((0.0, 0.2 + 1 / 60),)))
    assert carries(np.eye(3, 4), bar, bar)
    assert not carries(np.eye(3, 4), bar, other)
    assert not carries(every_motion(bar)[1], bar, bar)
