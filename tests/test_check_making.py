"""Making and moving: every code from a spoiled shed, and lengths, boxes, distances and ratios by hand."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from functools import cache

import changed_sheds as spoil
import numpy as np
import pytest
from cast import PRESETS, changed, described, shed_of

from shedbim.checks.finding import Finding
from shedbim.checks.grouping import findings_of
from shedbim.checks.making.drilled import distances
from shedbim.checks.making.nodes import nodes
from shedbim.checks.making.packages import packages, smallest_box
from shedbim.checks.making.slender import longest_between
from shedbim.checks.making.truss_depths import truss_depths
from shedbim.checks.subject import Subject
from shedbim.checks.table import CHECKS
from shedbim.expand import expand
from shedbim.limits import CODES, Criteria, criteria
from shedbim.model.bars import Bar
from shedbim.model.holes import Hole
from shedbim.model.joints import JointKind
from shedbim.model.plates import Plate, rectangle
from shedbim.model.roles import Role
from shedbim.model.shed import Part, Shed
from shedbim.sections.catalogue import section

AREA = {name for name, code in CODES.items() if code.area == "making"}


@cache
def zinc_barn() -> Shed:
    """The barn with all its frames galvanized."""
    return expand(changed("barn", finish__frames="galvanized"))


def part_of(shed: Shed, key: str) -> tuple[int, Part]:
    """The number of the piece with a key, and its part."""
    (piece,) = spoil.matching(shed, key)
    return int(piece), shed.parts[int(shed.pieces.part[piece])]


def strut_with(holes: Callable[[tuple[Hole, ...]], tuple[Hole, ...]]) -> Shed:
    """The galvanized barn with an eaves strut whose holes are changed."""
    piece, part = part_of(zinc_barn(), "2-3/eaves strut/A")
    return spoil.remade(
        zinc_barn(), piece, replace(part, shape=replace(part.bar, holes=holes(part.bar.holes)))
    )


def plate_with(change: Callable[[tuple[Hole, ...]], tuple[Hole, ...]]) -> Shed:
    """The barn with a base plate whose holes are changed."""
    shed = shed_of("barn")
    piece, part = part_of(shed, "2/column/A/start/base plate")
    assert isinstance(part.shape, Plate)
    return spoil.remade(shed, piece, replace(part, shape=replace(part.shape, holes=change(part.shape.holes))))


def to_the_edge(holes: tuple[Hole, ...]) -> tuple[Hole, ...]:
    """The first hole moved outwards until its edge is one tenth of its diameter from that of the plate."""
    _, part = part_of(shed_of("barn"), "2/column/A/start/base plate")
    low, high = part.shape.box
    x, y, z = holes[0].centre
    x = low[0] + 0.6 * holes[0].diameter if x < (low[0] + high[0]) / 2 else high[0] - 0.6 * holes[0].diameter
    return (replace(holes[0], centre=(x, y, z)), *holes[1:])


def one_more(holes: tuple[Hole, ...]) -> tuple[Hole, ...]:
    """A hole more, twice its diameter inwards from the first."""
    x, y, z = holes[0].centre
    return (*holes, replace(holes[0], centre=(x - np.sign(x) * 2.0 * holes[0].diameter, y, z)))


def raised_chords() -> Shed:
    """The flat kiosk with its top chords 100 mm over their webs."""
    shed = shed_of("flat")
    return spoil.moved(shed, spoil.matching(shed, "*/truss/top chord/*"), (0.0, 0.0, 100.0))


SPOILED: dict[str, Callable[[], tuple[Shed, Criteria]]] = {
    "bar-longer-than-stock": lambda: (shed_of("barn"), criteria({"stock_length": 6000.0})),
    "too-long-to-ship": lambda: (shed_of("barn"), criteria({"ship_length": 6400.0})),
    "too-bulky-to-ship": lambda: (
        shed_of("barn"),
        criteria({"ship_width": 900.0, "ship_height": 900.0}),
    ),
    "too-heavy-to-lift": lambda: (shed_of("barn"), criteria({"lift_mass": 310.0})),
    "too-big-for-bath": lambda: (zinc_barn(), criteria({"bath_length": 6000.0})),
    "sealed-tube": lambda: (strut_with(lambda holes: ()), criteria()),
    "vent-too-small": lambda: (
        strut_with(lambda holes: tuple(replace(hole, diameter=hole.diameter / 2) for hole in holes)),
        criteria(),
    ),
    "web-too-flat": lambda: (shed_of("flat"), criteria({"web_angle_least": np.radians(42.0)})),
    "node-eccentric-outwards": lambda: (shed_of("flat"), criteria({"node_eccentricity_greatest": 0.1})),
    "node-eccentric-inwards": lambda: (raised_chords(), criteria()),
    "bolt-near-edge": lambda: (plate_with(to_the_edge), criteria()),
    "bolts-too-close": lambda: (plate_with(one_more), criteria()),
    "bar-too-slender": lambda: (shed_of("barn"), criteria({"slenderness_wind": 140.0})),
    "span-unusual": lambda: (shed_of("barn"), criteria({"rafter_span_greatest": 12_000.0})),
    "bay-short": lambda: (shed_of("barn"), criteria({"bay_least": 5100.0})),
    "bay-long": lambda: (shed_of("barn"), criteria({"bay_greatest": 6000.0})),
    "roof-flat": lambda: (shed_of("barn"), criteria({"pitch_least": np.radians(20.0)})),
    "truss-deep": lambda: (shed_of("flat"), criteria({"truss_span_to_depth_least": 10.5})),
    "truss-shallow": lambda: (shed_of("flat"), criteria({"truss_span_to_depth_greatest": 9.5})),
    "purlins-far-apart": lambda: (shed_of("barn"), criteria({"purlin_spacing_greatest": 1000.0})),
    "rails-far-apart": lambda: (shed_of("barn"), criteria({"rail_spacing_greatest": 1000.0})),
    "eaves-high": lambda: (shed_of("barn"), criteria({"eaves_greatest": 4000.0})),
}


def found(shed: Shed, held: Criteria | None = None) -> list[Finding]:
    """The findings of the checks of this area."""
    subject = Subject(shed, held or criteria())
    rows = [row for row in CHECKS if AREA.intersection(row.codes)]
    return findings_of(subject, [hit for row in rows for hit in row.run(subject)])


def codes(shed: Shed, held: Criteria | None = None) -> set[str]:
    return {each.code.name for each in found(shed, held)}


def only(code: str, shed: Shed, held: Criteria | None = None) -> list[Finding]:
    return [each for each in found(shed, held) if each.code.name == code]


def sound_of(shed: Shed) -> Shed:
    """What a spoiled shed was before."""
    return shed_of("flat") if "truss" in "".join(shed.pieces.keys) else shed_of("barn")


def test_every_code_has_its_spoiled_shed() -> None:
    assert set(SPOILED) == AREA
    assert {code for row in CHECKS if AREA.intersection(row.codes) for code in row.codes} == AREA


@pytest.mark.parametrize("code", SPOILED)
def test_spoiled_shed_gives_exactly_its_code(code: str) -> None:
    shed, held = SPOILED[code]()
    sound = codes(sound_of(shed))
    assert code not in sound
    assert codes(shed, held) - sound == {code}


@pytest.mark.parametrize("name", [name for name in PRESETS if name != "distribution-hall"])
def test_presets_have_no_severe_finding(name: str) -> None:
    assert [each for each in found(shed_of(name), described(name).checks.criteria) if each.severe] == []


def test_galvanized_barn_is_vented() -> None:
    assert not codes(zinc_barn()) & {"sealed-tube", "vent-too-small", "too-big-for-bath"}


def test_open_tube_needs_no_vent() -> None:
    # A strut that is in no welded joint has open ends.
    shed = strut_with(lambda holes: ())
    loose = spoil.without_joints(shed, spoil.matching(shed, "2-3/eaves strut/A"))
    assert "sealed-tube" not in codes(loose)


def test_smallest_box_of_a_turned_block_by_hand() -> None:
    # A block of 10 x 2 x 0.3 m turned by 7 degrees about its thickness: its own sides come back.
    block = np.array([(x, y, z) for x in (0, 10e3) for y in (0, 2e3) for z in (0, 300.0)], float)
    turn = np.radians(7.0)
    turned = block @ np.array([
        [np.cos(turn), np.sin(turn), 0.0], [-np.sin(turn), np.cos(turn), 0.0], [0.0, 0.0, 1.0],
    ])  # fmt: skip
    assert smallest_box(turned) == pytest.approx((10e3, 2e3, 300.0), rel=1e-6)


def test_packages_hold_every_member_and_its_fittings_once() -> None:
    shed = shed_of("barn")
    subject = Subject(shed, criteria())
    carried = sum(len(each.pieces) * each.mass for each in packages(subject))
    in_shop = np.array([kind.made == "shop" for kind in shed.assembly_types])[
        shed.assemblies.type[shed.pieces.assembly]
    ]
    in_shop &= shed.pieces.assembly >= 0
    mass = np.array([part.shape.mass for part in shed.parts])[shed.pieces.part]
    assert carried == pytest.approx(float(mass[in_shop | subject.is_member].sum()), rel=1e-9)


def test_longest_bar_is_told_by_region() -> None:
    # 53 ft trailers: UK guidance on abnormal loads (2018), its US table; 53 ft = 16.154 m.
    assert criteria(region="north-america").limit("ship_length")[0] == pytest.approx(16_154.4)
    assert criteria().limit("ship_length")[0] == pytest.approx(18_650.0)


@pytest.mark.parametrize(("edge", "fits"), [(26.3, False), (26.5, True)])
def test_edge_distance_of_m20_by_the_standard(edge: float, fits: bool) -> None:
    # EN 1993-1-8 Table 3.3, M20 in 22 mm holes: e >= 26.4 mm, p >= 48.4 mm, as a published sheet prints them.
    hole = Hole((100.0 - edge, 0.0, 5.0), (0.0, 0.0, 1.0), 22.0, 10.0)
    part = Part("x", Role.GUSSET, Plate(rectangle(200.0, 200.0), 10.0, (hole,)), "S355", "painted")
    assert distances(part).edge == pytest.approx(edge / 22.0)
    assert (distances(part).edge >= criteria().limit("bolt_edge_least")[0]) == fits


@pytest.mark.parametrize(("apart", "fits"), [(48.3, False), (48.5, True)])
def test_pitch_of_m20_by_the_standard(apart: float, fits: bool) -> None:
    holes = tuple(Hole((x, 0.0, 5.0), (0.0, 0.0, 1.0), 22.0, 10.0) for x in (0.0, apart))
    part = Part("x", Role.GUSSET, Plate(rectangle(300.0, 200.0), 10.0, holes), "S355", "painted")
    assert distances(part).between == pytest.approx(apart / 22.0)
    assert (distances(part).between >= criteria().limit("bolt_pitch_least")[0]) == fits


def test_holes_of_an_angle_are_measured_to_the_toe_and_the_end() -> None:
    # L 70x70x7 with its hole 40 mm from the heel: 30 mm to the toe; 33 mm from the end.
    angle = section("L 70x70x7")
    low_y, low_z, _, _ = angle.outline.bounds
    side = Hole((33.0, low_y + 3.5, low_z + 40.0), (0.0, 1.0, 0.0), 18.0, 7.0)
    part = Part("x", Role.ROOF_BRACE, Bar(angle, 1000.0, holes=(side,)), "S355", "painted")
    assert distances(part).edge == pytest.approx(30.0 / 18.0, rel=1e-6)
    near_end = replace(side, centre=(20.0, *side.centre[1:]))
    part = replace(part, shape=Bar(angle, 1000.0, holes=(near_end,)))
    assert distances(part).edge == pytest.approx(20.0 / 18.0, rel=1e-6)


def test_holes_in_different_walls_are_not_neighbours() -> None:
    # One hole in the upper flange of an IPE 200 right above one in the lower.
    beam = section("IPE 200")
    holes = tuple(Hole((100.0, 25.0, z), (0.0, 0.0, 1.0), 14.0, 8.5) for z in (-95.75, 95.75))
    part = Part("x", Role.RAFTER, Bar(beam, 1000.0, holes=holes), "S355", "painted")
    assert distances(part).between == np.inf
    # Flange of 100 mm, hole 25 mm off its middle: 25 mm to its edge.
    assert distances(part).edge == pytest.approx(25.0 / 14.0)


def test_slot_is_measured_from_the_ends_of_its_travel() -> None:
    slot = Hole((0.0, 0.0, 5.0), (0.0, 0.0, 1.0), 18.0, 10.0, slot=20.0, along=(1.0, 0.0, 0.0))
    part = Part("x", Role.FIN_PLATE, Plate(rectangle(80.0, 200.0), 10.0, (slot,)), "S355", "painted")
    assert distances(part).edge == pytest.approx((40.0 - 10.0) / 18.0)


def test_slenderness_of_an_eaves_strut_by_published_properties() -> None:
    # SHS 100x100x5 cold formed: A 18.36 cm2, I 271.1 cm4 (published tables), so i = 38.43 mm.
    shed = shed_of("barn")
    (finding,) = [
        each
        for each in only("bar-too-slender", shed, criteria({"slenderness_wind": 1.0}))
        if each.about == "eaves strut"
    ]
    struts = spoil.matching(shed, "*/eaves strut/?")
    ends = Subject(shed, criteria()).axes[struts]
    assert finding.value == pytest.approx(
        float(np.linalg.norm(ends[:, 1] - ends[:, 0], axis=1).max()) / 38.43, rel=2e-3
    )


def test_crossing_halves_the_length_of_a_brace() -> None:
    shed = shed_of("barn")
    brace = spoil.matching(shed, "1-2/wall brace/A/1/1")
    subject = Subject(shed, criteria())
    whole = float(np.linalg.norm(np.diff(subject.axes[brace], axis=1)))
    crossed = longest_between(subject, brace, (JointKind.BRACE_CROSSING,))[0]
    assert crossed == pytest.approx(whole / 2, rel=0.02)
    assert longest_between(subject, brace, ()) == pytest.approx([whole])


def test_depth_of_a_truss_by_its_description() -> None:
    # 12.6 m over 1.25 m between the axes: 10.08.
    ratios = [span / depth for _, span, depth in truss_depths(Subject(shed_of("flat"), criteria()))]
    assert ratios == pytest.approx([10.08, 10.08], rel=2e-3)


def test_eccentricity_agrees_with_what_the_model_says() -> None:
    # Two ways to one figure: crossing of the axes here; the model states how far axes miss the work point, upright.
    held = criteria({"node_eccentricity_least": 0.0, "node_eccentricity_greatest": 0.0})
    shed = shed_of("depot")
    said = {
        tuple(row): abs(miss)
        for run in shed.joints
        if run.kind is JointKind.NODE
        for row, miss in zip(run.pieces.tolist(), run.eccentricity.tolist(), strict=True)
    }
    subject = Subject(shed, held)
    hits = [hit for hit in nodes(subject) if hit.code.startswith("node-")]
    assert len(hits) > 50
    for hit in hits:
        depth = shed.parts[int(shed.pieces.part[hit.pieces[0]])].bar.section.height
        assert hit.value is not None
        assert abs(hit.value) * depth == pytest.approx(said[hit.pieces], abs=0.2)


def test_angle_of_a_web_by_its_panel() -> None:
    # 8 panels in 12.6 m, 1.25 m deep, falling 1:50: work lines at atan(1.25 / 1.575) = 38.4 degrees to the level, and
    # 1.1 degrees more or less to the chord; the gap at the node makes the web 1 to 2 degrees steeper.
    (finding, *_) = only("web-too-flat", shed_of("flat"), criteria({"web_angle_least": np.radians(60.0)}))
    assert finding.value is not None
    assert 38.4 < np.degrees(finding.value) < 40.5
