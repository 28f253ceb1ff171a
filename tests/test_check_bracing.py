"""Bracing by rule: every code from a spoiled shed, and places, angles and stretches against arithmetic by hand."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from functools import cache
from math import atan2, degrees

import changed_sheds as spoil
import numpy as np
import pytest
from cast import PRESETS, changed, described, shed_of

from shedbim.checks.bracing.braced import braced
from shedbim.checks.bracing.lines import slopes_of
from shedbim.checks.bracing.paths import reached
from shedbim.checks.finding import Finding
from shedbim.checks.grouping import findings_of
from shedbim.checks.subject import Subject
from shedbim.checks.table import CHECKS
from shedbim.expand import expand
from shedbim.limits import CODES, Criteria, criteria
from shedbim.model.joints import JointKind
from shedbim.model.roles import Role
from shedbim.model.shed import Shed
from shedbim.model.zones import Zone
from shedbim.sections.catalogue import section

AREA = {name for name, code in CODES.items() if code.area == "bracing"}


@cache
def hall() -> Shed:
    """Seven equal bays, the first, the middle and the last braced."""
    return expand(changed("barn", building__bays=["7 x 5 m"], bracing__bays=[1, 4, 7]))


def bare(shed: Shed, *patterns: str) -> Shed:
    """The shed without some members and what fastens them."""
    return spoil.without(shed, spoil.with_fittings(shed, spoil.matching(shed, *patterns)))


def hung_by_top_chords(name: str) -> Shed:
    """Trusses whose bottom chords do not join the columns."""
    shed = shed_of(name)
    chords = Subject(shed, criteria()).having(Role.BOTTOM_CHORD)
    joints = tuple(
        run
        for run in shed.joints
        if run.kind is not JointKind.CHORD_COLUMN or not np.isin(run.pieces, chords).any()
    )
    return replace(shed, joints=joints)


def haunched_on_i() -> Shed:
    """The leaning shed with one of its round columns an H section."""
    shed = shed_of("lean")
    piece = int(spoil.matching(shed, "2/column/A")[0])
    part = shed.parts[int(shed.pieces.part[piece])]
    return spoil.remade(
        shed, piece, replace(part, shape=replace(part.bar, section=section("HEA 240"), holes=()))
    )


def with_door(shed: Shed, x: float, outside: float) -> Shed:
    """The shed with a door in the middle of its first bay, between two planes off line A."""
    return replace(shed, zones=(Zone("yard door", "door", (outside, 1500.0, 0.0), (x, 3500.0, 3000.0)),))


SPOILED: dict[str, Callable[[], tuple[Shed, Criteria]]] = {
    "wall-line-unbraced": lambda: (bare(hall(), "*/wall brace/A/*"), criteria()),
    "inner-line-open": lambda: (bare(shed_of("valley"), "*/wall brace/L/*"), criteria()),
    "slope-unbraced": lambda: (bare(hall(), "*/roof brace/A-B/2/*"), criteria()),
    "bracing-broken": lambda: (bare(hall(), "4-5/roof brace/A-B/1/1/*"), criteria()),
    "braced-bay-inside": lambda: (bare(hall(), "[17]-*brace/*"), criteria()),
    "braced-bays-apart": lambda: (hall(), criteria({"braced_bays_apart": 14_000.0})),
    "bracing-far-from-end": lambda: (
        bare(hall(), "7-8/*brace/*"),
        criteria({"braced_bay_from_end": 16_000.0}),
    ),
    "bays-differ": lambda: (bare(hall(), "4-5/wall brace/*"), criteria()),
    "frame-out-of-path": lambda: (
        bare(hall(), "2-3/eaves strut/A", "3-4/eaves strut/A"),
        criteria(),
    ),
    "strut-line-broken": lambda: (bare(hall(), "2-3/eaves strut/A"), criteria()),
    "post-head-off-node": lambda: (
        spoil.moved(hall(), spoil.matching(hall(), "1/gable post/1"), (400.0, 0.0, 0.0)),
        criteria(),
    ),
    "post-head-without-strut": lambda: (bare(hall(), "1-2/*brace/*", "1-2/strut/*"), criteria()),
    "chord-unrestrained": lambda: (bare(shed_of("lopsided"), "*/bottom chord tie/*"), criteria()),
    "flange-unrestrained": lambda: (bare(hall(), "*/stay/A-B/1/*"), criteria()),
    "column-flange-open": lambda: (haunched_on_i(), criteria()),
    "brace-flat": lambda: (hall(), criteria({"brace_angle_least": np.radians(35.0)})),
    "brace-steep": lambda: (hall(), criteria({"brace_angle_greatest": np.radians(35.0)})),
    "brace-across-opening": lambda: (with_door(hall(), 10.0, -600.0), criteria()),
    "no-movement-joint": lambda: (hall(), criteria({"unbroken_length": 34_000.0})),
    "no-longitudinal-girder": lambda: (hung_by_top_chords("lopsided"), criteria()),
}

#: What a sound shed may be told of.
SOUND: dict[str, Shed | str] = {
    "inner-line-open": "valley",
    "chord-unrestrained": "lopsided",
    "column-flange-open": "lean",
    "no-longitudinal-girder": "lopsided",
}


def found(shed: Shed, held: Criteria | None = None) -> list[Finding]:
    """The findings of the checks of this area."""
    subject = Subject(shed, held or criteria())
    rows = [row for row in CHECKS if AREA.intersection(row.codes)]
    return findings_of(subject, [hit for row in rows for hit in row.run(subject)])


def codes(shed: Shed, held: Criteria | None = None) -> set[str]:
    return {each.code.name for each in found(shed, held)}


def only(shed: Shed, code: str, held: Criteria | None = None) -> list[Finding]:
    return [each for each in found(shed, held) if each.code.name == code]


def test_every_code_has_its_spoiled_shed() -> None:
    assert set(SPOILED) == AREA
    of_table = {code for row in CHECKS if AREA.intersection(row.codes) for code in row.codes}
    assert of_table == AREA


@pytest.mark.parametrize("code", SPOILED)
def test_spoiled_shed_gives_exactly_its_code(code: str) -> None:
    sound = shed_of(str(SOUND[code])) if code in SOUND else hall()
    shed, held = SPOILED[code]()
    assert codes(shed, held) - codes(sound) == {code}
    assert code not in codes(sound)


@pytest.mark.parametrize("name", [name for name in PRESETS if name != "distribution-hall"])
def test_presets_have_no_severe_finding(name: str) -> None:
    assert [each for each in found(shed_of(name), described(name).checks.criteria) if each.severe] == []


def test_slopes_of_every_roof_form() -> None:
    assert [s.name for s in slopes_of(Subject(shed_of("lopsided"), criteria()))] == ["A-B/1", "A-B/2"]
    valley = slopes_of(Subject(shed_of("valley"), criteria()))
    assert [(s.name, s.columns) for s in valley] == [
        ("K-L/1", (0,)), ("K-L/2", (1,)), ("L-M/1", (1,)), ("L-M/2", (2,)),
    ]  # fmt: skip
    lean = slopes_of(Subject(shed_of("lean"), criteria()))
    assert [(s.name, s.columns) for s in lean] == [("A-B/1", (0, 1)), ("B-C/1", (1, 2))]


def test_braced_bays_are_those_described() -> None:
    bracing = braced(Subject(hall(), criteria()))
    assert bracing.wall_bays(0) == bracing.wall_bays(1) == [0, 3, 6]
    assert bracing.roof_bays(0) == bracing.roof_bays(1) == [0, 3, 6]


def test_braced_bays_apart_are_measured_middle_to_middle() -> None:
    # By hand: bays of 5 m, the first and the fourth braced: 15 m from middle to middle.
    (finding,) = only(hall(), "braced-bays-apart", criteria({"braced_bays_apart": 14_000.0}))
    assert finding.value == pytest.approx(15_000.0)
    assert only(hall(), "braced-bays-apart", criteria({"braced_bays_apart": 15_001.0})) == []
    # IS 800:2007 cl. 3.10.2, value from memory: not more than 50 m between lines of bracing.
    assert criteria().limit("braced_bays_apart")[0] == 50_000.0


def test_distance_to_the_end_is_from_the_middle_of_the_bay() -> None:
    # By hand: 35 m long, the last braced bay from 15 to 20 m: 35 - 17.5 = 17.5 m.
    (finding,) = only(*_swap("bracing-far-from-end"))
    assert finding.value == pytest.approx(17_500.0)


def _swap(code: str) -> tuple[Shed, str, Criteria]:
    shed, held = SPOILED[code]()
    return shed, code, held


def test_one_braced_end_is_enough_near_the_other() -> None:
    # Steel Buildings in Europe, Single-Storey Part 2, p. 3: roof bracing in one or both end bays.
    assert not codes(bare(hall(), "[47]-*brace/*")) & {"braced-bay-inside", "bracing-far-from-end"}


def test_angle_of_a_wall_brace_by_hand() -> None:
    # One tier over a 5 m bay, from foot to strut; work points, not the shorter bars, give the tangent. The bars lie
    # on the line between the work points but for half a gusset, so that half a degree is enough.
    shed = hall()
    subject = Subject(shed, criteria())
    (gusset,) = [
        run.points[np.isin(run.pieces[:, 1], spoil.matching(shed, "1-2/wall brace/A/1/1"))]
        for run in shed.joints
        if run.kind is JointKind.BRACE_GUSSET
        and run.at[0, 1] == 0
        and np.isin(run.pieces[:, 1], spoil.matching(shed, "1-2/wall brace/A/1/1")).any()
    ]
    strut = subject.centres[spoil.matching(shed, "1-2/eaves strut/A")[0]]
    by_hand = degrees(atan2(strut[2] - gusset[0, 2], 5000.0))
    (finding,) = [
        each
        for each in only(hall(), "brace-steep", criteria({"brace_angle_greatest": 0.01}))
        if each.about == "wall brace"
    ]
    assert finding.value is not None
    assert degrees(finding.value) == pytest.approx(by_hand, abs=0.5)


def test_a_lost_rafter_line_is_found_by_its_purlins() -> None:
    lost = only(bare(hall(), "2-3/purlin/A-B/2/*", "3-4/purlin/A-B/2/*"), "frame-out-of-path")
    assert [each.about for each in lost] == ["slope A-B/2"]
    assert [hall().grid.numbers[0], len(lost[0].places)] == ["1", 1]


def test_unjoined_strut_carries_nothing() -> None:
    loose = spoil.without_joints(hall(), spoil.matching(hall(), "2-3/eaves strut/A"))
    assert "strut-line-broken" in codes(loose)


def test_chord_stretch_is_the_span_without_ties() -> None:
    # By hand: 19.3 m between column axes, less about half a column of HEA 300 (290 mm) and an end plate at each side,
    # along a bottom chord at 7 and 12 degrees; the straight line between its ends.
    (finding,) = only(*_swap("chord-unrestrained"))
    assert finding.value is not None
    assert 18_900.0 < finding.value < 19_100.0
    assert len(finding.places) == 2


def test_stretch_grows_when_a_stay_goes() -> None:
    every = only(hall(), "flange-unrestrained", criteria({"flange_restraint_spacing": 1.0}))
    fewer = only(
        bare(hall(), "*/stay/A-B/1/4/*"), "flange-unrestrained", criteria({"flange_restraint_spacing": 1.0})
    )
    assert every[0].value is not None
    assert fewer[0].value is not None
    assert fewer[0].value > every[0].value + 500.0


def test_reach_goes_both_ways_and_stops_at_a_break() -> None:
    assert reached([True, True, True], [0]) == [True] * 4
    assert reached([True, False, True], [0]) == [True, True, False, False]
    assert reached([True, False, True], [2]) == [False, False, True, True]
    assert reached([False, False, False], [1]) == [False, True, True, False]


def test_inner_line_without_roof_bracing_is_severe() -> None:
    shed = bare(shed_of("valley"), "*/wall brace/L/*", "*/roof brace/L-M/1/*")
    assert "wall-line-unbraced" in codes(shed)
    assert "inner-line-open" not in codes(shed)


def test_fixed_bases_stand_without_a_girder() -> None:
    assert "no-longitudinal-girder" not in codes(hung_by_top_chords("boat-hall"))


def test_purlins_that_rest_on_no_gable_do_not_hold_it() -> None:
    # Their free ends beyond the gable are declared in joints of their own, which hand nothing on.
    shed = shed_of("lopsided")
    on_gable = spoil.matching(shed, "[14]/rafter/*", "[14]/column/*")
    joints = tuple(
        run
        for run in shed.joints
        if run.kind is not JointKind.PURLIN_CLEAT or not np.isin(run.pieces[:, 0], on_gable).all()
    )
    lost = only(replace(shed, joints=joints), "frame-out-of-path")
    assert [each.about for each in lost] == ["slope A-B/1", "slope A-B/2"]


def test_a_door_is_crossed_in_the_plane_of_the_wall_only() -> None:
    # A door outside the bracing plane is crossed as well; one under the braces, or in the middle of the hall, not.
    assert len(only(with_door(hall(), -250.0, -600.0), "brace-across-opening")[0].places) == 2
    inside = replace(hall(), zones=(Zone("pit", "door", (5000.0, 1500.0, 0.0), (7000.0, 3500.0, 3000.0)),))
    assert only(inside, "brace-across-opening") == []
    other_bay = replace(hall(), zones=(Zone("d", "door", (-300.0, 6500.0, 0.0), (300.0, 8500.0, 3000.0)),))
    assert only(other_bay, "brace-across-opening") == []
    # Crossed diagonals leave a triangle free at the foot of the bay: its middle is below both.
    low = replace(hall(), zones=(Zone("d", "door", (-300.0, 2400.0, 0.0), (300.0, 2600.0, 1000.0)),))
    assert only(low, "brace-across-opening") == []
