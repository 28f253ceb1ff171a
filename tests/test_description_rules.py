"""Rules across fields: each is broken once, and names the field to change."""

from __future__ import annotations

import pytest
from spoiling import changed, faults, only_fault

from shedbim.description.presets import preset_names, preset_text
from shedbim.description.reading import read_text
from shedbim.description.rules import RULES, broken_rules

#: Rule, field that is named, specimen, exchanges that break it and words of the fault.
BROKEN = [
    ("labels_fit_the_lines", "building.letters", "posted-flat",
     [("[A, B, C]", "[A, B]")], "2 labels for 3 lines"),
    ("labels_fit_the_lines", "building.numbers", "feet",
     [("eaves: 14 ft", "numbers: [1, 2]\n  eaves: 14 ft")], "5 lines"),
    ("bays_hold_columns", "building.bays", "warren-gable",
     [("7 m, 8 x 5.75 m, 7 m", "7 m, 1.3 m"), ("HEB 300", "HEB 450")], "bay 2"),
    ("bays_hold_columns", "building.spans", "rafters",
     [("[18 m]", "[3 m]"), ("IPE 450", "HEM 1000")], "span 1"),
    ("building_is_no_tower", "building.roof", "pratt-mono",
     [("spans: [22 m]", "spans: [26 x 90 m]"), ("depth: 1.75 m", "depth: 6 m")], "too high"),
    ("braced_bays_exist", "bracing.bays", "warren-gable", [("[first, last]", "[first, 11]")], "no bay 11"),
    ("depth_is_less_than_eaves", "frames.roof.depth", "warren-gable",
     [("eaves: 8 m", "eaves: 2.5 m"), ("depth: 1.6 m", "depth: 2.5 m")], "deeper than the eaves"),
    ("depth_holds_the_webs", "frames.roof.depth", "warren-gable",
     [("depth: 1.6 m", "depth: 250 mm"), ("panels: 12", "panels: 60")], "no room for webs"),
    ("panels_are_symmetric", "frames.roof.panels", "warren-gable", [("panels: 12", "panels: 13")], "ridge"),
    ("panels_are_symmetric", "frames.roof.panels", "posted-flat",
     [("panels: 10", "panels: 11")], "straight truss"),
    ("bottom_pitch_fits_the_shape", "frames.roof.bottom_pitch", "howe-valleys",
     [("shape: pitched", "shape: parallel")], "follows the roof"),
    ("bottom_pitch_fits_the_shape", "frames.roof.bottom_pitch", "howe-valleys",
     [("bottom_pitch: 2 deg", "bottom_pitch: 10 deg")], "as steep as the roof"),
    ("webs_fit_the_chords", "frames.roof.diagonals", "warren-gable",
     [("  diagonals: SHS 70x70x5", "  diagonals: SHS 150x150x5")], "SHS 140x140x8"),
    ("webs_fit_the_chords", "frames.roof.posts", "pratt-mono",
     [("posts: SHS 80x80x4", "posts: CHS 139.7x5")], "SHS 120x120x6"),
    ("webs_meet_the_chords_well", "frames.roof.panels", "warren-gable", [("panels: 12", "panels: 2")], "12"),
    ("webs_meet_the_chords_well", "frames.roof.panels", "warren-gable", [("panels: 12", "panels: 40")], "77"),
    ("pairs_have_equal_legs", "frames.roof.diagonals", "warren-gable",
     [("system: truss", "system: angle-truss"), ("SHS 150x150x8", "L 120x120x12"), ("SHS 140x140x8", "L 100x100x10"),
      ("SHS 90x90x5", "L 80x80x8"), ("SHS 70x70x5", "L 65x50x5")], "unequal legs"),
    ("purlin_offsets_leave_a_slope", "purlins.eaves_offset", "feet",
     [("[40 ft]", "[12 ft]"), ("  eaves_offset: 6 in", "  eaves_offset: 6 ft")], "slope"),
    ("purlins_over_nodes_need_trusses", "purlins.set_out", "rafters",
     [("spacing: 1.55 m", "spacing: 1.55 m\n  set_out: nodes")], "no trusses"),
    ("lapped_purlins_nest", "purlins.section", "rafters",
     [("\npurlins:", "\nconnections: {cleats: {continuity: lapped}}\n\npurlins:")], "do not nest"),
    ("rail_offsets_leave_a_wall", "rails.base_offset", "rafters",
     [("eaves: 5.4 m", "eaves: 2.4 m"), ("base_offset: 450 mm", "base_offset: 1.9 m")], "take up the wall"),
    ("angles_cross", "bracing.roof.pattern", "howe-valleys", [("CHS 101.6x5", "L 80x80x8")], "tension only"),
    ("wall_braces_fit_the_columns", "bracing.walls.section", "posted-flat",
     [("L 90x90x8", "L 120x120x12")], "sticks out"),
    ("wall_braces_fit_the_columns", "bracing.walls.section", "howe-valleys",
     [("HEA 320", "HEA 100"), ("CHS 114.3x5", "CHS 88.9x4")], "sticks out"),
    ("zones_are_boxes_or_in_a_wall", "reserved[0]", "warren-gable",
     [("\npurlins:", "\nreserved: [{name: d, kind: door, line: A, z: [0 m, 4 m]}]\n\npurlins:")],
     "does not say where it is"),
    ("zones_have_names_of_their_own", "reserved[1].name", "warren-gable",
     [("\npurlins:", "\nreserved:\n  - {name: d, kind: free, x: [A, B], y: [1, 2], z: [0 m, 4 m]}\n"
       "  - {name: d, kind: free, x: [A, B], y: [2, 3], z: [0 m, 4 m]}\n\npurlins:")], "two zones"),
]  # fmt: skip


@pytest.mark.parametrize(
    ("rule", "field", "name", "exchanges", "words"), BROKEN, ids=[f"{row[0]}-{row[2]}" for row in BROKEN]
)
def test_a_broken_rule_names_the_field_and_what_would_do(
    rule: str, field: str, name: str, exchanges: list[tuple[str, str]], words: str
) -> None:
    fault = only_fault(changed(name, *exchanges))
    assert fault.field == field
    assert words in fault.message
    assert fault.allowed
    assert fault.line > 1


def test_every_rule_is_broken_by_one_of_these() -> None:
    assert {row[0] for row in BROKEN} == {rule.__name__ for rule in RULES}


@pytest.mark.parametrize("preset", preset_names())
def test_presets_keep_all_rules(preset: str) -> None:
    assert broken_rules(read_text(preset_text(preset))) == []


def test_rules_are_asked_also_where_other_fields_are_faulty() -> None:
    text = changed(
        "warren-gable",
        ("section: HEB 300", "section: HEB 310"),
        ("panels: 12", "panels: 13"),
        ("[first, last]", "[first, 12]"),
        ("name: Saltmarsh Seed Store", "nam: Saltmarsh Seed Store"),
    )
    assert {fault.field for fault in faults(text)} == {
        "project.name", "project.nam", "frames.columns.section", "frames.roof.panels", "bracing.bays"
    }  # fmt: skip


def test_a_rule_is_not_asked_about_what_could_not_be_read() -> None:
    """The depth is faulty itself: nothing more is said about it."""
    text = changed("warren-gable", ("depth: 1.6 m", "depth: 1.6"), ("panels: 12", "panels: 2"))
    assert [fault.field for fault in faults(text)] == ["frames.roof.depth"]


def test_a_fault_of_a_default_stands_at_its_group_and_says_what_it_comes_to() -> None:
    text = changed(
        "feet",
        ("[40 ft]", "[10 ft]"),
        ("  eaves_offset: 6 in\n", ""),
        ("ridge_offset: 6 in", "ridge_offset: 1.6 m"),
    )
    fault = only_fault(text)
    assert fault.field == "purlins.eaves_offset"
    assert fault.given == "1.75 m in all"
    assert text.splitlines()[fault.line - 1] == "purlins:"


def test_an_odd_number_of_panels_is_allowed_where_nothing_needs_symmetry() -> None:
    read_text(changed("pratt-mono", ("panels: 10", "panels: 11")))
    read_text(
        changed(
            "warren-gable",
            ("panels: 12", "panels: 13"),
            ("pitch: 6 deg", "pitch: 6 deg\n    pitch_right: 8 deg"),
        )
    )


def test_a_default_is_not_taken_for_what_was_written_wrongly() -> None:
    """An offset without its unit: the rule about offsets is left where it misses it."""
    text = changed("feet", ("  eaves_offset: 6 in", "  eaves_offset: 6"))
    assert [fault.field for fault in faults(text)] == ["purlins.eaves_offset"]
