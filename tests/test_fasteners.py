"""Bolts, holes, distances, anchors, welds, plates, gauges and vents against published and stated values."""

from __future__ import annotations

from importlib.resources import files
from itertools import pairwise
from math import pi, sqrt

import pytest

from shedbim.fasteners import rows
from shedbim.fasteners.anchors import anchor, plate_washer
from shedbim.fasteners.bolts import (
    DIAMETERS,
    GRADES,
    LENGTHS,
    bolt,
    bolt_length,
    clear_threads,
    shank_length,
    strength,
    thread_is_clear,
)
from shedbim.fasteners.distances import (
    edge,
    least_edge,
    least_gauge,
    least_pitch,
    pitch,
    wrench_pitch,
    wrench_wall,
)
from shedbim.fasteners.fastener import Fastener
from shedbim.fasteners.fit import Fit
from shedbim.fasteners.gauges import back_mark, cross_centres, double_back_mark, largest_bolt
from shedbim.fasteners.holes import hole_diameter, slot_travel
from shedbim.fasteners.levels import outside
from shedbim.fasteners.nuts import bar_nuts
from shedbim.fasteners.plate_stock import flat_width_at_least, rounded_up, thickness_at_least
from shedbim.fasteners.vents import internal_area, vents
from shedbim.fasteners.welds import least_length, leg, symbol, throat_for
from shedbim.model.welds import Weld
from shedbim.sections.catalogue import designations, section
from shedbim.sections.profiles import Hollow
from shedbim.sections.section import STEEL_DENSITY

TABLES = sorted(
    path.name.removesuffix(".csv") for path in files("shedbim.fasteners").joinpath("data").iterdir()
)

# Tables


@pytest.mark.parametrize("table", TABLES)
def test_every_row_names_its_source_and_holds_numbers(table: str) -> None:
    found = rows.rows_of(table)
    assert found
    for row in found:
        assert row["source"].strip()
        assert None not in row, "a comma in the source splits the row"
        for name, text in row.items():
            if name not in ("source", "table", "grade") and text:
                assert float(text) > 0


def test_tables_by_diameter_hold_all_diameters() -> None:
    assert DIAMETERS == (12, 16, 20, 22, 24, 27, 30, 36)
    for table in ("distances", "plate_washers"):
        assert tuple(rows.by_diameter(table)) == DIAMETERS


def test_stress_areas_are_those_of_the_thread() -> None:
    # ISO 898-1: As = pi/4 ((d2 + d3)/2)^2 = pi/4 (d - 0.9382 P)^2; the table is rounded to three figures.
    for d, row in rows.by_diameter("bolts").items():
        assert row["area"] == pytest.approx(pi / 4 * (d - 0.9382 * row["pitch"]) ** 2, rel=3e-3)


def test_thread_lengths_follow_the_rule_of_the_standard() -> None:
    # ISO 4014: b = 2d + 6 up to 125 mm, 2d + 12 above.
    for d, row in rows.by_diameter("bolts").items():
        assert (row["b_short"], row["b_long"]) == (2 * d + 6, 2 * d + 12)


def test_strengths() -> None:
    # ISO 898-1: the class is ultimate/100 . 10 x yield/ultimate.
    for grade in GRADES:
        hundreds, tenths = grade.split(".")
        found = strength(grade)
        assert found.ultimate == 100 * int(hundreds)
        assert found.yielding == found.ultimate * int(tenths) / 10
    with pytest.raises(ValueError, match=r"5\.6.*4\.6, 8\.8, 10\.9"):
        strength("5.6")


# Bolts

#: diameter, grip, length with one washer, with two: computed by hand from EN 1090-2 8.2.2 and the tables.
GOLDEN = [
    (12, 12, 30, 30),
    (16, 16, 40, 40),
    (16, 20, 40, 45),
    (20, 20, 45, 50),
    (20, 30, 55, 60),
    (20, 40, 65, 70),
    (24, 40, 70, 80),
    (24, 50, 80, 90),
    (30, 60, 100, 100),
]


@pytest.mark.parametrize(("d", "grip", "one", "two"), GOLDEN)
def test_golden_lengths(d: float, grip: float, one: float, two: float) -> None:
    assert bolt(d, "8.8", grip).length == one
    assert bolt(d, "8.8", grip, (1, 1)).length == two


def test_the_least_length_is_enough() -> None:
    # M12: 14.95 + 2.5 + 10.8 + 1.75 = 30.00, and a hair more wants the next length.
    assert bolt_length(12, 14.95) == 30
    assert bolt_length(12, 14.96) == 35
    for d in DIAMETERS:
        row = rows.by_diameter("bolts")[d]
        for grip in range(3, 150):
            for washers in ((0, 0), (0, 1), (1, 1), (1, 2)):
                try:
                    found = bolt(d, "8.8", grip, washers)
                except ValueError:
                    assert grip + sum(washers) * row["washer_h"] + row["m"] + row["pitch"] > LENGTHS[-1]
                    continue
                nut_end = found.stack[-2].end
                assert found.stack[-1].end - nut_end >= row["pitch"] - 1e-9
                shorter = [length for length in LENGTHS if length < found.length]
                if shorter:
                    assert found.stack[-1].end - nut_end < row["pitch"] + found.length - shorter[-1]
                assert thread_is_clear(found)


def test_nuts_do_not_run_on_to_the_shank() -> None:
    # M20 x 45 is threaded up to the head (b 46); M20 x 100 has 54 mm of shank, M16 x 140 (b 44) has 96 mm.
    assert shank_length(20, 45) == 0
    assert shank_length(20, 100) == 54
    assert shank_length(16, 140) == 96
    long = bolt(20, "8.8", 70)
    assert long.length == 100
    assert clear_threads(long) == pytest.approx((70 + 3 - 54) / 2.5)
    # The same bolt through less: 52.9 + 3 - 54 = 1.9 mm, less than a thread of 2.5; a washer more helps.
    short = Fastener("bolt", 20.0, 100.0, "8.8", 52.9, (0, 1), 1, ())
    assert not thread_is_clear(short)
    assert thread_is_clear(Fastener("bolt", 20.0, 100.0, "8.8", 52.9, (0, 2), 1, ()))
    assert thread_is_clear(Fastener("bolt", 20.0, 100.0, "8.8", 53.5, (0, 1), 1, ()))


def test_a_bolt_out_of_range_is_refused_in_words() -> None:
    # 200 - 3 - 18 - 2.5 = 176.5
    assert bolt(20, "8.8", 176.5).length == 200
    with pytest.raises(ValueError, match=r"M20 through 176\.6 mm .*200 mm clamps up to 176\.5 mm"):
        bolt(20, "8.8", 176.6)
    with pytest.raises(ValueError, match="no M14 among M12, M16"):
        bolt(14, "8.8", 20)
    with pytest.raises(ValueError, match=r"no property class 12\.9"):
        bolt(20, "12.9", 20)
    with pytest.raises(ValueError, match="clamps nothing"):
        bolt(20, "8.8", 0)


def test_the_stack_of_a_bolt() -> None:
    found = bolt(16, "10.9", 21, (1, 2))
    # 21 + 3 x 3 + 14.8 + 2 = 46.8 -> 50; the head side lies at z <= 0.
    assert [(disc.form, disc.size, disc.start, disc.end) for disc in found.stack] == [
        ("hexagon", 24, -13, -3),
        ("round", 30, -3, 0),
        ("round", 16, 0, 21),
        ("round", 30, 21, 27),
        ("hexagon", 24, 27, pytest.approx(41.8)),
        ("round", 16, pytest.approx(41.8), 47),
    ]
    assert found.designation == "M16x50 10.9"
    assert (found.grip, found.washers, found.nuts, found.kind) == (21, (1, 2), 1, "bolt")


FASTENERS = [
    *(bolt(d, "8.8", 1.5 * d + 3, washers) for d in DIAMETERS for washers in ((0, 0), (0, 1), (1, 1))),
    *(anchor(d, "4.6", d + 1, 30, 20 * d, nuts=nuts) for d in DIAMETERS for nuts in (1, 2)),
]


@pytest.mark.parametrize("found", FASTENERS, ids=lambda found: f"{found.kind} {found.designation}")
def test_stacks_are_whole(found: Fastener) -> None:
    assert all(one.end == pytest.approx(other.start) for one, other in pairwise(found.stack))
    assert all(disc.start < disc.end and disc.bore == 0 for disc in found.stack)
    # A bolt is measured under its head, an anchor from tip to tip.
    first = found.stack[0].end if found.kind == "bolt" else found.stack[0].start
    assert found.stack[-1].end - first == pytest.approx(found.length)
    # One thread or more stands out of every nut.
    thread = rows.by_diameter("bolts")[found.diameter]["pitch"] - 1e-9
    ends = found.stack[-1:] if found.kind == "bolt" else (found.stack[0], found.stack[-1])
    assert all(tip.form == "round" and tip.end - tip.start >= thread for tip in ends)
    inside = [disc for disc in found.stack if disc.end > 0 and disc.start < found.grip]
    assert [(disc.form, disc.size) for disc in inside] == [("round", found.diameter)]
    assert all(isinstance(value, float) for value in (found.diameter, found.length, found.grip))


def test_masses_of_shank_and_washers() -> None:
    # Grams: round bar 10 mm long, and washers of ISO 7089, computed by hand from their sizes.
    shank = {12: 8.9, 16: 15.8, 20: 24.7, 24: 35.5, 30: 55.5}
    washer = {12: 6.3, 16: 11.3, 20: 17.2, 24: 32.3, 30: 53.6}
    for d, grams in shank.items():
        rod, ring = bolt(d, "8.8", 10).stack[1], bar_nuts(d, "4.6", 2).stack[1]
        assert rod.volume * STEEL_DENSITY * 1e3 == pytest.approx(grams, abs=0.06)
        assert ring.volume * STEEL_DENSITY * 1e3 == pytest.approx(washer[d], abs=0.06)


def test_outside_leaves_what_stands_out_of_the_layers() -> None:
    found = bolt(20, "8.8", 25, (1, 1))
    left = outside(found)
    assert left.stack == (*found.stack[:2], *found.stack[3:])
    assert (left.designation, left.washers, left.nuts) == (found.designation, found.washers, found.nuts)
    # The rod of an anchor runs on below the plate; what is left of it starts there.
    rod = anchor(24, "8.8", 20, 35, 450)
    assert sum(disc.volume for disc in rod.stack) - outside(rod).volume == pytest.approx(pi / 4 * 24**2 * 20)
    assert next(disc.start for disc in outside(rod).stack if disc.start > 0) == 20
    assert outside(outside(rod)) == outside(rod)
    nuts = bar_nuts(12, "4.6", 2)
    assert outside(nuts) == nuts


def test_anchors() -> None:
    found = anchor(24, "8.8", 25, 40, 500)
    side, thick = plate_washer(24)
    # Bearing of the lower plate: 25 + 40 + 500; above: washer, nut, at least a thread of 3 mm.
    lower = found.stack[4]
    assert (lower.form, lower.size, lower.start, lower.end) == ("square", side, 565, 565 + thick)
    least = 565 + 2 * thick + 2 * 21.5 + 2 * 3
    assert least <= found.length < least + 10
    assert found.length % 10 == 0
    assert (found.kind, found.grip, found.nuts) == ("anchor", 25, 2)
    locked = anchor(24, "8.8", 25, 40, 500, nuts=2)
    assert (locked.nuts, locked.stack[1].end - locked.stack[1].start) == (3, 2 * 21.5)
    with pytest.raises(ValueError, match="no anchor"):
        anchor(24, "8.8", 25, 40, 0)


@pytest.mark.parametrize("d", DIAMETERS)
def test_plate_washers_cover_their_holes(d: float) -> None:
    side, thick = plate_washer(d)
    hole = hole_diameter(d, Fit.CAST_IN)
    # Even where the anchor stands against one side of the hole, the washer bears on half a diameter beyond it.
    assert side / 2 - (hole - d) / 2 - hole / 2 >= d / 2
    assert thick >= 0.45 * d
    # The nut sits on it whole.
    assert side >= rows.by_diameter("bolts")[d]["s"] * 2 / sqrt(3)


def test_nuts_of_a_bar_stand_on_either_side_and_let_it_pass() -> None:
    found = bar_nuts(16, "4.6", 2.5)
    assert [(disc.form, disc.start, disc.end) for disc in found.stack] == [
        ("hexagon", pytest.approx(-17.8), -3),
        ("round", -3, 0),
        ("round", 2.5, 5.5),
        ("hexagon", 5.5, pytest.approx(20.3)),
    ]
    assert all(disc.bore == 17 for disc in found.stack)
    assert (found.kind, found.length, found.nuts, found.washers) == ("nuts", 0, 2, (1, 1))
    assert found.designation == "M16 4.6"
    with pytest.raises(ValueError, match="no M10"):
        bar_nuts(10, "4.6", 2.5)


# Holes and distances


def test_normal_holes() -> None:
    # EN 1090-2 Table 11.
    expected = {12: 13, 16: 18, 20: 22, 22: 24, 24: 26, 27: 30, 30: 33, 36: 39}
    assert {d: hole_diameter(d) for d in DIAMETERS} == expected


def test_oversize_and_slotted_holes() -> None:
    # EN 1090-2 Table 11, clearance on diameter and on the overall length of slots.
    oversize: dict[float, float] = {12: 3, 16: 4, 20: 4, 22: 4, 24: 6, 27: 8, 30: 8, 36: 8}
    short: dict[float, float] = {12: 4, 16: 6, 20: 6, 22: 6, 24: 8, 27: 10, 30: 10, 36: 10}
    for d in DIAMETERS:
        assert hole_diameter(d, Fit.OVERSIZE) == d + oversize[d]
        for fit, overall in ((Fit.SHORT_SLOT, d + short[d]), (Fit.LONG_SLOT, 2.5 * d)):
            assert hole_diameter(d, fit) == hole_diameter(d)
            assert hole_diameter(d, fit) + slot_travel(d, fit) == overall
        assert [slot_travel(d, fit) for fit in (Fit.NORMAL, Fit.OVERSIZE, Fit.CAST_IN)] == [0, 0, 0]


def test_holes_for_threaded_bars() -> None:
    # Common practice: sag bars of 12 and 16 mm in holes of 14 and 18 mm; larger bars as bolts.
    assert {d: hole_diameter(d, Fit.BAR) for d in (12, 16)} == {12: 14, 16: 18}
    assert all(hole_diameter(d, Fit.BAR) == hole_diameter(d) for d in DIAMETERS if d > 16)
    assert slot_travel(12, Fit.BAR) == 0


def test_holes_over_anchors() -> None:
    # Common practice: 6 mm more up to M24, 10 mm above.
    expected = {12: 18, 16: 22, 20: 26, 22: 28, 24: 30, 27: 37, 30: 40, 36: 46}
    assert {d: hole_diameter(d, Fit.CAST_IN) for d in DIAMETERS} == expected
    with pytest.raises(ValueError, match="no hole"):
        hole_diameter(0)


def test_least_distances() -> None:
    # EN 1993-1-8 Table 3.3 for d0 22: 26.4, 48.4, 52.8, as in a published calculation sheet.
    assert (least_edge(22), least_pitch(22), least_gauge(22)) == pytest.approx((26.4, 48.4, 52.8))


@pytest.mark.parametrize("d", DIAMETERS)
def test_usual_distances_hold_the_least_ones_and_the_wrench(d: float) -> None:
    # Within the usual workshop rules: e from 1.5 d0 to a little over 2 d, p from 2.5 d to a little over 3.5 d.
    assert 1.5 * hole_diameter(d) <= edge(d) <= 2.1 * d
    assert 2.5 * d <= pitch(d) <= 3.75 * d
    assert pitch(d) >= max(least_gauge(hole_diameter(d)), wrench_pitch(d))
    assert edge(d) >= wrench_wall(d)
    # Two heads side by side do not touch, and a washer lies clear of a wall.
    row = rows.by_diameter("bolts")[d]
    assert wrench_pitch(d) > row["s"] * 2 / sqrt(3)
    assert wrench_wall(d) > row["s"] / sqrt(3) - 2


def test_wrench_access() -> None:
    # A data handbook's table for hexagon heads of the standard series.
    seen = {12: (42, 16), 16: (50, 20), 20: (60, 22), 24: (75, 25), 30: (94, 30), 36: (104, 34)}
    assert {d: (wrench_pitch(d), wrench_wall(d)) for d in seen} == seen


# Plates and welds


def test_plate_stock() -> None:
    assert [thickness_at_least(t) for t in (1, 5, 5.1, 12, 12.0000001, 13, 60)] == [5, 5, 6, 12, 12, 15, 60]
    with pytest.raises(ValueError, match="60"):
        thickness_at_least(60.5)
    assert [rounded_up(size) for size in (100, 100.0000001, 100.1, 99.9)] == [100, 100, 110, 100]
    assert rounded_up(141, 25) == 150
    assert [flat_width_at_least(w) for w in (50, 51, 141, 151)] == [50, 60, 150, 160]
    with pytest.raises(ValueError, match="300"):
        flat_width_at_least(301)


def test_throats() -> None:
    # EN 1993-1-8 4.5.2: never below 3 mm; else half of the thickness.
    assert [throat_for(t) for t in (2, 6, 6.1, 8, 9, 10.1, 12, 12.1)] == [3, 3, 3.5, 4, 4.5, 6, 6, 7]
    # Full strength from both sides: 0.46, 0.48, 0.55 t; 7.36, 7.68 and 8.8 for 16 mm, 3.68 and 4.4 for 8 mm.
    assert [throat_for(16, steel, True) for steel in ("S235", "S275J0", "S355J2H")] == [8, 8, 9]
    assert [throat_for(8, steel, True) for steel in ("S235JR", "S355")] == [4, 4.5]
    # One side has to do what two do.
    assert throat_for(5, "S355", True, sides=1) == 6
    assert throat_for(5, "S355", True) == 3
    # A name that is not known is taken as the strongest steel.
    assert throat_for(20, "A992", True) == throat_for(20, "S460", True) > throat_for(20, "S355", True)


@pytest.mark.parametrize(
    ("fy", "fu", "beta", "steel"),
    [(235, 360, 0.8, "S235"), (275, 430, 0.85, "S275"), (355, 510, 0.9, "S355")],
)
def test_full_strength_throats_follow_from_the_directional_method(
    fy: float, fu: float, beta: float, steel: str
) -> None:
    # EN 1993-1-8 4.5.3.2, transverse load on fillets from both sides: sqrt2 F / (2 a) <= fu / (beta gamma_M2).
    needed = 1000 * fy * beta * 1.25 / (sqrt(2) * fu)
    assert throat_for(1000, steel, True) == pytest.approx(needed, rel=0.01)


def test_legs_and_lengths() -> None:
    # Legs on drawings: throats 2.1, 2.8, 3.5, 4.2 are legs 3, 4, 5, 6.
    assert [leg(a) for a in (2.1, 2.8, 3.5, 4.2)] == pytest.approx([3, 4, 5, 6], abs=0.07)
    assert leg(5) == pytest.approx(7.0711, abs=1e-4)
    # EN 1993-1-8 4.5.1.
    assert [least_length(a) for a in (3, 5, 6)] == [30, 30, 36]


def test_symbols() -> None:
    # ISO 2553: size before the sign, length after it; circle for all round, flag for site.
    assert symbol(Weld((0, 1), "fillet", 4.0, 620.4)) == "a4 ◺ 620"
    assert symbol(Weld((0, 1), "fillet", 3.5, 88.0, all_round=True)) == "a3.5 ◺ 88 ○ all round"
    assert symbol(Weld((0, 1), "butt", 8.0, 300.0, site=True)) == "s8 ‖ 300 ⚑ site"
    both = symbol(Weld((0, 1), "fillet", 5.0, 100.0, site=True, all_round=True))
    assert both == "a5 ◺ 100 ○ all round ⚑ site"
    with pytest.raises(ValueError, match="plug"):
        symbol(Weld((0, 1), "plug", 5.0, 100.0))


# Gauges


def test_back_marks() -> None:
    # Common practice, values from memory.
    expected = {
        50: (28, 12), 60: (35, 16), 65: (35, 20), 70: (40, 20), 75: (45, 20), 80: (45, 20), 90: (50, 24),
        100: (55, 24), 120: (65, 24),
    }  # fmt: skip
    assert {size: back_mark(size) for size in expected} == expected
    assert back_mark(79) == (45, 20)
    assert double_back_mark(120) == (45, 50, 16)
    assert double_back_mark(150) == (55, 55, 20)
    with pytest.raises(ValueError, match="39"):
        back_mark(39)
    with pytest.raises(ValueError, match="119"):
        double_back_mark(119)


def test_back_marks_hold_edges_and_the_wrench() -> None:
    """The same for every angle of the catalogue that takes bolts, in either leg."""
    seen = 0
    for name in designations("L"):
        h, b, t = (float(number) for number in name.removeprefix("L ").split("x"))
        for size in {h, b}:
            if size < 40:
                continue
            mark, largest = back_mark(size)
            assert size - mark >= least_edge(hole_diameter(largest)), name
            seen += 1
            if t <= size / 6:
                assert mark - t >= wrench_wall(largest), name
            if size >= 120:
                first, apart, most = double_back_mark(size)
                assert size - first - apart >= least_edge(hole_diameter(most)) - 1e-9, name
    assert seen > 150


def test_cross_centres() -> None:
    # Common practice, values from memory.
    expected = {
        "IPE 120": 36, "IPE 140": 40, "IPE 160": 44, "IPE 180": 50, "IPE 200": 56, "IPE 220": 60, "IPE 240": 68,
        "IPE 270": 72, "IPE 300": 80, "IPE 330": 86, "IPE 360": 90, "IPE 400": 96, "IPE A 300": 80, "IPE O 180": 50,
        "HEB 100": 56, "HEA 120": 66, "HEB 140": 76, "HEA 160": 86, "HEB 180": 100, "HEA 200": 110, "HEB 220": 120,
        "UB 254x102x25": 54, "UB 203x133x25": 70, "UB 254x146x31": 70, "UB 457x152x52": 70, "UB 356x171x45": 90,
        "UB 406x178x60": 90, "UB 457x191x67": 90, "UB 533x210x92": 90,
        "UC 152x152x30": 90, "UC 203x203x46": 140, "UC 254x254x73": 140, "UC 305x305x97": 140,
    }  # fmt: skip
    assert {name: cross_centres(section(name)) for name in expected} == expected
    with pytest.raises(ValueError, match="SHS 100x100x5 has no flanges"):
        cross_centres(section("SHS 100x100x5"))
    with pytest.raises(ValueError, match="IPE 100 is 55 mm wide"):
        cross_centres(section("IPE 100"))


def test_largest_bolts_of_flanges() -> None:
    # IPE 300: edge (150 - 80) / 2 = 35 takes a hole of 24 (28.8); beside the web (80 - 7.1) / 2 - 15 = 21.45 takes
    # the washer of M22 (39 / 2), not that of M24 (44 / 2).
    assert largest_bolt(section("IPE 300")) == 22
    # At 100 across: the edge of 25 takes a hole of 18 (21.6), not one of 22 (26.4).
    assert largest_bolt(section("IPE 300"), 100) == 16
    with pytest.raises(ValueError, match="no bolt fits the flange of IPE 120"):
        largest_bolt(section("IPE 120"))


# Vents


def test_vents_by_the_table() -> None:
    # Galvanizers' guidance: the first row that both sizes are less than; 1, 2 or 4 holes for each end, up to 2.8 m.
    expected = {
        "SHS 40x40x4": (1, 16), "SHS 60x60x4": (1, 25), "SHS 100x100x5": (1, 40), "SHS 90x90x5": (1, 30),
        "RHS 80x40x4": (1, 25), "RHS 120x80x6": (1, 60), "RHS 100x50x4": (1, 30), "CHS 114.3x5": (1, 40),
    }  # fmt: skip
    found = {name: vents(section(name), 2800) for name in expected}
    assert {name: (item.count, item.diameter) for name, item in found.items()} == expected
    # A hole of 120 mm is more than half of a face of 200 mm: two of 80 mm in faces that lie opposite.
    assert vents(section("SHS 200x200x8"), 2000) == vents(section("SHS 200x200x8"), 500)
    assert (vents(section("SHS 200x200x8"), 2000).count, vents(section("SHS 200x200x8"), 2000).diameter) == (
        2,
        80,
    )


def test_longer_bars_are_open_by_a_share_of_their_inside() -> None:
    # SHS 100x100x5: 90 x 90 less its corners (inner radius 5) = 8078.5 mm2, of which 30 % = 2424 mm2: two holes of
    # 39.3 mm, drilled 40. One of 55.6 mm would be more than half of the face.
    tube = section("SHS 100x100x5")
    assert internal_area(tube) == pytest.approx(90 * 90 - (4 - pi) * 25)
    found = vents(tube, 2801)
    assert (found.count, found.diameter) == (2, 40)
    assert found.area == pytest.approx(2 * pi / 4 * 1600)
    # The deep faces of a rectangle come first.
    assert vents(section("RHS 200x100x8"), 6000).faces == ((1.0, 0.0),)


@pytest.mark.parametrize("family", ["SHS", "RHS", "CHS", "HF SHS", "HF RHS"])
def test_vents_of_every_tube(family: str) -> None:
    for name in designations(family):
        tube = section(name)
        assert vents(tube, 2000).area > 0
        found = vents(tube, 6000)
        assert found.area >= 0.30 * internal_area(tube) - 1e-6, name
        assert len(set(found.faces)) == found.count, name
        profile = tube.profile
        if isinstance(profile, Hollow):
            for y, _ in found.faces:
                across = profile.h if y else profile.b
                assert found.diameter <= min(across / 2, across - 2 * profile.ro), name


def test_vents_of_what_is_not_hollow() -> None:
    with pytest.raises(ValueError, match="IPE 300 is not hollow"):
        vents(section("IPE 300"), 6000)
