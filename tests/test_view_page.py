"""The view as a file: what its data say, what its policy allows, and what a user's text can do in it."""

from __future__ import annotations

import re
import subprocess
import sys
from base64 import b64encode
from dataclasses import replace
from functools import cache
from hashlib import sha256
from importlib.resources import files

import cast
import numpy as np
import pytest
import view_data
from hypothesis import given
from hypothesis import strategies as st

from shedbim.errors import ModelError
from shedbim.expand import expand
from shedbim.geometry.placements import apply
from shedbim.model.bars import Bar
from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.plates import Plate
from shedbim.model.roles import Sort
from shedbim.model.shapes import Shape
from shedbim.writers import view
from shedbim.writers.coarse import coarse
from shedbim.writers.imprint import CAUTIONS, Imprint
from shedbim.writers.palette import PALETTE
from shedbim.writers.schedules.tables import members
from shedbim.writers.view import ShownChange, ShownFinding
from shedbim.writers.view.columns import packed
from shedbim.writers.view.page import SCRIPTS, page

NAMES = (*cast.TINY, "seed-store")
HOSTILE = "</script><script>alert('\u2028')</script><!-- &amp; \"'<b>{{data}}"


@cache
def page_of(name: str) -> str:
    return page(cast.shed_of(name), Imprint())


@cache
def data_of(name: str):
    return view_data.unpacked(view_data.data_text(page_of(name)))


@pytest.fixture(params=NAMES)
def name(request) -> str:
    return request.param


# --- the data are the model ---------------------------------------------------------------------------


def test_every_piece_travels_with_key_part_and_assembly(name):
    shed, (texts, columns) = cast.shed_of(name), data_of(name)
    assert texts["keys"] == list(shed.pieces.keys)
    assert columns["piece part"][:, 0].tolist() == shed.pieces.part.tolist()
    assert columns["piece assembly"][:, 0].tolist() == shed.pieces.assembly.tolist()


def test_both_ends_of_every_piece_lie_where_the_model_has_them(name):
    shed, (_, columns) = cast.shed_of(name), data_of(name)
    turns = columns["turns"].reshape(-1, 3, 3)[columns["piece turn"][:, 0]] / 1e9
    placed = np.concatenate([turns, columns["piece place"][:, :, None] / 100], axis=2)
    lengths = columns["part sizes"][shed.pieces.part, 0] / 1000
    for index, part in enumerate(shed.parts):
        here = shed.pieces.part == index
        length = length_of(part.shape)
        ends = np.array([[0.0, 0, 0], [length, 0, 0], [length, 100, 100]])
        wanted = apply(shed.pieces.placement[here], ends)
        shown = apply(
            placed[here], np.array([[0, 0, 0], [lengths[here][0], 0, 0], [lengths[here][0], 100, 100]])
        )
        # Each place is rounded to hundredths of a millimetre.
        assert np.abs(shown - wanted).max() < 0.0101


def length_of(shape: Shape) -> float:
    """The length a shape is listed with: a plate's is its longer side, a bolt's the nominal one."""
    if isinstance(shape, BoltGroup):
        return shape.fastener.length
    return shape.size[0] if isinstance(shape, Plate) else shape.length


def test_members_travel_as_the_schedule_has_them(name):
    shed, (texts, columns) = cast.shed_of(name), data_of(name)
    table = members(shed)
    ours = [index for index, part in enumerate(shed.parts) if part.role.sort is Sort.MEMBER]
    named = ["mark", "role", "section", "grade", "finish", "assemblies"]
    wanted = list(zip(*(table.column(column) for column in named), strict=True))
    shown = [(mark, texts["roles"][role][0], *rest) for mark, role, *rest in texts["parts"]]
    assert [shown[index] for index in ours] == wanted
    sizes = columns["part sizes"][ours]
    assert np.abs(sizes[:, 0] / 1000 - table.column("length")).max() <= 0.0005001
    assert np.abs(np.array(texts["masses"])[ours] - table.column("mass each")).max() <= 0.000001
    assert np.abs(sizes[:, 1] / 1e4 - table.column("surface each")).max() <= 0.00005001


def test_every_part_travels_with_mass_and_surface_of_its_true_shape(name):
    shed, (texts, columns) = cast.shed_of(name), data_of(name)
    shown = [(mark, texts["roles"][role][0], grade) for mark, role, _, grade, *_ in texts["parts"]]
    assert shown == [(part.mark, part.role.word, part.grade) for part in shed.parts]
    assert np.abs(np.subtract(texts["masses"], [part.shape.mass for part in shed.parts])).max() <= 0.000001
    surfaces = [part.shape.surface / 1e6 for part in shed.parts]
    assert np.abs(columns["part sizes"][:, 1] / 1e4 - surfaces).max() <= 0.00005001


def test_roles_have_the_colours_of_the_palette(name):
    texts, _ = data_of(name)
    assert {word: (tuple(colour), sort) for word, colour, sort in texts["roles"]} == {
        role.word: (colour, role.sort.value)
        for role, colour in PALETTE.items()
        if role in {part.role for part in cast.shed_of(name).parts}
    }


def test_joints_travel_with_kind_pieces_and_ends(name):
    shed, (texts, columns) = cast.shed_of(name), data_of(name)
    assert texts["joints"] == [[run.kind.word, run.kind.fastening] for run in shed.joints]
    for number, run in enumerate(shed.joints):
        assert columns[f"joint {number} pieces"].tolist() == run.pieces.tolist()
        assert columns[f"joint {number} at"].tolist() == run.at.tolist()
        if run.fittings.size:
            assert columns[f"joint {number} fittings"].tolist() == run.fittings.tolist()
        else:
            assert f"joint {number} fittings" not in columns


def test_assemblies_and_grid_travel(name):
    shed, (texts, columns) = cast.shed_of(name), data_of(name)
    kinds = [shed.assembly_types[kind] for kind in shed.assemblies.type]
    assert texts["assemblies"] == [
        [key, kind.mark, kind.kind, kind.made] for key, kind in zip(shed.assemblies.keys, kinds, strict=True)
    ]
    assert columns["assembly parent"][:, 0].tolist() == shed.assemblies.parent.tolist()
    grid = texts["grid"]
    assert (grid["letters"], grid["numbers"]) == (list(shed.grid.letters), list(shed.grid.numbers))
    assert (grid["x"], grid["y"]) == (list(shed.grid.x), list(shed.grid.y))


def test_meshes_are_closed_and_hold_the_steel_of_their_parts(name):
    shed, (_, columns) = cast.shed_of(name), data_of(name)
    used = np.zeros(2, int)
    stacks = [columns["mesh points"] / 100, columns["mesh triangles"]]
    for part, counts in zip(shed.parts, columns["mesh counts"], strict=True):
        points, triangles = (
            stack[first : first + count] for stack, first, count in zip(stacks, used, counts[:2], strict=True)
        )
        used += counts[:2]
        is_round = isinstance(part.shape, Bar) and part.shape.section.designation.startswith(("RD", "CHS"))
        assert counts[2] == (2 if isinstance(part.shape, BoltGroup) else is_round)
        halves = np.vstack([triangles[:, [0, 1]], triangles[:, [1, 2]], triangles[:, [2, 0]]])
        there = {tuple(half) for half in halves.tolist()}
        assert len(there) == len(halves)
        assert there == {(b, a) for a, b in there}  # each edge once in each direction: closed
        a, b, c = (points[triangles[:, corner]] for corner in range(3))
        volume = np.einsum("ij,ij->i", a, np.cross(b, c)).sum() / 6
        # Chords cut the arcs off: thin pipes of ten chords lose most, a fifteenth. Bolts have their bores filled.
        solid_bolts = coarse(part.shape)
        assert volume == pytest.approx(solid_bolts.volume, rel=0.07)
        reach = np.subtract(*part.shape.box[::-1])
        assert np.abs(np.ptp(points, axis=0) - reach).max() < 0.0101  # points are rounded to hundredths
    assert used.tolist() == [len(stack) for stack in stacks]


def test_findings_and_changes_travel():
    finding = ShownFinding("over-length", "warning", HOSTILE, (1.5, -2.0, 3.25), (4, 7))
    change = ShownChange("moved", (1, 2))
    text = page(cast.shed_of("flat"), Imprint(), findings=[finding], changes=[change])
    texts, _ = view_data.unpacked(view_data.data_text(text))
    assert texts["findings"] == [["over-length", "warning", HOSTILE, [1.5, -2.0, 3.25], [4, 7]]]
    assert texts["changes"] == [["moved", [1, 2]]]
    assert data_of("flat")[0]["findings"] == data_of("flat")[0]["changes"] == []


# --- columns ------------------------------------------------------------------------------------------

_NUMBERS = st.integers(-(2**31) + 1, 2**31 - 1)


@given(
    st.integers(1, 3).flatmap(
        lambda width: st.lists(st.lists(_NUMBERS, min_size=width, max_size=width), max_size=5)
    )
)
def test_columns_come_back_as_they_were(rows):
    _, columns = view_data.unpacked(packed({}, {"first": [5], "rows": rows, "last": [[-1, 2]]}))
    assert columns["rows"].tolist() == rows
    assert columns["first"].tolist() == [[5]]
    assert columns["last"].tolist() == [[-1, 2]]


@pytest.mark.parametrize("value", [2**31, -(2**31)])
def test_a_number_that_does_not_fit_is_an_error(value):
    with pytest.raises(ModelError, match="'wide'"):
        packed({}, {"wide": [0, value]})


# --- the page ------------------------------------------------------------------------------------------


def test_the_policy_allows_these_very_scripts_and_this_style_and_nothing_else():
    elements = view_data.elements(page_of("flat"))
    (policy,) = (
        e.attributes["content"]
        for e in elements
        if e.attributes.get("http-equiv") == "Content-Security-Policy"
    )
    scripts = [e for e in elements if e.name == "script" and "type" not in e.attributes]
    styles = [e for e in elements if e.name == "style"]
    assert (len(scripts), len(styles)) == (1, 1)

    def allowed(text: str) -> str:
        return f"'sha256-{b64encode(sha256(text.encode()).digest()).decode()}'"

    assert policy.split("; ") == [
        "default-src 'none'",
        f"script-src {allowed(scripts[0].text)}",
        f"style-src {allowed(styles[0].text)}",
        "img-src data:",
        "base-uri 'none'",
        "form-action 'none'",
    ]
    # The policy must stand before anything that it shall govern.
    assert [e.name for e in elements].index("meta") < [e.name for e in elements].index("style")


def test_nothing_in_the_page_reaches_outside_of_it():
    text = page_of("flat")
    for element in view_data.elements(text):
        assert not {
            name for name in element.attributes if name.startswith("on") or name in ("style", "src", "srcset")
        }
        assert element.attributes.get("href", "data:,") == "data:,"
    assert not re.search(
        r"https?:|\bfetch\(|XMLHttpRequest|WebSocket|sendBeacon|importScripts|\bimport\b[ (]", text
    )
    assert not re.search(
        r"\beval\(|new Function|innerHTML|outerHTML|insertAdjacentHTML|document\.write|@import|url\(", text
    )


def test_the_scripts_are_all_that_stand_in_the_folder():
    folder = files(view)
    assert sorted(SCRIPTS) == sorted(path.name for path in folder.iterdir() if path.name.endswith(".js"))


def test_every_element_that_a_script_looks_up_is_there():
    text = page_of("flat")
    script = next(
        e.text for e in view_data.elements(text) if e.name == "script" and "type" not in e.attributes
    )
    there = [e.attributes["id"] for e in view_data.elements(text) if "id" in e.attributes]
    assert len(there) == len(set(there))
    looked_up = set(re.findall(r"byId\('([\w-]+)'\)", script))
    assert looked_up
    assert looked_up <= set(there)


def test_every_control_says_what_it_is():
    labelled: set[str] = set()
    elements = view_data.elements(page_of("flat"))
    for element in elements:
        if element.name in ("input", "select", "canvas", "nav", "aside", "dialog"):
            named = {"aria-label", "aria-labelledby"} & set(element.attributes)
            wrapped = element.attributes.get("id") in (
                "theme",
                "colour-by",
                "grid-on",
                "fittings-on",
                "fasteners-on",
            )
            assert named or wrapped, element
            labelled.add(element.name)
        if element.name == "button":
            assert element.text.strip() or element.attributes.get("aria-label"), element
    assert labelled == {"input", "select", "canvas", "nav", "aside", "dialog"}


def test_cautions_and_notes_stand_on_the_page_even_where_no_script_runs():
    shed = cast.shed_of("seed-store")
    shown = [element.text for element in view_data.elements(page_of("seed-store")) if element.name == "li"]
    assert shown[: len(CAUTIONS) + len(shed.notes)] == [*CAUTIONS, *shed.notes]
    (foot,) = (
        e.text for e in view_data.elements(page_of("seed-store")) if e.attributes.get("id") == "caution"
    )
    assert foot.startswith(CAUTIONS[0])


def test_what_a_user_typed_is_text_and_never_markup():
    shed = cast.shed_of("flat")
    project = replace(shed.project, name=HOSTILE, number="<img src=x>", revision="'\"&")
    text = page(replace(shed, project=project, notes=(HOSTILE,)), Imprint())
    plain = view_data.elements(page_of("flat"))
    spoiled = view_data.elements(text)
    assert [e.name for e in spoiled if e.name != "li"] == [e.name for e in plain if e.name != "li"]
    assert [e.text for e in spoiled if e.name in ("title", "h1")] == [HOSTILE, HOSTILE]
    assert "<img" not in text
    assert "</script><script>alert" not in text
    assert text.count("{{data}}") == 3  # as the user typed it: in title, heading and note
    texts, _ = view_data.unpacked(view_data.data_text(text))
    assert texts["project"] == {"name": HOSTILE, "number": "<img src=x>", "revision": "'\"&"}
    assert texts["notes"] == [HOSTILE]


def test_the_same_building_gives_the_same_bytes():
    code = (
        "import sys; sys.path.insert(0, 'tests'); import cast, hashlib\n"
        "from shedbim.writers.imprint import Imprint\nfrom shedbim.writers.view.page import page\n"
        "print(hashlib.sha256(page(cast.shed_of('flat'), Imprint()).encode()).hexdigest())"
    )
    root = cast._FOLDER.parent
    other = subprocess.run([sys.executable, "-c", code], cwd=root, capture_output=True, text=True, check=True)
    assert other.stdout.strip() == sha256(page_of("flat").encode()).hexdigest()


def test_the_page_stays_small_and_grows_with_the_pieces():
    """Bounds of the issue: 300 kB for the 30 x 60 m preset, 2 MB for the hall of 20,000 pieces."""
    assert len(page_of("seed-store").encode()) < 300_000
    assert len(page_of("distribution-hall").encode()) < 2_000_000
    bays = [
        expand(cast.changed("seed-store", building__bays=["7 m", f"{n} x 5.75 m", "7 m"])) for n in (10, 40)
    ]
    sizes = [len(view_data.data_text(page(shed, Imprint()))) for shed in bays]
    assert sizes[1] / sizes[0] < len(bays[1].pieces) / len(bays[0].pieces)
