"""The view in a real browser: it asks for nothing, draws what is there, and picks what an eye would see."""

from __future__ import annotations

import cast
import numpy as np
import pytest
from view_browser import Desk, Picture, Sight
from view_eye import EMPTY, UNSURE, Eye, eye_of, seen, spots, steady
from view_pages import BLOCKS, assert_card_tells_of, hue_of, page_of, page_text

from shedbim.model.shed import Shed
from shedbim.writers.palette import PALETTE

#: How far a pixel may be from the paper's colour and still be paper: drivers round.
_NOISE = 6
#: Pixels of the canvas, from its left, that the card of a selection never covers.
_FREE = 350


#: What the fixtures `view` and `shed` show.
SPECIMEN = "lopsided"


@pytest.fixture(scope="module")
def shed() -> Shed:
    return cast.members_of(SPECIMEN)


def drawn(sight: Sight, picture: Picture) -> np.ndarray:
    """Which pixels are not bare paper."""
    return np.abs(picture.astype(int) - sight.colour("--paper")).max(axis=2) > _NOISE


def from_iso(sight: Sight, projection: str) -> Eye:
    """Look from the isometric view, without lines of the grid."""
    if sight.page.is_checked("#grid-on"):
        sight.page.uncheck("#grid-on")
    sight.page.select_option("#projection", projection)
    sight.page.click("#view-isometric")
    sight.settle()
    return eye_of(sight)


def places_in(where: np.ndarray, count: int) -> list[tuple[int, int]]:
    """``count`` pixels (x, y) spread over those of a mask (h, w)."""
    rows, columns = np.nonzero(where)
    assert len(rows) > 0
    chosen = np.random.default_rng(7).choice(len(rows), min(count, len(rows)), replace=False)
    return [(int(columns[i]), int(rows[i])) for i in chosen]


def assert_picks_as_seen(sight: Sight, shed: Shed, found: np.ndarray, count: int) -> set[str]:
    """All over the canvas both ways of picking give what the eye sees, or nothing where it sees nothing."""
    calm = steady(found, 1)
    places = places_in(calm & (found >= 0), count) + places_in(calm & (found == EMPTY), count // 4)
    expected = [None if found[y, x] == EMPTY else shed.pieces.keys[found[y, x]] for x, y in places]
    wrong = [
        (place, want, got)
        for place, want, got in zip(places, expected, sight.keys_at(places), strict=True)
        if got != (want, want)
    ]
    assert wrong == []
    return {key for key in expected if key is not None}


@pytest.mark.parametrize("name", ["barn", "seed-store"])
def test_preset_opens_quietly_and_shows_all_its_pieces(desk: Desk, name: str) -> None:
    model = cast.members_of(name)
    with desk.opened(page_of(name), name) as sight:
        assert sight.text("#piece-count") == f"{len(model.pieces)} pieces"
        assert sight.text("#part-count") == f"{len(model.parts)} marks"
        assert sight.text("h1") == model.project.name == sight.page.title()
        assert sight.ask("shedView.keys") == list(model.pieces.keys)
        assert sight.ask("shedView.drawnCount") == len(model.pieces)
        assert sight.ask("document.getElementById('loading').hidden")
        sight.shot(f"{name}-opened")
        # It opens with the whole model in the midst of the picture, the lines of the grid around it.
        opened = np.argwhere(seen(eye_of(sight), model) >= 0) / np.array(sight.box()[:1:-1])
        assert np.abs((opened.min(axis=0) + opened.max(axis=0)) / 2 - 0.5).max() < 0.15
        assert (opened.max(axis=0) - opened.min(axis=0)).max() > 0.5
        eye = from_iso(sight, "perspective")
        found = seen(eye, model)
        assert_draws(sight, model, f"{name}-isometric")
        _click_and_read(sight, model, spots(found[:, :_FREE], 5))
        assert sight.asked == [sight.url]
        assert sight.said == []


def _click_and_read(sight: Sight, model: Shed, chosen: dict[int, tuple[int, int]]) -> None:
    """Click on pieces where they are seen, and read of each what the model holds."""
    assert len(chosen) >= 5
    for piece, place in chosen.items():
        sight.click(place)
        assert sight.selection == [model.pieces.keys[piece]], place
        assert_card_tells_of(sight, model, piece)


@pytest.mark.parametrize("projection", ["perspective", "parallel"])
def test_click_picks_the_piece_that_is_seen(view: Sight, shed: Shed, projection: str) -> None:
    eye = from_iso(view, projection)
    assert eye.parallel == (projection == "parallel")
    found = seen(eye, shed)
    chosen = spots(found[:, :_FREE], 6)
    assert len({shed.parts[shed.pieces.part[piece]].role for piece in chosen}) >= 4
    _click_and_read(view, shed, chosen)
    picked = assert_picks_as_seen(view, shed, found, 150)
    assert len(picked) >= 12
    # Where nothing is, a click selects nothing.
    view.ask("(key) => shedView.select([key])", shed.pieces.keys[0])
    nothing = np.argwhere(steady(found == EMPTY, 6) & (found == EMPTY))
    view.click((int(nothing[0][1]), int(nothing[0][0])))
    assert view.selection == []


def test_silhouette_is_that_of_the_model(view: Sight, shed: Shed) -> None:
    for projection in ("perspective", "parallel"):
        found = seen(from_iso(view, projection), shed)
        picture = drawn(view, view.sheet())
        for theirs, ours in zip(np.nonzero(picture), np.nonzero(found != EMPTY), strict=True):
            assert abs(int(theirs.min()) - int(ours.min())) <= 2
            assert abs(int(theirs.max()) - int(ours.max())) <= 2
        assert_draws(view, shed)


def test_pictures_after_the_first_are_whole(desk: Desk) -> None:
    model = cast.members_of("flat")
    with desk.opened(page_of("flat"), "moving", reduced_motion="no-preference") as sight:
        sight.page.uncheck("#grid-on")
        assert_draws(sight, model)
        x, y, width, height = sight.box()
        sight.page.mouse.move(x + width / 2, y + height / 2)
        sight.page.mouse.down()
        for step in range(1, 4):
            sight.page.mouse.move(x + width / 2 + 25 * step, y + height / 2)
            assert_draws(sight, model, f"moving-{step}")
        sight.page.mouse.up()
        frames = sight.ask("shedView.frames")
        sight.page.wait_for_timeout(900)
        for name in ("right", "isometric"):
            sight.page.click(f"#view-{name}")
            assert_draws(sight, model, f"moving-{name}")
        assert sight.ask("shedView.frames") > frames + 1
        sight.page.set_viewport_size({"width": 840, "height": 560})
        sight.page.wait_for_timeout(300)
        assert_draws(sight, model, "moving-resized")
        assert sight.ask("shedView.filledShare()") > 0.02
        assert sight.said == []


def assert_draws(sight: Sight, model: Shed, name: str = "") -> None:
    """The picture shows steel where the eye sees steel, in the hue of its role, and paper where it sees none."""
    picture = sight.sheet(name)
    found = seen(eye_of(sight), model)
    # The rim of each piece is blended with the paper: only what is steady on both sides can be compared.
    calm = steady(found, 1) & (found != UNSURE)
    assert drawn(sight, picture)[calm & (found >= 0)].mean() > 0.99
    assert drawn(sight, picture)[calm & (found == EMPTY)].mean() < 0.01
    off = []
    for role in {part.role for part in model.parts}:
        wanted, full = hue_of(PALETTE[role])
        pieces = [index for index, part in enumerate(model.pieces.part) if model.parts[part].role is role]
        pixels = picture[calm & np.isin(found, pieces)]
        # Shades and edges change how light a colour is, the haze how full: the hue stays.
        if full > 0.2 and len(pixels) > 30:
            off += [abs((hue_of(pixel)[0] - wanted + 0.5) % 1 - 0.5) > 0.08 for pixel in pixels[::5]]
    assert len(off) > 50
    assert np.mean(off) < 0.02


def test_picture_comes_back_after_the_card_was_taken_away(desk: Desk) -> None:
    with desk.opened(page_text(BLOCKS), "lost") as sight:
        before = drawn(sight, sight.sheet()).mean()
        sight.ask(
            "window.card = canvas.getContext('webgl2').getExtension('WEBGL_lose_context'); card.loseContext()"
        )
        sight.page.wait_for_selector("#lost", state="visible")
        sight.ask("card.restoreContext()")
        sight.page.wait_for_selector("#lost", state="hidden")
        assert drawn(sight, sight.sheet()).mean() == pytest.approx(before, abs=0.01)
        assert not [text for kind, text in sight.said if kind == "error"]


def test_distant_model_is_not_black(view: Sight) -> None:
    from_iso(view, "perspective")
    x, y, width, height = view.box()
    view.page.mouse.move(x + width / 2, y + height / 2)
    for _ in range(7):
        view.page.mouse.wheel(0, 300)
    picture = view.sheet("distant")
    model = picture[drawn(view, picture)]
    assert 0.0005 < len(model) / picture[..., 0].size < 0.02
    # Dark ink is below 50; the steel and its haze stay far above it.
    assert np.median(model.max(axis=1)) > 110


def test_hidden_pieces_are_never_picked(view: Sight, shed: Shed) -> None:
    eye = from_iso(view, "perspective")
    before = seen(eye, shed)
    view.page.click("#tree-modes [data-mode=role]")
    words = ("side rail", "purlin")
    for word in words:
        row = view.page.locator("#tree .row").filter(has=view.page.get_by_text(word, exact=True))
        row.locator(".tick").click()
    hidden = {i for i, part in enumerate(shed.pieces.part) if shed.parts[part].role.word in words}
    left = set(range(len(shed.pieces))) - hidden
    assert view.ask("shedView.visibleCount") == len(left)
    assert view.text("#shown-count") == f"{len(left)} shown"
    found = seen(eye, shed, left)
    assert_picks_as_seen(view, shed, found, 150)
    where = np.isin(before, sorted(hidden)) & steady(before, 1)
    names = {shed.pieces.keys[piece] for piece in hidden}
    places = places_in(where, 120)
    assert len(places) > 50
    assert not {key for pair in view.keys_at(places) for key in pair} & names
    for place in places[:3]:
        view.click(place)
        assert not set(view.selection) & names
        view.ask("shedView.select([])")
    view.page.click("#show-all")
    assert view.ask("shedView.visibleCount") == len(shed.pieces)
    assert view.text("#shown-count") == ""


#: Axis, where (the label of a line of the grid, or mm), the side that stays, depth of the slice in mm or 0 for all.
_CUTS = [
    ("y", "2", -1, 0),
    ("y", "3", 1, 2500),
    ("x", "B", -1, 0),
    ("y", "3900 mm", 1, 0),
    ("z", "4700 mm", -1, 0),
]


@pytest.mark.parametrize(("axis", "where", "side", "depth"), _CUTS)
def test_what_is_cut_away_is_never_picked(
    view: Sight, shed: Shed, axis: str, where: str, side: int, depth: int
) -> None:
    eye = from_iso(view, "perspective")
    before = seen(eye, shed)
    at = set_cut(view, shed, axis, where, side, depth)
    normal = side * np.eye(3)["xyz".index(axis)]
    planes = [(*normal, -side * at)]
    if depth:
        planes.append((*-normal, side * at + depth))
    found = seen(eye, shed, planes=planes)
    assert len(assert_picks_as_seen(view, shed, found, 120)) >= 5
    # Where something was cut away, what stood behind it is picked, or nothing.
    gone = (before >= 0) & (found != before) & steady(before, 1) & steady(found, 1) & (found != UNSURE)
    places = places_in(gone, 100)
    expected = [None if found[y, x] == EMPTY else shed.pieces.keys[found[y, x]] for x, y in places]
    assert view.keys_at(places) == [(key, key) for key in expected]
    left, top, _, _ = view.box()
    met = view.ask(
        "(places) => places.map(([x, y]) => shedView.meetAt(x, y).place)",
        [[left + x + 0.5, top + y + 0.5] for x, y in places_in(steady(found, 1) & (found >= 0), 50)],
    )
    for plane in planes:
        assert (np.array(met) @ plane[:3] + plane[3] >= -0.1).all()
    for key in shed.pieces.keys[::7]:
        assert view.ask("(key) => shedView.isCutAway(key)", key) == (not is_left(shed, key, planes))
    view.shot(f"cut-{axis}-{where.removesuffix(' mm')}-{depth or 'all'}")
    view.page.click("#cut-clear")
    assert view.ask("shedView.cuts.every(({ on }) => !on)")
    assert view.ask("shedView.drawnCount") == len(shed.pieces)


def set_cut(view: Sight, shed: Shed, axis: str, where: str, side: int, depth: int) -> float:
    """Set a cut by the controls; give its place, mm."""
    view.page.click("#cut")
    if where.endswith(" mm"):
        at = float(where.removesuffix(" mm"))
        view.page.fill(f"#cut-{axis}-at", str(int(at)))
        view.page.press(f"#cut-{axis}-at", "Enter")
    else:
        labels, values = (shed.grid.letters, shed.grid.x) if axis == "x" else (shed.grid.numbers, shed.grid.y)
        at = values[labels.index(where)]
        view.page.select_option(f"#cut-{axis}-line", label=f"line {where}")
    view.page.select_option(f"#cut-{axis}-side", str(side))
    if depth:
        view.page.fill(f"#cut-{axis}-depth", str(depth))
        view.page.press(f"#cut-{axis}-depth", "Enter")
    view.settle()
    return at


def is_left(shed: Shed, key: str, planes: list[tuple[float, ...]]) -> bool:
    """Whether planes leave anything of the box around a piece."""
    piece = shed.pieces.keys.index(key)
    bar = shed.parts[shed.pieces.part[piece]].bar
    low, high = bar.section.outline.rim.min(axis=0), bar.section.outline.rim.max(axis=0)
    pick = np.indices((2, 2, 2)).reshape(3, 8).T
    ends = np.array([[0.0, *low], [bar.length, *high]])
    local = np.stack([ends[pick[:, axis], axis] for axis in range(3)], axis=1)
    place = shed.pieces.placement[piece]
    corners = local @ place[:, :3].T + place[:, 3]
    return all((corners @ plane[:3] + plane[3]).max() > 0 for plane in planes)


def test_cut_faces_are_filled(desk: Desk) -> None:
    with desk.opened(page_text(BLOCKS), "cut-faces") as sight:
        for theme in ("light", "dark"):
            sight.page.select_option("#theme", theme)
            sight.page.select_option("#projection", "parallel")
            sight.page.uncheck("#grid-on")
            sight.page.click("#view-plan")
            sight.page.click("#tab-cut")
            sight.page.fill("#cut-z-at", "1000")
            sight.page.press("#cut-z-at", "Enter")
            picture = sight.sheet(f"cut-faces-{theme}")
            eye, cut = eye_of(sight), sight.colour("--cut")
            # In a solid bar, in the wall of a tube, in a cube; in the hollow of the tube, and beside them all.
            filled = [
                (0, 0),
                (80, 130),
                (-80, -130),
                (900, 180),
                (900, -180),
                (1030, 30),
                (770, 0),
                (2300, 1800),
            ]
            empty = [(900, 0), (980, 100), (450, 0), (1500, 400)]
            for places, wanted in ((filled, True), (empty, False)):
                pixels = eye.picture(np.array([(x, y, 1000.0) for x, y in places]))[:, :2].astype(int)
                for place, (x, y) in zip(places, pixels, strict=True):
                    near = np.abs(picture[y, x].astype(int) - cut).max() <= _NOISE
                    assert near == wanted, (theme, place, picture[y, x])
        x, y = eye.picture(np.array([0.0, 0.0, 1000.0]))[:2]
        left, top, _, _ = sight.box()
        met = sight.ask("([x, y]) => shedView.meetAt(x, y)", [left + x, top + y])
        assert (met["key"], met["cut"]) == ("solid", True)
        assert met["place"][2] == pytest.approx(1000.0, abs=0.05)
