"""What is written on pictures: letters, grid, marks, scale and caption; nothing covers anything else."""

from __future__ import annotations

import unicodedata
from dataclasses import replace
from itertools import combinations

import numpy as np
import pytest
from cast import shed_of
from picture_scenes import HALL, decoded, scene

from shedbim.model.roles import Role, Sort
from shedbim.model.shed import Grid, Shed
from shedbim.sections.profiles import Flat
from shedbim.writers.pictures import letters
from shedbim.writers.pictures.annotations import Balloon, Rectangle, Stroke, Words, capital_height
from shedbim.writers.pictures.composition import Composition, compose
from shedbim.writers.pictures.overlay import draw_over
from shedbim.writers.pictures.placing import Room
from shedbim.writers.pictures.shot import FINER
from shedbim.writers.pictures.views import VIEWS, render_view, selected

WIDTH, HEIGHT = 1100, 700
LETTERS = [chr(code) for code in range(33, 127)]


def composed(shed: Shed, view: str, argument: str | None = None, labels: str | None = None) -> Composition:
    chosen = selected(shed, view, argument)
    return compose(
        shed,
        chosen.view,
        chosen.pieces,
        width=WIDTH,
        height=HEIGHT,
        labels=labels or VIEWS[view].labels,
        caption="Test · front",
    )


def balloons(composition: Composition) -> list[Balloon]:
    return [each for each in composition.annotations if isinstance(each, Balloon)]


def words(composition: Composition) -> list[Words]:
    return [each for each in composition.annotations if isinstance(each, Words)]


def dots(composition: Composition) -> list[Stroke]:
    strokes = [each for each in composition.annotations if isinstance(each, Stroke)]
    return [each for each in strokes if (each.x1, each.y1) == (each.x2, each.y2)]


def touch(a: Rectangle, b: Rectangle) -> bool:
    return a[0] < b[2] and b[0] < a[2] and a[1] < b[3] and b[1] < a[3]


def owners(composition: Composition) -> np.ndarray:
    shot = composition.shot
    return np.append(shot.owners, -1)[shot.canvas.seen(len(shot.owners))[::FINER, ::FINER]]


def test_every_sign_of_a_keyboard_has_strokes_of_its_own_within_its_room() -> None:
    drawn = set()
    for sign in LETTERS:
        points = np.concatenate(letters.strokes(sign, 6.0))
        assert points[:, 0].min() >= -0.5
        assert points[:, 0].max() <= letters.width(sign, 6.0) + 0.5
        assert points[:, 1].min() >= -7.0
        assert points[:, 1].max() <= 2.0
        drawn.add(tuple(tuple(run.ravel().tolist()) for run in letters.strokes(sign, 6.0)))
    assert len(drawn) == len(LETTERS)


def test_widths_add_up_and_follow_the_size() -> None:
    assert letters.width("", 10.0) == 0.0
    assert letters.width("TC12", 12.0) == pytest.approx(2 * letters.width("TC12", 6.0))
    apart = sum(letters.width(sign, 6.0) for sign in "TC12")
    assert letters.width("TC12", 6.0) == pytest.approx(apart + 3 * 1.7)


@pytest.mark.parametrize(
    ("letter", "base"), [("ü", "u"), ("Ü", "U"), ("ç", "c"), ("Ł", "Ł"), ("å", "a"), ("ő", "o")]
)
def test_accents_stand_clear_of_their_letter(letter: str, base: str) -> None:
    plain, accented = letters.strokes(base, 6.0), letters.strokes(letter, 6.0)
    assert [run.tolist() for run in accented[: len(plain)]] == [run.tolist() for run in plain]
    assert (len(accented) > len(plain)) == (letter != base)
    assert letters.strokes(unicodedata.normalize("NFD", letter), 6.0)[0].tolist() == accented[0].tolist()
    body = np.concatenate(plain)
    for accent in accented[len(plain) :]:
        assert accent[:, 1].max() < body[:, 1].min() or accent[:, 1].min() >= body[:, 1].max()


def test_a_sign_that_is_not_there_is_an_empty_box_and_never_nothing() -> None:
    (box,) = letters.strokes("界", 6.0)
    assert box.tolist() == [[0, 0], [4, 0], [4, -6], [0, -6], [0, 0]]
    assert letters.width("界", 6.0) == 4.0


def test_words_change_pixels_within_their_rectangle_and_nowhere_else() -> None:
    label = Words(60.0, 30.0, "TC12", 11.0, halo=True)
    pixels = np.full((60, 120, 3), 128.0, np.float32)
    draw_over(pixels, [label])
    row, column = np.nonzero((pixels != 128).any(axis=2))
    left, top, right, bottom = label.rectangle
    assert left - 1 <= column.min() < left + 6
    assert right - 6 < column.max() <= right
    assert top - 1 <= row.min() < 25
    assert 35 < row.max() <= bottom
    assert pixels.min() < 60
    assert pixels.max() > 250
    draw_over(pixels, [Words(-500.0, 30.0, "gone", 11.0), Balloon(1e4, 1e4, "A", 11.0)])


def test_balloons_stand_below_their_lines_in_elevations_and_beside_them_in_the_plan() -> None:
    front, side, plan = (composed(HALL, view) for view in ("front", "side", "plan"))
    assert [each.text for each in balloons(front)] == ["A"]  # nothing stands near line B
    assert [each.text for each in balloons(side)] == ["1", "2", "3"]
    assert sorted(each.text for each in balloons(plan)) == ["1", "2", "3", "A"]
    for each in balloons(side):
        y = HALL.grid.y[HALL.grid.numbers.index(each.text)]
        place = side.projection.points(np.array([0.0, y, 0.0]))
        assert each.x == pytest.approx(place[0])
        assert each.y > place[1] + each.radius
    for each in balloons(plan):
        if each.text != "A":
            y = HALL.grid.y[HALL.grid.numbers.index(each.text)]
            place = plan.projection.points(np.array([0.0, y, 0.0]))
            assert each.y == pytest.approx(place[1])
            assert each.x < place[0] - each.half


def test_frame_shows_letters_bay_shows_its_own_two_numbers_and_close_views_none() -> None:
    shed = shed_of("valley")
    assert [each.text for each in balloons(composed(shed, "frame", "20"))] == list(shed.grid.letters)
    assert {each.text for each in balloons(composed(shed, "bay", "20"))} == {"20", "30", *shed.grid.letters}
    assert balloons(composed(shed, "place", "0,0,3000")) == []
    assert balloons(composed(shed, "isometric", labels="none")) == []


def test_balloons_are_thinned_until_none_touch_and_the_ends_of_a_row_stay() -> None:
    sticks = [
        (
            f"{n}/post",
            HALL.parts[0].role,
            HALL.parts[0].bar.section.profile,
            (0.0, y, 0.0),
            (0.0, y, 9000.0),
            (1.0, 0.0, 0.0),
        )
        for n, y in enumerate(np.arange(90) * 1700.0)
    ]
    lines = tuple(float(n * 1700 + (300 if n % 7 == 3 else 0)) for n in range(90))
    shed = replace(scene(*sticks), grid=Grid(("A",), (0.0,), tuple(f"{n}" for n in range(1, 91)), lines))
    shown = balloons(composed(shed, "side"))
    assert 10 < len(shown) < 90
    assert {"1", "90"} <= {each.text for each in shown}
    assert not any(touch(a.rectangle, b.rectangle) for a, b in combinations(shown, 2))


@pytest.mark.parametrize(
    ("name", "view", "argument", "labels"),
    [
        ("valley", "isometric", None, "marks"),
        ("lopsided", "isometric", None, "grid"),
        ("valley", "plan", None, "marks"),
        ("valley", "front", None, "keys"),
        ("lopsided", "frame", "2", "marks"),
        ("valley", "frame", "30", "marks"),
        ("lean", "bay", "1", "marks"),
        ("flat", "piece", "2/*", "keys"),
        ("lopsided", "place", "0,6900,5800", "marks"),
    ],
)
def test_nothing_written_covers_anything_else_written(
    name: str, view: str, argument: str | None, labels: str
) -> None:
    composition = composed(shed_of(name), view, argument, labels)
    rectangles = [each.rectangle for each in (*balloons(composition), *words(composition))]
    air = 0.2 * capital_height(WIDTH, HEIGHT)
    smaller = [(a + air, b + air, c - air, d - air) for a, b, c, d in rectangles]
    assert not any(touch(a, b) for a, b in combinations(smaller, 2))
    for left, top, right, bottom in rectangles:
        assert left >= 0
        assert top >= 0
        assert right <= composition.width
        assert bottom <= composition.height
    seen = owners(composition)
    shed = shed_of(name)
    texts = {each.text for each in words(composition)}
    if labels != "grid":
        # A leader's dot lies on a piece of which the picture says the name.
        for dot in dots(composition):
            piece = seen[int(dot.y1), int(dot.x1)]
            text = shed.pieces.keys[piece] if labels == "keys" else shed.parts[shed.pieces.part[piece]].mark
            assert piece >= 0
            assert text in texts


def test_every_mark_of_a_frame_is_told() -> None:
    shed = shed_of("lopsided")
    composition = composed(shed, "frame", "2")
    drawn = selected(shed, "frame", "2").pieces
    parts = [shed.parts[part] for part in shed.pieces.part[drawn].tolist()]
    marks = {part.mark for part in parts if part.role.sort is Sort.MEMBER}
    assert len(marks) > 8
    assert marks <= {each.text for each in words(composition)}


def test_a_label_beside_its_piece_is_nearer_to_it_than_to_any_other() -> None:
    composition = composed(HALL, "side", labels="keys")
    seen = owners(composition)
    labels = [each for each in words(composition) if each.text in HALL.pieces.keys]
    assert {each.text for each in labels} == set(HALL.pieces.keys)
    for each in labels:
        row, column = np.nonzero(seen >= 0)
        left, top, right, bottom = each.rectangle
        off = np.hypot(column - np.clip(column, left, right), row - np.clip(row, top, bottom))
        assert HALL.pieces.keys[seen[row[off.argmin()], column[off.argmin()]]] == each.text


@pytest.mark.parametrize("turned", [False, True])
def test_labels_stand_to_the_right_of_upright_pieces_and_above_level_ones(turned: bool) -> None:
    ends = [((0.0, 0.0, 0.0), (0.0, 0.0, 6000.0)), ((0.0, 100.0, 3000.0), (0.0, 5000.0, 3000.0))]
    (foot, head), (front, back) = [pair[::-1] for pair in ends] if turned else ends
    shed = scene(
        ("post", Role.COLUMN, Flat(200.0, 200.0), foot, head, (1.0, 0.0, 0.0)),
        ("rail", Role.SIDE_RAIL, Flat(50.0, 40.0), front, back, (0.0, 0.0, 1.0)),
        (
            "end",
            Role.COLUMN,
            Flat(200.0, 200.0),
            (0.0, -4000.0, 0.0),
            (0.0, -4000.0, 6000.0),
            (1.0, 0.0, 0.0),
        ),
    )
    composition = composed(shed, "side", labels="keys")
    places = {each.text: each.rectangle for each in words(composition)}
    seen = owners(composition)
    assert places["post"][0] >= np.nonzero(seen == 0)[1].max()
    assert places["rail"][3] <= np.nonzero(seen == 1)[0].min() + 1


@pytest.mark.parametrize(("name", "line"), [("packing-house", "4"), ("lopsided", "2"), ("valley", "20")])
def test_between_a_label_without_leader_and_its_piece_lies_no_other(name: str, line: str) -> None:
    shed, composition = shed_of(name), composed(shed_of(name), "frame", line)
    # Only members are labelled here: what small things lie between takes no label of its own.
    parts = [shed.parts[part] for part in shed.pieces.part.tolist()]
    marks = np.array([*(part.mark if part.role.sort is Sort.MEMBER else "" for part in parts), ""])
    seen = marks[owners(composition)]
    led = [
        (each.x2, each.y2) for each in composition.annotations if isinstance(each, Stroke) and not each.chain
    ]
    labels = [each for each in words(composition) if (seen == each.text).any()]
    assert len(labels) > 10
    for each in labels:
        left, top, right, bottom = each.rectangle
        if any(left - 0.1 <= x <= right + 0.1 and top - 0.1 <= y <= bottom + 0.1 for x, y in led):
            continue
        row, column = np.nonzero(seen == each.text)
        nearest = np.hypot(column - each.x, row - each.y).argmin()
        steps = np.linspace(0.0, 1.0, 50)
        x = each.x + steps * (column[nearest] - each.x)
        y = each.y + steps * (row[nearest] - each.y)
        assert set(seen[y.astype(int), x.astype(int)]) <= {"", each.text}


def test_the_scale_bar_is_as_long_as_it_says() -> None:
    composition = composed(HALL, "side")
    (end,) = (each for each in words(composition) if each.text.endswith(" m"))
    (start,) = (each for each in words(composition) if each.text == "0")
    metres = float(end.text.removesuffix(" m"))
    assert end.x - start.x == pytest.approx(metres * 1000 * composition.projection.scale)
    assert 40 < end.x - start.x < 0.3 * composition.width


def test_the_arms_of_a_slanting_view_are_as_long_as_they_say() -> None:
    composition = composed(HALL, "isometric")
    (said,) = (each for each in words(composition) if each.text.startswith("each arm "))
    length = 1000 * float(said.text.split()[2])
    arms = [
        each
        for each in composition.annotations
        if isinstance(each, Stroke) and each.colour == said.colour and not each.chain
    ]
    assert len(arms) == 3
    for axis, arm in enumerate(arms):
        ends = np.zeros((2, 3))
        ends[1, axis] = length
        expected = np.diff(composition.projection.points(ends)[:, :2], axis=0)[0]
        assert (arm.x2 - arm.x1, arm.y2 - arm.y1) == pytest.approx(tuple(expected))


def test_a_caption_that_is_too_long_is_shortened_and_none_is_written_where_none_is_wanted() -> None:
    named = replace(HALL, project=replace(HALL.project, name="Ferry Road Store " * 6))
    chosen = selected(named, "front")
    composition = compose(named, chosen.view, caption=named.project.name, width=320, height=200)
    (caption,) = words(composition)
    assert caption.text.startswith("Ferry Road")
    assert caption.text.endswith("…")
    assert caption.rectangle[2] <= 320
    bare = decoded(render_view(named, "front", labels="none", caption=False, width=320, height=200))
    told = decoded(render_view(named, "front", labels="none", width=320, height=200))
    assert (bare[-7:, :160] == 255).all()
    assert (told[-7:, :160] < 255).any()


def test_room_knows_what_is_taken_covered_and_crossed() -> None:
    busy = np.zeros((60, 100), bool)
    busy[20:30, 40:60] = True
    room = Room(busy)
    boxes = np.array([[40, 20, 60, 30], [30, 20, 50, 30], [0, 0, 10, 10], [50, 25, 90, 35]], float)
    assert room.covered(boxes) == pytest.approx([1.0, 0.5, 0.0, 50 / 400])
    assert room.free(boxes).tolist() == [True] * 4
    assert (
        room.free(np.array([[-1, 0, 5, 5], [95, 0, 101, 5], [0, 56, 5, 61]], float)).tolist() == [False] * 3
    )
    room.take(np.array([0.0, 0, 12, 12]), np.array([12.0, 12, 45, 28]))
    assert room.free(boxes).tolist() == [False, False, False, True]
    leaders = np.array([[5, 40, 50, 5], [20, 50, 90, 50], [50, 5, 6, 6]], float)
    assert room.clear(leaders).tolist() == [False, True, False]


def test_a_frame_takes_no_label_twice_for_one_piece() -> None:
    shed = shed_of("lopsided")
    texts = [each.text for each in words(composed(shed, "frame", "2", "keys"))]
    keys = [text for text in texts if text in shed.pieces.keys]
    assert len(keys) == len(set(keys)) > 20
