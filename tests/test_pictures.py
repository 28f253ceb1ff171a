"""Pictures: valid PNG, hidden surfaces, edges, framing and the named views."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest
from numpy.typing import NDArray
from picture_scenes import HALL, Pixels, block, decoded, scene

from shedbim.geometry.placements import placement
from shedbim.model.bars import Bar
from shedbim.model.roles import Role
from shedbim.model.shed import Part, Shed
from shedbim.outputs import LABEL_NAMES, PICTURE_ENDINGS, VIEW_NAMES
from shedbim.sections.profiles import Flat, LippedZ, Pipe, Round
from shedbim.sections.section import Profile, Section
from shedbim.writers.palette import PALETTE
from shedbim.writers.pictures.composition import LABELS, compose
from shedbim.writers.pictures.meshes import shape_mesh
from shedbim.writers.pictures.picture import png_picture
from shedbim.writers.pictures.png import png
from shedbim.writers.pictures.projection import View, box_corners, fitted
from shedbim.writers.pictures.raster import Canvas
from shedbim.writers.pictures.shot import part_mesh
from shedbim.writers.pictures.tints import HIGHLIGHT, PALE
from shedbim.writers.pictures.views import FORMATS, VIEWS, ViewError, render_view, selected

FRONT = View((0.0, 1.0, 0.0))


def picture(shed: Shed, view: View, **options: Any) -> bytes:
    """A picture with nothing written on it."""
    return png_picture(compose(shed, view, **options))


def hue_of(pixels: Pixels, role: Role) -> NDArray[np.bool_]:
    """Where a picture shows a role's colour, lit one way or another and unmixed with others."""
    return shade_of(pixels, PALETTE[role])


def shade_of(pixels: Pixels, mixed: tuple[float, ...]) -> NDArray[np.bool_]:
    """Where a picture shows a colour, lit one way or another and unmixed with others."""
    colour = np.array(mixed, float)
    shade = pixels.astype(float) @ colour / (colour @ colour)
    far = np.abs(pixels - shade[..., None] * colour).max(axis=-1)
    shown: NDArray[np.bool_] = (far <= 1.0) & (shade > 0.5) & (shade <= 1.01)
    return shown


def test_png_holds_the_pixels_it_was_given() -> None:
    pixels = np.random.default_rng(3).integers(0, 256, (5, 7, 3), np.uint8)
    assert np.array_equal(decoded(png(pixels)), pixels)


def test_the_nearer_of_two_blocks_hides_the_farther_whatever_their_order() -> None:
    near = block("near", Role.COLUMN, 100, 0, 100)
    far = block("far", Role.PURLIN, 0, 700, 300)
    pictures = [
        decoded(picture(scene(*order), FRONT, width=300, height=200)) for order in ((near, far), (far, near))
    ]
    assert np.array_equal(pictures[0], pictures[1])
    scale = 200 * 0.92 / 300  # pixels per mm: the height is what binds
    left, bottom = 150 - 150 * scale, 100 + 150 * scale
    near_at = round(bottom - 50 * scale), round(left + 150 * scale)
    far_at = round(bottom - 200 * scale), round(left + 150 * scale)
    assert hue_of(pictures[0], Role.COLUMN)[near_at]
    assert hue_of(pictures[0], Role.PURLIN)[far_at]
    # Areas: the near block shows its whole face, the far one what is left; edges take a pixel each.
    assert hue_of(pictures[0], Role.COLUMN).sum() == pytest.approx((100 * scale) ** 2, rel=0.08)
    assert hue_of(pictures[0], Role.PURLIN).sum() == pytest.approx((300**2 - 100**2) * scale**2, rel=0.05)


def test_what_lies_wholly_behind_leaves_no_trace_of_face_or_edge() -> None:
    front, hidden = block("front", Role.COLUMN, 0, 0, 300), block("hidden", Role.PURLIN, 80, 400, 120)
    alone = picture(scene(front), FRONT, width=300, height=200)
    assert picture(scene(front, hidden), FRONT, width=300, height=200) == alone
    turned = picture(scene(front, hidden), View((0.0, -1.0, 0.0)), width=300, height=200)
    assert hue_of(decoded(turned), Role.PURLIN).any()


def test_edges_are_dark_lines_round_a_face_and_nowhere_on_it() -> None:
    shed = scene(block("a", Role.PURLIN, 0, 0, 300))
    row = decoded(picture(shed, FRONT, width=300, height=200))[100].astype(int).sum(axis=1)
    half = 150 * 200 * 0.92 / 300
    left, right = round(150 - half), round(150 + half)
    # The face is even. Half a pixel of edge darkens the last pixel on the face at the left, and at the
    # right the first beyond it, which without the edge would be half face and half white or lighter.
    assert np.ptp(row[left + 1 : right]) == 0
    assert row[left] < 0.8 * row[150]
    assert row[right] < 0.8 * (row[150] + 765) / 2
    assert (row[:left] == 765).all()
    assert (row[right + 1 :] == 765).all()


def test_as_many_pieces_are_seen_as_are_drawn_and_only_the_chosen() -> None:
    blocks = [block(f"b{i}", Role.COLUMN, x, 0, 100) for i, x in enumerate((0.0, 250.0, 620.0, 1000.0))]
    shed = scene(*blocks)

    def seen(pieces: list[int] | None) -> int:
        chosen = None if pieces is None else np.array(pieces)
        pixels = decoded(picture(shed, FRONT, pieces=chosen, width=400, height=100))
        columns = (pixels < 255).any(axis=(0, 2)).astype(int)
        return int((np.diff(columns, prepend=0) == 1).sum())

    assert seen(None) == 4
    assert seen([0, 2, 3]) == 3
    assert seen([]) == 0


@pytest.mark.parametrize("profile", [Round(16.0), Pipe(20.0, 2.0), LippedZ(200.0, 75.0, 20.0, 2.0, 4.0)])
def test_a_bar_thinner_than_a_pixel_is_drawn_without_gaps(profile: Profile) -> None:
    rod = ("rod", Role.ROOF_BRACE, profile, (0.0, 0.0, 0.0), (30000.0, 0.0, 11000.0), (0.0, 1.0, 0.0))
    pixels = decoded(picture(scene(rod), FRONT, width=400, height=300))
    # A quarter of a pixel or more in each column has the colour of a roof brace: as much green is missing.
    green = (255.0 - pixels[:, :, 1]).sum(axis=0)
    drawn = np.flatnonzero(green)
    assert drawn[-1] - drawn[0] + 1 == len(drawn) > 360
    assert green[drawn[1:-1]].min() > 0.25 * (255 - PALETTE[Role.ROOF_BRACE][1])


@pytest.mark.parametrize(
    "direction", [(0.8, 1.0, -0.62), (0.0, 1.0, 0.0), (1.0, 0.0, 0.0), (-0.3, -2.0, 0.9)]
)
def test_a_fitted_view_reaches_its_margins_and_not_beyond(direction: tuple[float, float, float]) -> None:
    corners = box_corners((-300.0, 20.0, 5.0), (30000.0, 61000.0, 9500.0))
    projected = fitted(View(direction, margin=0.05), corners, 1600, 1000).points(corners)
    low, high = projected[:, :2].min(axis=0), projected[:, :2].max(axis=0)
    assert (low >= (80 - 1e-6, 50 - 1e-6)).all()
    assert (high <= (1520 + 1e-6, 950 + 1e-6)).all()
    assert min(abs(low[0] - 80), abs(low[1] - 50)) < 1e-6
    assert low + high == pytest.approx((1600, 1000))


def test_front_view_has_x_to_the_right_and_z_up_and_plan_has_y_up() -> None:
    corners = np.array([[0.0, 0, 0], [1000, 0, 0], [0, 1000, 0], [0, 0, 1000]])
    front = fitted(selected(scene(), "front").view, corners, 100, 100).points(corners)
    assert front[1, 0] > front[0, 0] + 10
    assert front[3, 1] < front[0, 1] - 10
    assert front[2, 2] == front[0, 2] + 1000
    plan = fitted(selected(scene(), "plan").view, corners, 100, 100).points(corners)
    assert plan[1, 0] > plan[0, 0] + 10
    assert plan[2, 1] < plan[0, 1] - 10
    assert plan[3, 2] == plan[0, 2] - 1000


def test_placed_points_are_those_of_the_placement_projected() -> None:
    motion = placement((100, 200, 300), (1, 2, 3), (0, 0, 1))
    local = np.array([[10.0, 20, 30], [-4, 5, 6]])
    projection = fitted(View((0.8, 1.0, -0.6)), local * 50, 640, 480)
    expected = projection.points(local @ motion[:, :3].T + motion[:, 3])
    assert projection.placed(motion[None], local)[0] == pytest.approx(expected)


def test_two_triangles_fill_a_square_once_and_at_the_right_depth() -> None:
    square = np.array([[10, 20, 5], [40, 20, 5], [40, 60, 9], [10, 60, 9]], float)
    canvas = Canvas(50, 80, 0.0, 20.0)
    canvas.triangles(square[[[0, 1, 2], [0, 2, 3]]], np.zeros(2, np.uint32))
    # A level sheet at depth 7 cuts the sloping square where it has fallen to 7: in its middle row.
    sheet = np.array([[0, 0, 7], [50, 0, 7], [50, 80, 7], [0, 80, 7]], float)
    canvas.triangles(sheet[[[0, 1, 2], [0, 2, 3]]], np.ones(2, np.uint32))
    pixels = canvas.pixels(np.array([0x112233, 0x445566], np.uint32), 0xFFFFFF, 0, 1)
    expected = np.full((80, 50, 3), (0x44, 0x55, 0x66))
    expected[20:40, 10:40] = (0x11, 0x22, 0x33)
    assert np.array_equal(pixels, expected)


def test_triangles_partly_outside_are_cut_at_the_border() -> None:
    canvas = Canvas(30, 20, 0.0, 1.0)
    canvas.triangles(
        np.array([[[-500, -500, 0.5], [900, -500, 0.5], [-500, 900, 0.5]]], float), np.zeros(1, np.uint32)
    )
    canvas.lines(np.array([[[-1e6, 10.2, 0.1], [1e6, 10.2, 0.1]]]), np.ones(1, np.uint32))
    pixels = canvas.pixels(np.array([0, 0xFF0000], np.uint32), 0xFFFFFF, 0, 1)
    assert (pixels[10] == (255, 0, 0)).all()
    assert (np.delete(pixels, 10, axis=0) == 0).all()


def test_mesh_is_closed_and_faces_outwards_and_a_block_has_its_twelve_edges() -> None:
    mesh = shape_mesh(Bar(Section("b", "b", Flat(80.0, 30.0), "test"), 500.0), 1.0)
    a, b, c = np.moveaxis(mesh.points[mesh.triangles], 1, 0)
    assert np.einsum("ij,ij->", a, np.cross(b, c)) / 6 == pytest.approx(500 * 80 * 30)
    assert len(mesh.edges) == 12
    lengths = np.linalg.norm(mesh.points[mesh.edges[:, 0]] - mesh.points[mesh.edges[:, 1]], axis=1)
    assert sorted(lengths.round(6)) == [30.0] * 4 + [80.0] * 4 + [500.0] * 4


@pytest.mark.parametrize("profile", [Pipe(114.3, 5.0), Pipe(20.0, 2.0), Round(12.0)])
def test_a_round_bar_has_edges_at_its_ends_only(profile: Profile) -> None:
    mesh = part_mesh(Part("T1", Role.TIE, Bar(Section("t", "t", profile, "test"), 2000.0), "S355", ""))
    along = mesh.points[mesh.edges[:, 0], 0] - mesh.points[mesh.edges[:, 1], 0]
    assert len(mesh.edges) > 20
    assert not along.any()


def test_the_palette_colours_each_role_and_no_two_alike() -> None:
    assert set(PALETTE) == set(Role)
    colours = np.array([PALETTE[role] for role in Role], float)
    apart = np.linalg.norm(colours[:, None] - colours[None], axis=2) + 1e9 * np.eye(len(colours))
    assert apart.min() > 20


@pytest.mark.parametrize(
    ("name", "argument", "pieces"),
    [
        ("isometric", None, [0, 1, 2, 3, 4]),
        ("side", "2", [1, 4]),
        ("plan", "*/rail/*", [3, 4]),
        ("frame", "2", [1]),
        ("bay", "1", [0, 1, 3]),
        ("bay", "2", [1, 2, 4]),
        ("piece", "1/column/A", [0, 3]),
        ("place", "0,5000,900", [1, 3, 4]),
        ("place", "0,5000,5000,50", [1]),
    ],
)
def test_views_choose_their_pieces(name: str, argument: str | None, pieces: list[int]) -> None:
    assert selected(HALL, name, argument).pieces.tolist() == pieces


@pytest.mark.parametrize("name", VIEWS)
def test_every_view_gives_the_same_whole_picture_twice(name: str) -> None:
    argument = {"frame": "1", "bay": "2", "piece": "1/*", "place": "0,0,900"}.get(name)
    data = render_view(HALL, name, argument, width=160, height=100, labels="none", caption=False)
    pixels = decoded(data)
    assert pixels.shape == (100, 160, 3)
    assert 40 < (pixels < 250).any(axis=2).sum() < 0.9 * 16000
    assert render_view(HALL, name, argument, width=160, height=100, labels="none", caption=False) == data


@pytest.mark.parametrize(
    ("name", "argument", "told"),
    [
        ("top", None, "isometric, back"),
        ("frame", "7", "lines: 1, 2, 3"),
        ("frame", None, "lines: 1, 2, 3"),
        ("bay", "3", "begin at 1, 2"),
        ("piece", "2/colum/A", "nearest: 2/column/A"),
        ("piece", None, "needs a key"),
        ("place", "1,2", "X,Y,Z,REACH"),
        ("place", "1,2,nan", "X,Y,Z,REACH"),
        ("place", "0,0,0,-5", "X,Y,Z,REACH"),
    ],
)
def test_what_does_not_exist_is_answered_with_what_does(name: str, argument: str | None, told: str) -> None:
    with pytest.raises(ViewError, match=told):
        render_view(HALL, name, argument)


def test_lines_are_cut_where_something_lies_before_them() -> None:
    canvas = Canvas(200, 40, 0.0, 10.0)
    plate = np.array([[60, 0, 3], [130, 0, 3], [130, 40, 3], [60, 40, 3]], float)
    canvas.triangles(plate[[[0, 1, 2], [0, 2, 3]]], np.zeros(2, np.uint32))
    lines = np.array(
        [[[10, 8, 5], [190, 22, 5]], [[10, 30, 2], [190, 30, 2]], [[70, 5, 5], [120, 9, 5]]], float
    )
    index, shares = canvas.uncovered(lines, 0.5)
    assert index.tolist() == [0, 0, 1]
    # A pixel of the 180 that a line crosses is how sharply it can be cut.
    expected = [[0.0, 50 / 180], [120 / 180, 1.0], [0.0, 1.0]]
    assert shares == pytest.approx(np.array(expected), abs=1 / 180)
    canvas.lines(lines, np.array([1, 2, 3], np.uint32))
    index, shares = canvas.of_number(lines, np.array([7, 8, 9]), np.array([6, 7, 8, 9]))
    assert index.tolist() == [0, 0, 1]
    assert shares == pytest.approx(np.array(expected), abs=1 / 180)


def test_highlighted_pieces_are_red_and_all_others_pale() -> None:
    plain = decoded(render_view(HALL, "isometric", labels="none", caption=False, width=800, height=500))
    loud = decoded(
        render_view(
            HALL,
            "isometric",
            labels="none",
            caption=False,
            width=800,
            height=500,
            highlight=["2/col*", "2-3/*"],
        )
    )

    def shows(pixels: Pixels, colour: tuple[float, ...]) -> bool:
        return bool(shade_of(pixels, colour).sum() > 20)

    for role in (Role.COLUMN, Role.SIDE_RAIL):
        pale = tuple(255 - (255 - channel) * PALE for channel in PALETTE[role])
        assert hue_of(plain, role).any()
        assert not hue_of(loud, role).any()
        assert shows(loud, pale)
    assert shows(loud, HIGHLIGHT)
    assert not shows(plain, HIGHLIGHT)
    with pytest.raises(ViewError, match="nearest: 2/column/A"):
        render_view(HALL, "isometric", highlight=["2/colum/A"])


def test_a_whole_key_names_one_piece_and_its_beginning_all_that_begin_so() -> None:
    shed = scene(*(block(f"1/post/{n}", Role.POST, 400.0 * n, 0, 100) for n in range(1, 13)))
    assert selected(shed, "front", "1/post/1").pieces.tolist() == [0]
    assert selected(shed, "front", "1/post/1*").pieces.tolist() == [0, 9, 10, 11]
    assert selected(shed, "front", "1/pos").pieces.tolist() == list(range(12))
    named = selected(shed, "piece", "1/post/3")
    assert named.named is not None
    assert named.named.tolist() == [2]


def test_help_lists_every_view_label_and_form() -> None:
    assert tuple(VIEWS) == VIEW_NAMES
    assert LABELS == LABEL_NAMES
    assert tuple(FORMATS) == PICTURE_ENDINGS
    assert {row.labels for row in VIEWS.values()} <= set(LABELS)


@pytest.mark.parametrize(
    ("option", "told"),
    [({"labels": "names"}, "none, grid, marks, keys"), ({"form": "jpg"}, "formats: png, svg")],
)
def test_options_that_do_not_exist_are_answered_with_those_that_do(option: dict[str, Any], told: str) -> None:
    with pytest.raises(ViewError, match=told):
        render_view(HALL, "front", **option)
