"""The schedules of plates, holes, bolts, anchors, welds, finishes, part lists: known numbers, sums on the cast."""

from __future__ import annotations

from collections import Counter, defaultdict
from math import pi, sqrt

import pytest
from specimens_fittings import ANCHOR_PLACES, COLUMNS, PARTS, fitted

from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.roles import Sort
from shedbim.writers.schedules import fasteners, fittings, tables
from shedbim.writers.schedules.table import Table, Total

STEEL = 7850e-9  # kg/mm3


def rows_of(table: Table) -> list[dict[str, object]]:
    names = [column.name for column in table.columns]
    return [dict(zip(names, row, strict=True)) for row in table.rows]


def whole(table: Table, name: str) -> float:
    return table.total(Total(""), name)


# Known numbers


def test_plates_say_what_they_are_cut_from_and_weigh_less_their_holes():
    base, cleat = rows_of(fittings.fittings(fitted()))
    assert (base["mark"], base["role"], base["quantity"], base["stock"]) == ("BP1", "base plate", 3, "PL 20")
    assert (base["thickness"], base["width"], base["length"]) == (20.0, 210.0, 310.0)
    assert (base["grade"], base["holes"]) == ("S275", 4)
    mass = (310.0 * 210.0 - 4 * pi / 4 * 26.0**2) * 20.0 * STEEL
    assert base["mass each"] == pytest.approx(mass, rel=1e-6)
    assert base["mass total"] == pytest.approx(3 * mass, rel=1e-6)
    assert base["assemblies"] == "AC1"
    # A flat bar is named by width and thickness.
    assert (cleat["stock"], cleat["thickness"], cleat["width"]) == ("FL 60x8", 8.0, 60.0)
    assert (cleat["length"], cleat["holes"]) == (153.0, 2)
    # A slot of 18 that travels on by 6.
    openings = 2 * pi / 4 * 18.0**2 + 18.0 * 6.0
    assert cleat["mass each"] == pytest.approx((60.0 * 153.0 - openings) * 8.0 * STEEL, rel=1e-6)


def test_holes_are_listed_by_size_and_slots_by_their_overall_length():
    found = [tuple(row.values()) for row in rows_of(fittings.holes(fitted()))]
    assert found == [
        ("C1", "column", 18.0, 0.0, 10.7, 2, 3, 6),
        ("BP1", "base plate", 26.0, 0.0, 20.0, 4, 3, 12),
        ("CL1", "cleat", 18.0, 0.0, 8.0, 1, 3, 3),
        ("CL1", "cleat", 18.0, 24.0, 8.0, 1, 3, 3),
    ]


def test_bolts_are_sets_to_buy_with_a_surplus():
    anchors, bolts, nuts = rows_of(fasteners.bolts(fitted()))
    assert (anchors["kind"], anchors["quantity"]) == ("anchor", 3 * 4)
    # Two in each of three groups, three in one more: 9; 5 % over is 9.45, so 10.
    assert (bolts["set"], bolts["quantity"], bolts["to order (5 % over)"]) == ("M16x40 8.8", 9, 10)
    assert (bolts["nuts each"], bolts["washers each"]) == (1, 1)
    assert (bolts["least grip"], bolts["greatest grip"]) == (18.0, 20.0)
    # EN ISO 4014: head s 24, k 10; ISO 4032: nut 14.8 high; ISO 7089: washer 30 x 17 x 3.
    hexagon = sqrt(3) / 2 * 24.0**2
    volume = hexagon * 10.0 + pi / 4 * 16.0**2 * 40.0 + (hexagon - pi / 4 * 16.0**2) * 14.8
    volume += pi / 4 * (30.0**2 - 17.0**2) * 3.0
    assert bolts["mass of one"] == pytest.approx(volume * STEEL, rel=0.01)
    assert bolts["mass total"] == pytest.approx(9 * bolts["mass of one"], rel=1e-9)
    # Two sets of nuts: 5 % of two is nothing, one more is ordered in any case.
    assert (nuts["kind"], nuts["quantity"], nuts["to order (5 % over)"]) == ("nuts", 2, 3)
    assert (anchors["to order (5 % over)"], anchors["nuts each"]) == (13, 2)


def test_every_anchor_has_its_place_for_setting_out():
    rows = rows_of(fasteners.anchors(fitted()))
    assert len(rows) == 4 * COLUMNS
    places = {(row["x"], row["y"], row["level"]) for row in rows if row["key"] == "2/anchors"}
    assert places == ANCHOR_PLACES
    assert {row["number"] for row in rows} == {1, 2, 3, 4}
    for row in rows:
        # Plate washer and nut (18 high, ISO 4032) stand above the plate, and a thread of 2.5 or more.
        assert row["projection"] >= 18.0 + 2.5
        # From its top, through plate, grout and embedment, to a nut at the bottom.
        assert row["length"] >= row["projection"] + 20.0 + 30.0 + 300.0 + 18.0
        assert row["length"] % 10 == 0
        assert str(row["anchor"]).startswith("M20x")


def test_welds_are_summed_by_what_they_join():
    rows = {row["form"]: row for row in rows_of(fasteners.welds(fitted()))}
    fillet, butt = rows["fillet"], rows["butt"]
    assert (fillet["joint"], fillet["one"], fillet["other"]) == (
        "pinned column base",
        "column",
        "base plate",
    )
    assert (fillet["throat"], fillet["made in"], fillet["all round"]) == (5.0, "shop", "yes")
    assert fillet["leg"] == pytest.approx(5.0 * sqrt(2), abs=0.05)
    assert (fillet["quantity"], fillet["length each"]) == (3, 903.0)
    assert fillet["length total"] == pytest.approx(3 * 0.903)
    assert (butt["other"], butt["made in"], butt["all round"], butt["leg"]) == ("cleat", "site", "no", 0.0)
    assert fillet["symbol"] != butt["symbol"] != ""


def test_part_lists_are_of_one_assembly():
    rows = rows_of(fittings.part_lists(fitted()))
    assert [(row["assembly"], row["mark"], row["in one"]) for row in rows] == [
        ("AC1", "C1", 1),
        ("AC1", "BP1", 1),
        ("AC1", "CL1", 1),
    ]
    assert sum(row["mass in one"] for row in rows) == pytest.approx(sum(p.shape.mass for p in PARTS[:3]))


def test_finishes_say_what_they_stand_for_and_leave_fasteners_out():
    rows = {row["finish"]: row for row in rows_of(fittings.finishes(fitted()))}
    assert {name: (row["specification"], row["pieces"]) for name, row in rows.items()} == {
        "galvanized": ("hot dip", 3),
        "painted": ("two coats", 6),
    }
    assert rows["galvanized"]["mass total"] == pytest.approx(3 * PARTS[2].shape.mass)


def test_members_hold_no_fittings_and_totals_hold_everything():
    shed = fitted()
    assert [row["mark"] for row in rows_of(tables.members(shed))] == ["C1"]
    names = [(row["section"], row["grade"]) for row in rows_of(tables.by_section(shed))]
    assert names[:4] == [("IPE 300", "S355"), ("PL 20", "S275"), ("FL 60x8", "S275"), ("M16x40 8.8", "8.8")]
    assert whole(tables.by_section(shed), "mass total") == pytest.approx(shed.mass)
    assert whole(tables.by_role(shed), "pieces") == len(shed.pieces)


# Sums on the cast


def test_lists_come_to_the_mass_of_the_shed(shed):
    masses = [
        whole(table(shed), "mass total") for table in (tables.members, fittings.fittings, fasteners.bolts)
    ]
    assert sum(masses) == pytest.approx(shed.mass, rel=1e-9)
    assert whole(fittings.finishes(shed), "mass total") == pytest.approx(sum(masses[:2]), rel=1e-9)
    assert min(masses) > 0
    for table in (tables.by_section, tables.by_role):
        assert whole(table(shed), "mass total") == pytest.approx(shed.mass, rel=1e-9)


def test_every_bolt_is_counted_once(shed):
    """By the joints, which name each group once, and by what the list says."""
    fastened = Counter()
    for run in shed.joints:
        for clamp in run.clamps:
            column = clamp.group - run.pieces.shape[1]
            for part in shed.pieces.part[run.fittings[:, column]].tolist():
                group = shed.parts[part].shape
                assert isinstance(group, BoltGroup)
                fastened[group.fastener.designation, group.fastener.kind] += group.count
    listed = Counter()
    for row in rows_of(fasteners.bolts(shed)):
        listed[row["set"], row["kind"]] += row["quantity"]
        assert row["to order (5 % over)"] >= 1.05 * row["quantity"]
        assert row["least grip"] <= row["greatest grip"]
    assert listed == fastened
    anchors = rows_of(fasteners.anchors(shed))
    assert len(anchors) == sum(n for (_, kind), n in listed.items() if kind == "anchor")
    assert len({(row["key"], row["number"]) for row in anchors}) == len(anchors)
    # No two anchors stand in one place, and each stands on the level of a base.
    assert len({(round(row["x"]), round(row["y"])) for row in anchors}) == len(anchors)


def test_holes_are_those_of_all_pieces(shed):
    drilled = sum(
        count * len(part.shape.holes)
        for part, count in zip(shed.parts, shed.quantities.tolist(), strict=True)
        if not isinstance(part.shape, BoltGroup)
    )
    assert whole(fittings.holes(shed), "holes in all") == drilled


def test_fittings_and_members_are_all_parts_but_fasteners(shed):
    marks = [row["mark"] for table in (tables.members, fittings.fittings) for row in rows_of(table(shed))]
    assert sorted(marks) == sorted(p.mark for p in shed.parts if p.role.sort is not Sort.FASTENER)


def test_part_lists_come_to_the_masses_of_the_assemblies(shed):
    mass, pieces = defaultdict(float), Counter()
    for row in rows_of(fittings.part_lists(shed)):
        mass[row["assembly"]] += row["mass in one"]
        pieces[row["assembly"]] += row["in one"]
    made = {row["mark"]: row for row in rows_of(tables.assemblies(shed)) if row["made in"] == "shop"}
    assert mass.keys() == made.keys()
    for mark, row in made.items():
        assert mass[mark] == pytest.approx(row["mass each"], rel=1e-9)
        assert pieces[mark] == row["pieces in one"]


def test_welds_are_those_of_all_joints(shed):
    table = fasteners.welds(shed)
    assert whole(table, "quantity") == sum(len(run.pieces) * len(run.welds) for run in shed.joints)
    run = sum(len(run.pieces) * sum(weld.length for weld in run.welds) for run in shed.joints)
    # Lengths are listed to the millimetre.
    assert whole(table, "length total") == pytest.approx(run / 1e3, abs=0.0005 * whole(table, "quantity"))
