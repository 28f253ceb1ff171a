"""Which drilled bars, plates and bolt groups are one part: checked on solids, which know nothing of the marks."""

from __future__ import annotations

from dataclasses import replace
from itertools import pairwise, product
from math import pi, radians
from random import Random

import drilled
import numpy as np
import pytest
from drilled import MIRRORS, SECTIONS, TURNS, bolt, drilled_hole, mirrored, random_bar, seen_from, walls
from hypothesis import given, settings
from hypothesis import strategies as st
from manifold3d import Manifold, OpType

from shedbim.geometry.placements import IDENTITY, compose, inverse, rotation, translation
from shedbim.model.bars import SQUARE, Bar, EndCut
from shedbim.model.bodies import drill, notch_body
from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.holes import Notch
from shedbim.model.marks import AssemblyTemplate, PartGrouping, Stock, group_assemblies, group_parts
from shedbim.model.plates import Plate, rectangle
from shedbim.model.roles import Role
from shedbim.model.shapes import Shape
from shedbim.model.solids import solid

SEEDS = st.integers(0, 10**6)
BARS = [name for name in SECTIONS if TURNS[name]]
ROUND = ["CHS", "RD"]
#: What equal holes may differ by because their polygons stand differently, as a share of the smallest hole.
SMALL = 0.35
#: Solids are compared with arcs this near to true, mm.
CHORD = 0.05


def grouped(*shapes: Shape, role: Role = Role.STRUT) -> PartGrouping:
    return group_parts([Stock(role, shape, "S355", "painted") for shape in shapes])


def marks(*shapes: Shape) -> list[str]:
    found = grouped(*shapes)
    return [found.parts[i].mark for i in found.part_of]


def number(*shapes: Shape) -> int:
    """How many parts the shapes are."""
    return len(grouped(*shapes).parts)


def apart(one: Manifold, other: Manifold) -> float:
    return float((one - other).volume() + (other - one).volume())


def compared(shape: Shape) -> Manifold:
    """The solid of a shape; of a bar what is taken out of it, as the chords of two that turn never agree.

    That bars lie on each other before they are drilled is tested with ``congruence``.
    """
    if not isinstance(shape, Bar):
        return solid(shape, CHORD)
    taken = [drill(shape.section.profile, hole, CHORD) for hole in shape.holes]
    return Manifold.batch_boolean(taken + [notch_body(notch) for notch in shape.notches], OpType.Add)


def smallest(shape: Shape) -> float:
    holes = () if isinstance(shape, BoltGroup) else shape.holes
    return min((hole.area * hole.thickness for hole in holes), default=shape.volume / 100)


def assert_parts_lie_on_their_stock(found: PartGrouping, shapes: list[Shape]) -> None:
    for shape, part, motion in zip(shapes, found.part_of, found.motion, strict=True):
        assert np.linalg.det(motion[:, :3]) == pytest.approx(1.0)
        assert np.allclose(motion[:, :3] @ motion[:, :3].T, np.eye(3), atol=1e-9)
        own = compared(found.parts[part].shape).transform(motion)
        assert apart(own, compared(shape)) < SMALL * smallest(shape)


def allowed(name: str) -> list[tuple[float, float | None]]:
    """Turn and flip of every motion that carries a square bar of a section that is not round onto itself."""
    turns = [2 * pi * i / TURNS[name] for i in range(TURNS[name])]
    return [(turn, None) for turn in turns] + [(0.0, radians(a)) for a in MIRRORS[name]]


# Bars ----------------------------------------------------------------------------------------------------


@settings(max_examples=20, deadline=None)
@given(SEEDS, st.sampled_from(BARS), st.integers(1, 4))
def test_a_drilled_bar_is_the_same_part_from_every_side_its_section_allows(
    seed: int, name: str, count: int
) -> None:
    random = Random(seed)
    bar = random_bar(random, name, count)
    sides = [bar, *(seen_from(bar, *motion)[0] for motion in allowed(name))]
    random.shuffle(sides)
    found = grouped(*sides)
    assert len(found.parts) == 1
    assert_parts_lie_on_their_stock(found, sides)


@settings(max_examples=20, deadline=None)
@given(SEEDS, st.sampled_from(BARS), st.integers(1, 3))
def test_a_mirrored_bar_is_another_part_unless_a_motion_helps(seed: int, name: str, count: int) -> None:
    bar = replace(random_bar(Random(seed), name, count), notches=())
    image = mirrored(bar)
    body = compared(image)
    truth = any(
        apart(compared(seen_from(bar, *motion)[0]), body) < SMALL * smallest(bar) for motion in allowed(name)
    )
    assert (number(bar, image) == 1) == truth


def test_mirror_images_worked_by_hand() -> None:
    web, flange = drilled_hole("I", 0, 100.0, 13.0), drilled_hole("I", 1, 160.0, 13.0)
    # One hole in the web above its middle: a half turn about the upright brings the image onto it.
    one = Bar(SECTIONS["I"], 400.0, holes=(web,))
    assert number(one, mirrored(one)) == 1
    # One more in one flange: no motion left that would.
    both = Bar(SECTIONS["I"], 400.0, holes=(web, flange))
    assert number(both, mirrored(both)) == 2
    # An angle with unequal legs has no motion at all but staying where it is.
    leg = Bar(SECTIONS["L unequal"], 400.0, holes=(drilled_hole("L unequal", 0, 100.0, 13.0),))
    assert number(leg, mirrored(leg)) == 2
    centred = replace(leg, holes=(drilled_hole("L unequal", 0, 200.0, 13.0),))
    assert number(centred, mirrored(centred)) == 1


@settings(max_examples=20, deadline=None)
@given(
    SEEDS,
    st.sampled_from(ROUND),
    st.integers(1, 4),
    st.floats(0, 2 * pi),
    st.booleans(),
)
def test_a_round_bar_is_the_same_part_however_it_is_turned(
    seed: int, name: str, count: int, angle: float, flip: bool
) -> None:
    bar = random_bar(Random(seed), name, count)
    sides: list[Shape] = [seen_from(bar, angle, 0.3 if flip else None)[0], bar, seen_from(bar, -2 * angle)[0]]
    found = grouped(*sides)
    assert len(found.parts) == 1
    assert_parts_lie_on_their_stock(found, sides)


def test_a_round_bar_with_three_holes_round_a_corner_is_handed() -> None:
    holes = tuple(drilled_hole("CHS", wall, x, 13.0) for wall, x in ((0, 80.0), (1, 150.0), (2, 230.0)))
    bar = Bar(SECTIONS["CHS"], 400.0, holes=holes)
    assert number(bar, mirrored(bar)) == 2
    assert number(replace(bar, holes=holes[:2]), mirrored(replace(bar, holes=holes[:2]))) == 2
    assert number(replace(bar, holes=holes[:1]), mirrored(replace(bar, holes=holes[:1]))) == 1


@pytest.mark.parametrize("name", SECTIONS)
def test_holes_of_other_places_and_sizes_make_other_parts(name: str) -> None:
    bar = Bar(
        SECTIONS[name], 400.0, holes=(drilled_hole(name, 0, 120.0, 13.0), drilled_hole(name, 0, 170.0, 13.0))
    )

    def other(**change: float) -> Bar:
        first, second = bar.holes
        x = second.centre[0] + change.pop("by", 0.0)
        return replace(bar, holes=(first, replace(second, centre=(x, *second.centre[1:]), **change)))

    assert number(bar, other(by=0.3)) == 1
    assert number(bar, other(by=0.8)) == 2
    assert number(bar, other(diameter=14.0)) == 2
    assert number(bar, other(slot=4.0, along=(1.0, 0.0, 0.0))) == 2
    assert number(bar, replace(bar, holes=bar.holes[:1])) == 2
    assert number(bar, replace(bar, holes=bar.holes[::-1])) == 1
    turned = replace(bar.holes[0], axis=tuple(-v for v in bar.holes[0].axis))
    assert number(bar, replace(bar, holes=(turned, bar.holes[1]))) == 1


def test_slots_are_told_by_the_way_they_run_and_not_by_which_end_is_named() -> None:
    along, across = (drilled_hole("RHS", 0, 120.0, 13.0, 9.0, across) for across in (False, True))
    bars = [Bar(SECTIONS["RHS"], 400.0, holes=(hole,)) for hole in (along, across)]
    assert number(*bars) == 2
    assert number(bars[0], replace(bars[0], holes=(replace(along, along=(-1.0, 0.0, 0.0)),))) == 1


def test_notches_are_told_by_their_place_however_they_are_drawn() -> None:
    corners = ((0.0, -6.0), (30.0, -6.0), (30.0, 6.0), (0.0, 6.0))
    down = Notch(corners, (-1.0, 0.0, -50.0), (1.0, 0.0, 0.0), (0.0, 1.0, 0.0), 100.0)
    turned = Notch(corners, (-1.0, 0.0, 50.0), (1.0, 0.0, 0.0), (0.0, -1.0, 0.0), 100.0)
    rolled = replace(down, outline=corners[2:] + corners[:2])
    deeper = replace(down, outline=tuple((u + 3.0 if u else u, v) for u, v in corners))
    sideways = Notch(corners, (-1.0, -50.0, 0.0), (1.0, 0.0, 0.0), (0.0, 0.0, -1.0), 100.0)
    bars = {n: Bar(SECTIONS["SHS"], 400.0, notches=(n,)) for n in (down, turned, rolled, deeper, sideways)}
    assert number(bars[down], bars[turned], bars[rolled], bars[sideways]) == 1
    assert number(bars[down], bars[deeper]) == 2
    box = [replace(bars[n], section=SECTIONS["RHS"]) for n in (down, sideways)]
    assert number(*box) == 2


def test_cuts_leave_only_some_motions_to_holes() -> None:
    lean = EndCut(((0.0, 0.3),))
    upper, lower = (
        Bar(SECTIONS["SHS"], 400.0, lean, SQUARE, (drilled_hole("SHS", w, 200.0, 13.0),)) for w in (2, 3)
    )
    assert number(upper, lower) == 2
    assert number(replace(upper, start=SQUARE), replace(lower, start=SQUARE)) == 1


def test_a_longer_bar_takes_the_holes_of_the_shape_that_stands_for_it() -> None:
    short = Bar(SECTIONS["I"], 400.0, holes=(drilled_hole("I", 0, 100.0, 13.0),))
    long = Bar(SECTIONS["I"], 400.4, holes=(drilled_hole("I", 0, 100.2, 13.0),))
    found = grouped(long, short)
    assert [part.shape.length for part in found.parts] == [400.0]
    assert found.motion[0][0, 3] == pytest.approx(0.2)
    from_other_end, _ = seen_from(long, pi, 0.0)
    assert grouped(from_other_end, short).flipped.tolist() in ([True, False], [False, True])


def test_bars_with_more_holes_come_later_and_with_equal_ones_by_their_sizes() -> None:
    def bar(*holes: tuple[float, float], length: float = 400.0) -> Bar:
        return Bar(SECTIONS["I"], length, holes=tuple(drilled_hole("I", 0, x, d) for x, d in holes))

    bars = [
        bar((80, 13)),
        bar((80, 13), (120, 13)),
        bar(),
        bar((80, 18)),
        bar((80, 13), (120, 13), length=500.0),
    ]
    # By hand: long before short, then by number of holes, then small before large.
    expected = ["S3", "S5", "S2", "S4", "S1"]
    assert marks(*bars) == expected
    for seed in range(4):
        rows = Random(seed).sample(range(5), 5)
        assert marks(*(bars[i] for i in rows)) == [expected[i] for i in rows]


def test_holes_come_before_grades() -> None:
    bar = Bar(SECTIONS["I"], 400.0, holes=(drilled_hole("I", 0, 80.0, 13.0),))
    stock = [Stock(Role.TIE, bar, "S355", "x"), Stock(Role.TIE, replace(bar, holes=()), "S355", "x")]
    stock += [Stock(Role.TIE, bar, "S275", "x")]
    found = group_parts(stock)
    assert [found.parts[i].mark for i in found.part_of] == ["T3", "T1", "T2"]


# Plates --------------------------------------------------------------------------------------------------

#: Handed: no corner or hole has its like.
GUSSET = Plate(
    ((0.0, 0.0), (310.0, 0.0), (310.0, 120.0), (180.0, 240.0), (0.0, 190.0)),
    10.0,
    tuple(drilled.plate_hole(x, y, 18.0, 10.0) for x, y in ((40.0, 40.0), (40.0, 95.0), (230.0, 50.0))),
)
BASE = Plate(
    rectangle(300.0, 260.0),
    20.0,
    tuple(drilled.plate_hole(x, y, 26.0, 20.0) for x, y in product((-100.0, 100.0), (-90.0, 90.0))),
)
ROUND_OFF = Plate(
    ((0.0, 0.0), (200.0, 0.0), (200.0, 100.0), (0.0, 100.0)),
    8.0,
    (drilled.plate_hole(60.0, 50.0, 14.0, 8.0, 10.0, 0.3),),
    (0.0, 0.3, 0.0, -0.1),
)
CAP = Plate(((90.0, 0.0), (-90.0, 0.0)), 12.0, (), (1.0, 1.0))
FLANGE = replace(
    CAP, holes=tuple(drilled.plate_hole(70 * c, 70 * s, 14.0, 12.0) for c, s in ((1, 0), (0, 1), (-1, 0)))
)
PLATES = {"gusset": GUSSET, "base": BASE, "rounded": ROUND_OFF, "cap": CAP, "flange": FLANGE}


@settings(max_examples=20, deadline=None)
@given(
    st.sampled_from(sorted(PLATES)),
    st.floats(0, 2 * pi),
    st.booleans(),
    st.integers(0, 4),
    SEEDS,
)
def test_a_plate_is_the_same_part_wherever_and_on_whichever_side_it_lies(
    name: str, angle: float, turned_over: bool, first: int, seed: int
) -> None:
    plate = PLATES[name]
    other = drilled.moved_plate(plate, angle, (321.0, -45.6), turned_over)
    count = first % len(plate.corners)
    other = replace(
        other,
        corners=other.corners[count:] + other.corners[:count],
        bulges=other.bulges[count:] + other.bulges[:count],
        holes=tuple(Random(seed).sample(other.holes, len(other.holes))),
    )
    assert other.volume == pytest.approx(plate.volume)
    found = grouped(plate, other, role=Role.GUSSET)
    assert len(found.parts) == 1
    assert grouped(other, plate, role=Role.GUSSET).parts == found.parts
    assert_parts_lie_on_their_stock(found, [plate, other])


def test_plates_that_differ_are_told_apart() -> None:
    def bent(by: float) -> Plate:
        return replace(GUSSET, corners=((0.0, 0.0), (310.0, 0.0), (310.0, 120.0 + by), *GUSSET.corners[3:]))

    def drilled_at(by: float, diameter: float = 18.0) -> Plate:
        return replace(
            GUSSET, holes=(*GUSSET.holes[:2], drilled.plate_hole(230.0 + by, 50.0, diameter, 10.0))
        )

    for near in (bent(0.4), drilled_at(0.3)):
        assert number(GUSSET, near) == 1
    for far in (bent(3.0), drilled_at(1.5), drilled_at(0.0, 22.0), replace(GUSSET, thickness=12.0)):
        assert number(GUSSET, far) == 2
        assert number(far, drilled.moved_plate(GUSSET, 1.0, (5.0, 6.0), True)) == 2
    assert number(GUSSET, replace(GUSSET, holes=GUSSET.holes[:2])) == 2
    assert number(ROUND_OFF, replace(ROUND_OFF, bulges=(0.0, 0.3, 0.0, 0.1))) == 2
    assert number(ROUND_OFF, replace(ROUND_OFF, bulges=(0.0, 0.0, 0.0, -0.1))) == 2
    assert number(CAP, replace(CAP, corners=((90.4, 0.0), (-90.4, 0.0)))) == 1
    assert number(CAP, replace(CAP, corners=((92.0, 0.0), (-92.0, 0.0)))) == 2
    assert (
        number(
            FLANGE, replace(FLANGE, holes=(*FLANGE.holes[:2], drilled.plate_hole(-49.5, -49.5, 14.0, 12.0)))
        )
        == 2
    )


def test_a_corner_in_a_straight_side_is_none() -> None:
    (a, b, c, d) = BASE.corners
    middle = ((a[0] + b[0]) / 2 + 11.0, a[1])
    assert number(BASE, replace(BASE, corners=(a, middle, b, c, d))) == 1


def test_plates_are_numbered_from_thin_to_thick_then_from_large_to_small() -> None:
    def plate(x: float, y: float, t: float, angle: float = 0.0) -> Plate:
        return drilled.moved_plate(Plate(rectangle(x, y), t), angle, (3.0, 4.0), False)

    plates = [
        plate(200, 300, 12),
        plate(100, 350, 12, 0.7),
        plate(500, 90, 15),
        plate(250, 300, 10),
        plate(200, 310, 12),
    ]
    assert marks(*plates) == ["S4", "S2", "S5", "S1", "S3"]
    assert marks(*plates[::-1]) == ["S3", "S1", "S5", "S2", "S4"]


# Bolt groups ---------------------------------------------------------------------------------------------

#: Three points of a scalene triangle: handed, as bolts cannot be turned over.
SCALENE = BoltGroup(bolt(), ((0.0, 0.0), (110.0, 0.0), (30.0, 70.0)))
SQUARE_FOUR = BoltGroup(bolt(), tuple(product((-40.0, 40.0), (-35.0, 35.0))))


@settings(max_examples=20, deadline=None)
@given(
    st.sampled_from(
        [SCALENE, SQUARE_FOUR, BoltGroup(bolt(), ((5.0, 6.0),)), BoltGroup(bolt(), ((0.0, 0.0), (60.0, 0.0)))]
    ),
    st.floats(0, 2 * pi),
    SEEDS,
)
def test_a_bolt_group_is_the_same_however_it_is_turned(group: BoltGroup, angle: float, seed: int) -> None:
    other = drilled.moved_group(group, angle, (12.0, -777.0))
    other = replace(
        other,
        points=tuple(Random(seed).sample(other.points, group.count)),
        fastener=replace(group.fastener, grip=group.fastener.grip + 1e-9),
    )
    found = grouped(other, group, role=Role.BOLTS)
    assert len(found.parts) == 1
    for shape, motion in zip((other, group), found.motion, strict=True):
        assert np.allclose(motion[2], (0, 0, 1, 0))
        there = compose(motion, translation([(*p, 0.0) for p in found.parts[0].shape.points]))[:, :2, 3]
        apart = np.linalg.norm(there[:, None] - np.array(shape.points), axis=2)
        assert apart.min(axis=0).max() < 0.01
        assert apart.min(axis=1).max() < 0.01


def test_bolt_groups_that_differ_are_told_apart() -> None:
    assert number(SCALENE, drilled.moved_group(SCALENE, 1.0, (0.0, 0.0), mirror=True)) == 2
    assert number(SQUARE_FOUR, drilled.moved_group(SQUARE_FOUR, 1.0, (0.0, 0.0), mirror=True)) == 1
    for change in ({"grip": 32.0}, {"length": 65.0}, {"grade": "10.9"}, {"washers": (1, 1)}, {"nuts": 2}):
        assert number(SCALENE, replace(SCALENE, fastener=replace(SCALENE.fastener, **change))) == 2
    moved = replace(SCALENE, points=(*SCALENE.points[:2], (30.0, 71.5)))
    assert number(SCALENE, moved) == 2
    assert number(SCALENE, replace(SCALENE, points=(*SCALENE.points, (50.0, 30.0)))) == 2


def test_bolt_groups_are_numbered_by_designation_grip_and_count() -> None:
    def group(diameter: float, length: float, grip: float, count: int) -> BoltGroup:
        return BoltGroup(bolt(diameter, length, grip), tuple((70.0 * i, 0.0) for i in range(count)))

    # By hand: M8 before M20, M20x60 before M20x100, thin grips first, then few bolts before many.
    groups = [
        group(20, 100, 30, 2),
        group(20, 60, 31, 4),
        group(20, 60, 31, 2),
        group(20, 60, 29, 6),
        group(8, 60, 29, 6),
    ]
    assert marks(*groups) == ["S5", "S4", "S3", "S2", "S1"]
    assert marks(*groups[::-1]) == ["S1", "S2", "S3", "S4", "S5"]


# All of them ---------------------------------------------------------------------------------------------


def test_the_same_parts_come_out_bit_by_bit_whatever_the_order() -> None:
    random = Random(3)
    shapes: list[Shape] = []
    for name in SECTIONS:
        bar = random_bar(random, name, 2)
        shapes += [
            bar,
            replace(bar, length=bar.length + 0.3),
            seen_from(bar, pi, 0.0)[0] if MIRRORS[name] else bar,
        ]
        steps = [
            replace(h, centre=(h.centre[0] + d, *h.centre[1:]))
            for h in bar.holes[:1]
            for d in (0.2, 0.4, 0.6)
        ]
        shapes += [replace(bar, holes=(step, *bar.holes[1:])) for step in steps]
    for plate in PLATES.values():
        shapes += [plate, drilled.moved_plate(plate, 0.4, (9.0, 8.0), True), replace(plate, thickness=13.0)]
        x, y = plate.corners[0]
        shapes += [replace(plate, corners=((x + d, y), *plate.corners[1:])) for d in (0.2, 0.7, 1.1)]
    shapes += [SCALENE, SQUARE_FOUR, drilled.moved_group(SCALENE, 1.0, (0.0, 0.0), mirror=True)]
    stock = [
        Stock(role, s, grade, "x") for s in shapes for role, grade in ((Role.TIE, "A"), (Role.STRUT, "B"))
    ]
    stock += [Stock(Role.TIE, s, "B", "x") for s in shapes[::2]]
    plain = group_parts(stock)
    for seed in range(3):
        rows = Random(seed).sample(range(len(stock)), len(stock))
        mixed = group_parts([stock[i] for i in rows])
        assert mixed.parts == plain.parts
        assert mixed.part_of.tolist() == plain.part_of[rows].tolist()


def test_letters_of_marks_do_not_clash() -> None:
    bar = Bar(SECTIONS["I"], 400.0)
    grouping = grouped(bar)
    kinds = [*(role.word for role in Role), "truss", "frame"]
    templates = [AssemblyTemplate(kind, "shop", ((0, IDENTITY),)) for kind in kinds]
    found = group_assemblies(templates, grouping)
    letters = {found.types[t].kind: found.types[t].mark.rstrip("1") for t in found.type_of}
    assert letters["column"] == "AC"
    assert letters["rafter"] == "AR"
    assert len(set(letters.values()) | {role.prefix for role in Role}) == len(kinds) + len(Role)


# Assemblies of bars, plates and bolts --------------------------------------------------------------------


def assembly(*things: tuple[Shape, np.ndarray]) -> list[tuple[Shape, np.ndarray]]:
    return list(things)


def types(*assemblies: list[tuple[Shape, np.ndarray]]) -> list[str]:
    stock = [Stock(Role.COLUMN, shape, "S355", "painted") for things in assemblies for shape, _ in things]
    count = iter(range(len(stock)))
    templates = [
        AssemblyTemplate("column", "shop", tuple((next(count), at) for _, at in things))
        for things in assemblies
    ]
    found = group_assemblies(templates, group_parts(stock))
    return [found.types[i].mark for i in found.type_of]


SOMEWHERE = compose(translation((1234.5, -987.0, 432.1)), rotation((1.0, 2.0, 3.0), 0.8))
FOOT = compose(translation((0.0, 0.0, 0.0)), rotation((0.0, 1.0, 0.0), -pi / 2))


def moved(things: list[tuple[Shape, np.ndarray]], motion: np.ndarray) -> list[tuple[Shape, np.ndarray]]:
    return [(shape, compose(motion, at)) for shape, at in things]


def test_plates_turned_about_their_own_symmetries_change_nothing() -> None:
    column = Bar(SECTIONS["I"], 3000.0)
    plain = assembly((column, IDENTITY), (BASE, FOOT))
    half = rotation((0.0, 0.0, 1.0), pi)
    over = np.array([[1.0, 0, 0, 0], [0, -1, 0, 0], [0, 0, -1, BASE.thickness]])
    for turn in (half, over, compose(half, over)):
        assert (
            types(plain, moved(assembly((column, IDENTITY), (BASE, compose(FOOT, turn))), SOMEWHERE))
            == ["AC1"] * 2
        )
    quarter = assembly((column, IDENTITY), (BASE, compose(FOOT, rotation((0.0, 0.0, 1.0), pi / 2))))
    assert len(set(types(plain, quarter))) == 2


def test_handed_plates_are_told_by_their_side() -> None:
    column = Bar(
        SECTIONS["I"], 3000.0, holes=(drilled_hole("I", 0, 700.0, 13.0), drilled_hole("I", 1, 400.0, 13.0))
    )
    over = compose(translation((0.0, 0.0, 10.0)), rotation((1.0, 0.0, 0.0), pi))
    one = assembly((column, IDENTITY), (GUSSET, FOOT))
    other = assembly((column, IDENTITY), (GUSSET, compose(FOOT, over)))
    assert len(set(types(one, other))) == 2
    drawn = drilled.moved_plate(GUSSET, 0.0, (0.0, 0.0), True)
    # The plate drawn turned over, and laid turned over: the same steel in the same place.
    back = np.array([[1.0, 0, 0, 0], [0, -1, 0, 0], [0, 0, -1, GUSSET.thickness]])
    assert (
        types(one, moved(assembly((column, IDENTITY), (drawn, compose(FOOT, inverse(back)))), SOMEWHERE))
        == ["AC1"] * 2
    )


def test_holes_tell_how_a_bar_lies_in_an_assembly() -> None:
    flip = compose(translation((3000.0, 0.0, 0.0)), rotation((0.0, 0.0, 1.0), pi))
    for holes, count in (
        ((), 1),
        ((drilled_hole("I", 0, 700.0, 13.0),), 2),
        ((drilled_hole("I", 0, 1500.0, 13.0),), 1),
    ):
        column = Bar(SECTIONS["I"], 3000.0, holes=holes)
        pair = [assembly((column, at), (GUSSET, FOOT)) for at in (IDENTITY, flip)]
        assert len(set(types(*pair))) == count
    turn = rotation((1.0, 0.0, 0.0), 1.0)
    for holes, count in (((), 1), ((drilled_hole("CHS", 0, 700.0, 13.0),), 2)):
        pipe = Bar(SECTIONS["CHS"], 3000.0, holes=holes)
        pair = [assembly((pipe, at), (GUSSET, FOOT)) for at in (IDENTITY, turn)]
        assert len(set(types(*pair))) == count


def test_bolts_and_round_plates_may_stand_turned() -> None:
    turn = rotation((0.0, 0.0, 1.0), 0.7)
    column = Bar(SECTIONS["I"], 3000.0)
    for shape, count in (
        (CAP, 1),
        (BoltGroup(bolt(), ((0.0, 0.0),)), 1),
        (FLANGE, 2),
        (SCALENE, 2),
        (SQUARE_FOUR, 2),
    ):
        pair = [assembly((column, IDENTITY), (GUSSET, FOOT), (shape, at)) for at in (IDENTITY, turn)]
        assert len(set(types(*pair))) == count
    half = rotation((0.0, 0.0, 1.0), pi)
    pair = [assembly((column, IDENTITY), (GUSSET, FOOT), (SQUARE_FOUR, at)) for at in (IDENTITY, half)]
    assert len(set(types(*pair))) == 1
    single = BoltGroup(bolt(), ((0.0, 0.0),))
    # Turned about the outer face of its head, which stays where it is.
    upside_down = compose(translation((0.0, 0.0, -25.0)), rotation((1.0, 0.0, 0.0), pi))
    pair = [assembly((column, IDENTITY), (GUSSET, FOOT), (single, at)) for at in (IDENTITY, upside_down)]
    assert len(set(types(*pair))) == 2


def test_every_wall_named_for_drilling_is_steel_on_both_sides_of_its_middle() -> None:
    for name, section in SECTIONS.items():
        body = solid(Bar(section, 400.0))
        for wall in range(len(walls(name))):
            hole = drilled_hole(name, wall, 200.0, 9.0)
            bored = solid(Bar(section, 400.0, holes=(hole,)))
            assert body.volume() - bored.volume() == pytest.approx(hole.area * hole.thickness, rel=0.02)
        assert all(a < b for a, b in pairwise([0.0, *(w[3] for w in walls(name)[:1])]))
