"""Faults that random descriptions once brought to light, each with its story."""

from __future__ import annotations

import cast
import pytest
from invariants import broken, coarse_bodies
from overlaps import overlaps

from shedbim.errors import DescriptionError
from shedbim.expand import expand
from shedbim.tolerance import SHARED_VOLUME

_STEEP = {
    "building__roof__pitch": "21.5 deg",
    "building__roof__pitch_right": "24.6 deg",
    "building__spans": ["8766 mm", "28605 mm"],
    "building__eaves": "3.9 m",
    "frames__columns__section": "HEB 360",
    "frames__roof__shape": "pitched",
    "frames__roof__panels": 6,
    "frames__roof__depth": "2799 mm",
    "frames__roof__top_chord": "SHS 150x150x8",
    "frames__roof__bottom_chord": "RHS 200x120x8",
    "frames__gables": {"system": "same", "posts": "IPE 200", "post_spacing": "7584 mm"},
    "bracing__walls__section": "L 60x60x6",
}

BUILT = {
    # The roof braces ran through the heads of the wall braces below them.
    "roof brace in a wall brace": (
        "lean",
        {
            "building__bays": ["5926 mm"],
            "building__eaves": "3 m",
            "building__roof__pitch": "21 deg",
            "building__roof__high": "right",
            "frames__columns__section": "IPE 500",
            "frames__roof__section": "UB 406x178x60",
            "frames__gables": {"system": "same", "posts": "IPE 330", "post_spacing": "3.6 m"},
            "bracing__bays": ["first"],
            "bracing__roof": {"pattern": "crossed", "section": "L 100x100x10"},
            "bracing__walls": {"pattern": "crossed", "section": "L 120x120x10", "tiers": 2},
            "bracing__struts": {"section": "SHS 60x60x4"},
            "bracing__eaves_strut": {"section": "SHS 60x60x4"},
        },
    ),
    # The bottom node nearest to the place of a tie was the one at the column.
    "tie in a column": (
        "boat-hall",
        {
            "building__spans": ["25445 mm"],
            "frames__roof__pattern": "warren",
            "frames__roof__panels": 3,
            "frames__roof__depth": "2230 mm",
            "frames__roof__diagonals": "SHS 120x120x6",
            "frames__roof__end_diagonals": "SHS 120x120x6",
            "frames__roof__posts": None,
            "bracing__ties": {"section": "SHS 100x100x5", "spacing": "3547 mm"},
        },
    ),
    # A ridge strut stood higher than the sag bars that cross the ridge below its line.
    "ridge strut in the sag bars": (
        "lopsided",
        _STEEP
        | {
            "purlins__section": "Z 150x65x18x1.6",
            "purlins__ridge_offset": "397 mm",
            "bracing__struts": {"section": "RHS 120x60x5"},
        },
    ),
    # Faces of unequal slopes miss each other at a kink: a post cut through one point of both entered one chord.
    "post at the ridge in a chord": ("lopsided", _STEEP | {"frames__roof__posts": "SHS 120x120x6"}),
}


@pytest.mark.parametrize("story", BUILT)
def test_what_once_was_at_fault_is_sound(story):
    name, fields = BUILT[story]
    description = cast.changed(name, **fields)
    shed = expand(description)
    assert broken(shed, description) == []
    clashes = overlaps(coarse_bodies(shed), shed.pieces.part, shed.pieces.placement, SHARED_VOLUME)
    assert [(shed.pieces.keys[each.first], shed.pieces.keys[each.second]) for each in clashes] == []


REFUSED = {
    # Purlins on either side of a steep ridge ran into one another.
    "purlins over a ridge": (
        "lopsided",
        {
            "building__roof__pitch": "40 deg",
            "building__roof__pitch_right": "41 deg",
            "frames__roof": {"system": "rafter", "section": "IPE 360"},
            "purlins__section": "C 250x75x20x2.5",
            "purlins__ridge_offset": "20 mm",
        },
        "purlins.ridge_offset",
    ),
    # Braces deeper than the rafters hung down to the heads of the gable posts.
    "braces below the gable rafters": (
        "lean",
        {
            "frames__gables__rafter": "IPE 160",
            "bracing__roof": {"pattern": "crossed", "section": "L 120x120x10"},
            "bracing__struts": {"section": "CHS 168.3x6"},
        },
        "bracing.roof",
    ),
    # A web lay at eight degrees to a steep chord, nearly along it: its work point was 700 mm from its end.
    "a web along a steep chord": (
        "packing-house",
        {
            "building__roof__pitch": "6.1 deg",
            "building__roof__pitch_right": "37.4 deg",
            "building__spans": ["30956 mm"],
            "frames__columns__section": "CHS 273x10",
            "frames__roof__bottom_pitch": "0 deg",
            "frames__roof__pattern": "warren-with-posts",
            "frames__roof__panels": 10,
            "frames__roof__depth": "702 mm",
        },
        "frames.roof.panels",
    ),
}


@pytest.mark.parametrize("story", REFUSED)
def test_what_cannot_be_built_is_refused(story):
    name, fields, field = REFUSED[story]
    description = cast.changed(name, **fields)
    with pytest.raises(DescriptionError) as refused:
        expand(description)
    assert [fault.field for fault in refused.value.faults] == [field]
