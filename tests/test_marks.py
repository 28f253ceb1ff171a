"""Marks of parts and assemblies: what shares one, and that they hang on shapes and on nothing else."""

from __future__ import annotations

from itertools import pairwise
from math import pi
from random import Random

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from shedbim.errors import ModelError
from shedbim.geometry.placements import IDENTITY, apply, compose, inverse, placement, rotation, translation
from shedbim.model.bars import SQUARE, Bar, EndCut, bar_on_axis
from shedbim.model.marks import AssemblyTemplate, PartGrouping, Stock, group_assemblies, group_parts
from shedbim.model.roles import Role
from shedbim.model.solids import solid
from shedbim.sections.profiles import Angle, Hollow, IShape, LippedC, LippedZ, Pipe
from shedbim.sections.section import Profile, Section


def section(name: str, profile: Profile) -> Section:
    return Section(name, name.split(maxsplit=1)[0], profile, "test")


I80 = section("I 80", IShape(80.0, 46.0, 3.8, 5.2, 5.0))
I300 = section("I 300", IShape(300.0, 150.0, 7.1, 10.7, 15.0))
TUBE = section("SHS 80x80x5", Hollow(80.0, 80.0, 5.0, 7.5, 5.0))
BOX = section("RHS 120x60x5", Hollow(120.0, 60.0, 5.0, 7.5, 5.0))
PIPE = section("CHS 48.3x4", Pipe(48.3, 4.0))
LIPPED = section("C 150", LippedC(150.0, 60.0, 18.0, 2.0, 3.0))
ZED = section("Z 150", LippedZ(150.0, 60.0, 18.0, 2.0, 3.0))
ANGLE = section("L 60x60x6", Angle(60.0, 60.0, 6.0, 8.0, 4.0))
LEAN = EndCut(((0.0, 0.5),))
SKEW = EndCut(((0.4, 0.2),))


def stock(bar: Bar, role: Role = Role.DIAGONAL, grade: str = "S355", finish: str = "painted") -> Stock:
    return Stock(role, bar, grade, finish)


def marks(grouping: PartGrouping) -> list[str]:
    return [grouping.parts[i].mark for i in grouping.part_of]


def flipped(bar: Bar) -> Bar:
    """The same steel after a half turn about its y axis, which its section must allow."""

    def seen(cut: EndCut) -> EndCut:
        return EndCut(tuple((-a, b) for a, b in cut.slopes), cut.notched)

    return Bar(bar.section, bar.length, seen(bar.end), seen(bar.start))


def mirrored(bar: Bar) -> Bar:
    """The mirror image in the plane across its middle."""

    def seen(cut: EndCut) -> EndCut:
        return EndCut(tuple((-a, -b) for a, b in cut.slopes), cut.notched)

    return Bar(bar.section, bar.length, seen(bar.end), seen(bar.start))


CAST = [
    stock(Bar(I300, 6000.0), Role.COLUMN),
    stock(Bar(I300, 8000.0, SQUARE, LEAN), Role.COLUMN),
    stock(Bar(I80, 9000.0), Role.COLUMN),
    stock(Bar(I300, 6000.0), Role.COLUMN, grade="S275"),
    stock(Bar(I300, 6000.0), Role.COLUMN, finish="galvanised"),
    stock(Bar(I300, 6000.0), Role.RAFTER),
    stock(Bar(I300, 7000.0, SQUARE, SKEW), Role.RAFTER),
    stock(mirrored(Bar(I300, 7000.0, SQUARE, SKEW)), Role.RAFTER),
    stock(bar_on_axis(TUBE, 2100.0, LEAN, LEAN)),
    stock(bar_on_axis(TUBE, 2100.0, SKEW, LEAN)),
    stock(bar_on_axis(PIPE, 1900.0, SKEW, LEAN)),
    stock(bar_on_axis(PIPE, 1900.0, SKEW, EndCut(((0.3, 0.1), (-0.2, 0.0)), notched=True))),
    stock(Bar(LIPPED, 5900.0), Role.PURLIN),
    stock(Bar(ZED, 5900.0), Role.PURLIN),
    stock(Bar(ZED, 5900.0, SQUARE, LEAN), Role.PURLIN),
    stock(mirrored(Bar(ZED, 5900.0, SQUARE, LEAN)), Role.PURLIN),
]


def test_marks_by_role_section_length_and_hand() -> None:
    grouping = group_parts(CAST)
    # By hand: I 80 before I 300; long before short; grades and finishes in the order of the alphabet.
    assert marks(grouping)[:6] == ["C5", "C2", "C1", "C3", "C4", "R3"]
    assert sorted(marks(grouping)[6:8]) == ["R1", "R2"]
    assert marks(grouping)[12] == "P1"
    assert sorted(marks(grouping)[13:]) == ["P2", "P3", "P4"]
    assert [part.mark for part in grouping.parts] == [
        *(f"C{i}" for i in range(1, 6)),
        *(f"R{i}" for i in range(1, 4)),
        *(f"D{i}" for i in range(1, 5)),
        *(f"P{i}" for i in range(1, 5)),
    ]
    for each, part in zip(CAST, (grouping.parts[i] for i in grouping.part_of), strict=True):
        assert (part.role, part.grade, part.finish, part.bar.section) == (
            each.role,
            each.grade,
            each.finish,
            each.shape.section,
        )


@settings(max_examples=30, deadline=None)
@given(st.randoms(use_true_random=False))
def test_marks_hang_neither_on_order_nor_on_direction_nor_on_noise(random: Random) -> None:
    plain = dict(zip(range(len(CAST)), marks(group_parts(CAST)), strict=True))
    rows = [random.randrange(len(CAST)) for _ in range(20)] + list(range(len(CAST)))
    random.shuffle(rows)

    def noise() -> float:
        return random.choice([-1e-9, 0.0, 1e-9])

    def shaken(cut: EndCut) -> EndCut:
        return EndCut(tuple((a + noise() / 100, b + noise() / 100) for a, b in cut.slopes), cut.notched)

    mix = []
    for i in rows:
        bar = CAST[i].shape
        if bar.section.profile.symmetry.mirror is not None and random.random() < 0.5:
            bar = flipped(bar)
        bar = Bar(bar.section, bar.length + noise(), shaken(bar.start), shaken(bar.end))
        mix.append(stock(bar, CAST[i].role, CAST[i].grade, CAST[i].finish))
    grouping = group_parts(mix)
    assert marks(grouping) == [plain[i] for i in rows]
    for i in random.sample(range(len(mix)), 4):
        each, part, motion = mix[i], grouping.part_of[i], grouping.motion[i]
        inner, outer = solid(grouping.parts[part].bar).transform(motion), solid(each.shape)
        assert (inner - outer).volume() + (outer - inner).volume() < 0.01 * each.shape.volume


def test_the_same_parts_come_out_bit_by_bit_whatever_the_order() -> None:
    many = [
        stock(Bar(s.shape.section, s.shape.length + d, s.shape.start, s.shape.end), s.role)
        for s in CAST
        for d in (0.0, 1e-10, 0.3)
    ]
    parts = group_parts(many).parts
    for seed in range(5):
        assert group_parts(Random(seed).sample(many, len(many))).parts == parts


def test_a_mirrored_building_swaps_handed_marks_and_nothing_else() -> None:
    # Without the tubes of which only one hand is there.
    cast = CAST[:9] + CAST[12:]
    plain = group_parts(cast)
    image = group_parts([stock(mirrored(s.shape), s.role, s.grade, s.finish) for s in cast])
    assert image.parts == plain.parts
    changed = [
        i for i, (one, other) in enumerate(zip(marks(plain), marks(image), strict=True)) if one != other
    ]
    assert [marks(image)[i] for i in (6, 7)] == [marks(plain)[i] for i in (7, 6)]
    assert [marks(image)[i] for i in (11, 12)] == [marks(plain)[i] for i in (12, 11)]
    assert changed == [6, 7, 11, 12]


def test_nothing_in_nothing_out() -> None:
    grouping = group_parts([])
    assert grouping.parts == ()
    assert grouping.motion.shape == (0, 3, 4)
    assert group_assemblies([], grouping).types == ()


# Assemblies ---------------------------------------------------------------------------------------------

#: A truss whose panels are unequal, so that it is not its own mirror end for end.
NODES = (0.0, 1500.0, 2700.0, 4400.0, 5500.0)
Members = list[tuple[Bar, np.ndarray]]


def line(
    section: Section, start: tuple[float, ...], end: tuple[float, ...], up: tuple[float, ...] = (0, 1, 0)
) -> tuple[Bar, np.ndarray]:
    along = np.subtract(end, start)
    return Bar(section, float(np.linalg.norm(along))), placement(start, along, up)


def truss(cleat: Section | None = None, side: float = 1.0) -> Members:
    """Chords and webs in the plane y = 0; a cleat, if any, on one side of it."""
    members = [line(BOX, (0, 0, 0), (5500, 0, 0)), line(BOX, (0, 0, 1200), (5500, 0, 1200))]
    for i, (a, b) in enumerate(pairwise(NODES)):
        low, high = (0.0, 1200.0) if i % 2 else (1200.0, 0.0)
        members.append(line(TUBE, (a, 0, low), (b, 0, high)))
    if cleat is not None:
        members.append(line(cleat, (2000, 90 * side, 1200), (2300, 90 * side, 1200), (0, 0, 1)))
    return members


def moved(members: Members, motion: np.ndarray) -> Members:
    return [(bar, compose(motion, at)) for bar, at in members]


def reflected(members: Members, normal: tuple[float, float, float]) -> Members:
    """The mirror image of members that are cut square and whose section is its own mirror in y."""
    n = np.array(normal) / np.linalg.norm(normal)
    mirror = np.eye(3) - 2 * np.outer(n, n)
    return [
        (bar, np.hstack([mirror @ at[:, :3] @ np.diag([1, 1, -1.0]), (mirror @ at[:, 3:])]))
        for bar, at in members
    ]


def grouped(*assemblies: Members, kinds: str = "truss") -> tuple[list[str], np.ndarray]:
    """Marks of assemblies, each made of its own stock, and the motions of their types."""
    bars = [stock(bar) for members in assemblies for bar, _ in members]
    count = iter(range(len(bars)))
    templates = [
        AssemblyTemplate(kinds, "shop", tuple((next(count), at) for _, at in members))
        for members in assemblies
    ]
    found = group_assemblies(templates, group_parts(bars))
    return [found.types[i].mark for i in found.type_of], found.motion


SOMEWHERE = compose(
    translation((1234.5, -987.0, 432.1)), compose(rotation((1, 2, 3), 0.8), rotation((0, 0, 1), 2.1))
)


def test_a_truss_moved_or_turned_about_the_vertical_is_the_same_type() -> None:
    half = rotation((0, 0, 1), pi)
    found, motion = grouped(truss(), moved(truss(), SOMEWHERE), moved(truss(), half))
    assert found == ["TR1"] * 3
    assert np.array_equal(motion[0], IDENTITY)
    # The truss is flat, so a half turn about the normal and length would do as well: any that lays it right.
    for m, own in zip(motion, (IDENTITY, SOMEWHERE, half), strict=True):
        rest = compose(inverse(own), m)
        corners = np.array([(0.0, 0, 0), (5500, 0, 0), (5500, 0, 1200), (0, 0, 1200)])
        there = apply(rest, corners)
        assert all(np.linalg.norm(corners - p, axis=1).min() < 1e-6 for p in there)
        assert np.linalg.det(rest[:, :3]) == pytest.approx(1.0)


def test_members_turned_about_their_own_symmetries_change_nothing() -> None:
    quarter = rotation((1, 0, 0), pi / 2)
    other = []
    for bar, at in truss(PIPE):
        turn = {TUBE: quarter, PIPE: rotation((1, 0, 0), 0.7)}.get(bar.section, IDENTITY)
        flip = compose(translation((bar.length, 0, 0)), rotation((0, 1, 0), pi))
        other.append((bar, compose(compose(at, turn), flip)))
    assert grouped(truss(PIPE), other[::-1])[0] == ["TR1", "TR1"]
    # A quarter turn is no symmetry of a box that is twice as high as wide.
    wrong = [(bar, compose(at, quarter) if bar.section is BOX else at) for bar, at in truss(PIPE)]
    assert len(set(grouped(truss(PIPE), wrong)[0])) == 2


def test_a_mirrored_truss_is_another_type_only_if_no_motion_helps() -> None:
    # Flat trusses of symmetrical sections: the half turn about the vertical is as good as the mirror.
    assert grouped(truss(), reflected(truss(), (1, 0, 0)))[0] == ["TR1", "TR1"]
    # With a cleat on one side it is handed, whichever plane it is mirrored in.
    for normal in ((1, 0, 0), (0, 1, 0), (0.6, 0, 0.8)):
        assert len(set(grouped(truss(I80), reflected(truss(I80), normal))[0])) == 2
    assert len(set(grouped(truss(I80), truss(I80, side=-1.0))[0])) == 2
    twice = reflected(reflected(truss(I80), (1, 0, 0)), (0, 1, 0))
    assert grouped(truss(I80), twice)[0] == ["TR1", "TR1"]


def test_handed_types_are_numbered_by_their_shape() -> None:
    left, right = truss(I80), reflected(truss(I80), (1, 0, 0))
    first = grouped(left, right)[0]
    assert sorted(first) == ["TR1", "TR2"]
    assert grouped(right, left)[0] == first[::-1]
    assert grouped(moved(right, SOMEWHERE), right, moved(left, SOMEWHERE))[0] == [
        first[1],
        first[1],
        first[0],
    ]


def test_a_member_out_of_place_makes_another_type() -> None:
    def shifted(by: float) -> Members:
        members = truss(I80)
        bar, at = members[3]
        return [*members[:3], (bar, compose(translation((by, 0, 0)), at)), *members[4:]]

    assert [len(set(grouped(truss(I80), shifted(d))[0])) for d in (0.0, 0.5, 3.0, 400.0)] == [1, 1, 2, 2]
    assert [len(set(grouped(truss(I80), moved(shifted(d), SOMEWHERE))[0])) for d in (0.5, 3.0)] == [1, 2]


@settings(max_examples=30, deadline=None)
@given(st.data())
def test_random_assemblies(data: st.DataObject) -> None:
    count = data.draw(st.integers(1, 5))
    coordinate = st.integers(-20, 20).map(lambda i: 150.0 * i)
    members: Members = []
    for _ in range(count):
        kind = data.draw(st.sampled_from([I80, TUBE, PIPE, LIPPED, ZED, ANGLE]))
        bar = Bar(
            kind, data.draw(st.sampled_from([1000.0, 1700.0])), data.draw(st.sampled_from([SQUARE, LEAN]))
        )
        origin = [data.draw(coordinate) for _ in range(3)]
        turn = compose(
            rotation((0, 0, 1), data.draw(st.floats(0, 6))), rotation((1, 1, 0), data.draw(st.floats(0, 6)))
        )
        members.append((bar, compose(translation(origin), turn)))
    angle = data.draw(st.floats(0, 6))
    motion = compose(
        translation((500.0, -70.0, 9000.0)), rotation((1, -2, data.draw(st.integers(-3, 3))), angle)
    )
    other = data.draw(st.permutations(moved(members, motion)))
    found, (_, onto) = grouped(members, other)
    assert found == ["TR1", "TR1"]
    # Every piece of the first, carried by the motion that came back, is a piece of the second.
    there = [solid(bar).transform(at) for bar, at in other]
    for bar, at in members[:2]:
        here = solid(bar).transform(compose(onto, at))
        box = np.array(here.bounding_box())
        near = [each for each in there if np.abs(box - each.bounding_box()).max() < 2.0]
        assert any((here - each).volume() + (each - here).volume() < 0.01 * bar.volume for each in near)


def frames(sides: list[float]) -> tuple[list[str], list[str]]:
    """Marks of trusses and of frames, each of two columns with a truss of the given hand between them."""
    bars: list[Stock] = []
    templates: list[AssemblyTemplate] = []

    def members(lines: Members, role: Role) -> tuple[tuple[int, np.ndarray], ...]:
        first = len(bars)
        bars.extend(stock(bar, role) for bar, _ in lines)
        return tuple((first + i, at) for i, (_, at) in enumerate(lines))

    for side in sides:
        templates.append(AssemblyTemplate("truss", "shop", members(truss(I80, side), Role.POST)))
        columns = [
            line(I300, (-200, 0, -5000), (-200, 0, 1200)),
            line(I300, (5700, 0, -5000), (5700, 0, 1200)),
        ]
        child = ((len(templates) - 1, IDENTITY),)
        templates.append(AssemblyTemplate("frame", "site", members(columns, Role.COLUMN), child))
    found = group_assemblies(templates, group_parts(bars))
    named = [found.types[i].mark for i in found.type_of]
    assert {t.kind: t.made for t in found.types} == {"truss": "shop", "frame": "site"}
    return named[::2], named[1::2]


def test_frames_hold_trusses() -> None:
    assert frames([1.0, 1.0]) == (["TR1", "TR1"], ["F1", "F1"])
    trusses, held = frames([1.0, -1.0, 1.0])
    assert sorted(set(trusses)) == ["TR1", "TR2"]
    assert [t[-1] for t in trusses] == [f[-1] for f in held]


def test_children_are_told_by_how_they_lie() -> None:
    bars = [stock(bar) for bar, _ in truss(I80)] + [stock(Bar(I300, 6200.0), Role.COLUMN)]
    body = AssemblyTemplate("truss", "shop", tuple((i, at) for i, (_, at) in enumerate(truss(I80))))
    # The same truss held the right way, turned about the vertical, and upside down, beside one column.
    middle = translation((2750.0, 0, 600.0))

    def about(axis: tuple[int, int, int]) -> np.ndarray:
        return compose(middle, compose(rotation(axis, pi), inverse(middle)))

    column = ((len(bars) - 1, placement((-200, 0, -5000), (0, 0, 1), (0, 1, 0))),)
    ways = [IDENTITY, about((0, 0, 1)), about((1, 0, 0))]
    templates = [body, *(AssemblyTemplate("frame", "site", column, ((0, way),)) for way in ways)]
    elsewhere = (column[0][0], compose(SOMEWHERE, column[0][1]))
    templates.append(AssemblyTemplate("frame", "site", (elsewhere,), ((0, compose(SOMEWHERE, ways[1])),)))
    found = group_assemblies(templates, group_parts(bars))
    named = [found.types[i].mark for i in found.type_of]
    assert named[0] == "TR1"
    assert sorted(named[1:4]) == ["F1", "F2", "F3"]
    assert named[4] == named[2]
    first = compose(inverse(SOMEWHERE), found.motion[4])
    assert np.abs(first - IDENTITY).max() < 1e-6


def test_frames_of_trusses_drawn_in_other_frames_are_one_type() -> None:
    bars = [stock(bar) for bar, _ in truss(I80)] + [stock(Bar(I300, 6200.0), Role.COLUMN)]
    count = len(bars) - 1
    column = ((count, placement((-200, 0, -5000), (0, 0, 1), (0, 1, 0))),)

    def pair(members: Members, held: np.ndarray, child: int) -> list[AssemblyTemplate]:
        inside = tuple((i, at) for i, (_, at) in enumerate(members))
        return [
            AssemblyTemplate("truss", "shop", inside),
            AssemblyTemplate("frame", "site", column, ((child, held),)),
        ]

    templates = pair(truss(I80), IDENTITY, 0) + pair(moved(truss(I80), SOMEWHERE), inverse(SOMEWHERE), 2)
    found = group_assemblies(templates, group_parts(bars))
    assert [found.types[i].mark for i in found.type_of] == ["TR1", "F1", "TR1", "F1"]


def test_members_drawn_from_the_other_end_are_the_same() -> None:
    def leaning(turned: bool) -> Members:
        bar, at = line(TUBE, (0, 0, 0), (2000, 0, 900))
        bar = Bar(bar.section, bar.length, SQUARE, SKEW)
        if turned:
            half = compose(translation((bar.length, 0, 0)), rotation((0, 1, 0), pi))
            return [(flipped(bar), compose(at, half))]
        return [(bar, at)]

    base = [line(BOX, (0, 0, 0), (2500, 0, 0)), line(I80, (0, 90, 0), (300, 90, 0))]
    assert grouped(base + leaning(False), base + leaning(True))[0] == ["TR1", "TR1"]
    wrong = [(bar, at) for (bar, _), (_, at) in zip(leaning(True), leaning(False), strict=True)]
    assert len(set(grouped(base + leaning(False), base + wrong)[0])) == 2


def test_children_of_equal_shape_and_unlike_grade_do_not_stand_in_for_each_other() -> None:
    bar = Bar(TUBE, 1000.0)
    bars = [stock(bar), stock(bar, grade="S235"), stock(Bar(I300, 6200.0), Role.COLUMN)]
    child = [AssemblyTemplate("truss", "shop", ((i, IDENTITY),)) for i in (0, 1)]
    left, right = translation((-1000.0, 0, 0)), translation((2000.0, 300, 0))
    column = ((2, placement((-200, 0, -5000), (0, 0, 1), (0, 1, 0))),)
    held = [((0, left), (1, right)), ((0, right), (1, left)), ((1, right), (0, left))]
    templates = child + [AssemblyTemplate("frame", "site", column, each) for each in held]
    found = group_assemblies(templates, group_parts(bars))
    named = [found.types[i].mark for i in found.type_of]
    assert sorted(named[:2]) == ["TR1", "TR2"]
    assert named[2] == named[4] != named[3]


def test_kind_and_making_keep_assemblies_apart() -> None:
    bars = [stock(bar) for bar, _ in truss()]
    inside = tuple((i, at) for i, (_, at) in enumerate(truss()))
    templates = [
        AssemblyTemplate(k, m, inside) for k, m in (("truss", "site"), ("truss", "shop"), ("frame", "shop"))
    ]
    found = group_assemblies(templates, group_parts(bars))
    assert [found.types[i].mark for i in found.type_of] == ["TR2", "TR1", "F1"]


def test_promises_of_the_expansion_are_checked() -> None:
    grouping = group_parts([stock(Bar(I80, 1000.0))])
    with pytest.raises(ModelError, match="child"):
        group_assemblies([AssemblyTemplate("truss", "shop", (), ((0, IDENTITY),))], grouping)
    with pytest.raises(ModelError, match="arch"):
        group_assemblies([AssemblyTemplate("arch", "shop", ((0, IDENTITY),))], grouping)


def test_no_letters_are_used_twice() -> None:
    prefixes = [role.prefix for role in Role]
    assert len(set(prefixes)) == len(prefixes)
    assert not {"TR", "F"} & set(prefixes)
