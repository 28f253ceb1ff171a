"""The mesh model is a sound file of the standard, and places every piece where the model has it."""

from __future__ import annotations

import json
from dataclasses import dataclass, replace
from functools import cache
from io import BytesIO

import cast
import glb_validator
import numpy as np
import pytest
import specimens
import trimesh
from bolted_frames import BOLTS, bolted_frames
from glb_file import GlbFile, box_of_corners, nodes_before_pieces, rotation_matrices

from shedbim.expand import expand
from shedbim.geometry.outlines import Outline, polyline
from shedbim.geometry.placements import Placements, compose, rotation
from shedbim.geometry.quaternions import quaternions
from shedbim.model.bars import Bar
from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.plates import Plate
from shedbim.model.roles import Role
from shedbim.model.shapes import Shape
from shedbim.model.shed import Assemblies, Pieces, ProjectInfo, Shed
from shedbim.model.solids import solid
from shedbim.sections.section import Symmetry
from shedbim.version import __version__
from shedbim.writers.described import described, figures
from shedbim.writers.glb import write
from shedbim.writers.glb.meshes import CHORD_ERROR, flat_mesh
from shedbim.writers.glb.text import compact, strings
from shedbim.writers.imprint import CAUTIONS, Imprint
from shedbim.writers.palette import PALETTE

HOSTILE = '</script><script>"\\\n\t{}[],:\u2028 é 日本 \U0001d11e \x7f\x00 %s {0} \\ud800'


def written(shed: Shed, imprint: Imprint | None = None) -> bytes:
    sink = BytesIO()
    write(shed, sink, imprint or Imprint())
    return sink.getvalue()


def hostile() -> Shed:
    return specimens.shed(
        project=ProjectInfo(specimens.PROJECT_ID, HOSTILE, HOSTILE, HOSTILE), prefix=HOSTILE
    )


def empty() -> Shed:
    """A building of nothing: the standard forbids empty lists."""
    none = np.zeros(0, np.int64)
    return replace(
        specimens.shed(),
        parts=(),
        pieces=Pieces((), none, np.zeros((0, 3, 4)), none),
        assembly_types=(),
        assemblies=Assemblies((), none, np.zeros((0, 3, 4)), none),
        joints=(),
    )


SPECIMENS = {"by hand": specimens.shed, "hostile": hostile, "empty": empty, "bolted": bolted_frames}
ALL = [*cast.CAST, *SPECIMENS]
#: The independent reader takes a millisecond a node.
MOST_FOR_HOSTILEER = 1500


@cache
def shed_of(name: str) -> Shed:
    return SPECIMENS[name]() if name in SPECIMENS else cast.shed_of(name)


@cache
def data_of(name: str) -> bytes:
    return written(shed_of(name))


@cache
def file_of(name: str) -> GlbFile:
    return GlbFile.read(data_of(name))


@pytest.fixture(scope="session")
def validated(tmp_path_factory: pytest.TempPathFactory, request: pytest.FixtureRequest) -> dict[str, dict]:
    folder = tmp_path_factory.mktemp("glb")
    paths = {name: folder / f"{number}.glb" for number, name in enumerate(ALL)}
    paths["spoiled"] = folder / "spoiled.glb"
    for name, path in paths.items():
        path.write_bytes(spoiled() if name == "spoiled" else data_of(name))
    found = glb_validator.reports(list(paths.values()), request.config.cache.mkdir("gltf-validator"))
    return {name: found[path] for name, path in paths.items()}


def spoiled() -> bytes:
    """A file with a bound and a child that are wrong."""
    data = data_of("by hand")
    for right, wrong in ((b'"min":[0.0', b'"min":[0.5'), (b'"children":[1', b'"children":[0')):
        assert right in data
        data = data.replace(right, wrong, 1)
    return data


@pytest.mark.parametrize("name", ALL)
def test_the_published_validator_finds_nothing(name: str, validated: dict[str, dict]) -> None:
    report = validated[name]
    assert report["issues"]["messages"] == []
    assert report["issues"]["numErrors"] == report["issues"]["numWarnings"] == 0
    assert report["info"]["version"] == "2.0"
    assert report["info"]["generator"] == f"shedbim {__version__}"
    assert report["info"]["drawCallCount"] == len(shed_of(name).parts)


def test_the_published_validator_does_find_faults(validated: dict[str, dict]) -> None:
    codes = {message["code"] for message in validated["spoiled"]["issues"]["messages"]}
    assert {"ACCESSOR_MIN_MISMATCH", "NODE_LOOP"} <= codes


@pytest.mark.parametrize("name", ALL)
def test_each_mesh_is_a_part_with_bounds_and_unit_normals(name: str) -> None:
    file, shed = file_of(name), shed_of(name)
    meshes = file.json.get("meshes", [])
    assert [mesh["name"] for mesh in meshes] == [part.mark for part in shed.parts]
    used = 0
    for number, part in enumerate(shed.parts):
        place = file.accessors(number)
        points, normals = file.values(place["POSITION"]), file.values(place["NORMAL"])
        indices = file.values(place["indices"])
        entry = file.json["accessors"][place["POSITION"]]
        assert (entry["min"], entry["max"]) == (points.min(axis=0).tolist(), points.max(axis=0).tolist())
        assert np.abs(np.linalg.norm(normals, axis=1) - 1).max() < 1e-6
        # Every vertex is used, none is a copy of another, and each lies in the faces its normal is of.
        assert set(indices.tolist()) == set(range(len(points)))
        assert len(np.unique(np.hstack([points, normals]), axis=0)) == len(points)
        corners = points[indices].astype(float).reshape(-1, 3, 3)
        cross = np.cross(corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 0])
        across = np.einsum("tj,tcj->tc", cross, normals[indices].reshape(-1, 3, 3))
        assert (across > 0.99 * np.linalg.norm(cross, axis=1)[:, None]).all()
        used += points.nbytes + normals.nbytes + indices.nbytes
        extras = meshes[number]["extras"]
        assert extras["section"] == described(part.shape)
        assert figures(part.shape).items() <= extras.items()
        assert extras["mass_kg"] == pytest.approx(part.shape.mass, abs=1e-3)
        assert (extras["grade"], extras["finish"]) == (part.grade, part.finish)
    assert used == len(file.buffer)


@pytest.mark.parametrize("name", ALL)
def test_materials_have_the_colours_of_the_roles(name: str) -> None:
    file, shed = file_of(name), shed_of(name)
    materials = file.json.get("materials", [])
    roles = {part.role.word for part in shed.parts}
    assert sorted(each["name"] for each in materials) == sorted(roles)
    of_role = {role.word: colour for role, colour in PALETTE.items()}
    for material in materials:
        linear = np.array(material["pbrMetallicRoughness"]["baseColorFactor"])
        assert linear[3] == 1
        # Back to a screen's colour (IEC 61966-2-1).
        screen = np.where(linear <= 0.0031308, 12.92 * linear, 1.055 * linear ** (1 / 2.4) - 0.055)
        assert tuple(np.rint(255 * screen[:3]).astype(int)) == of_role[material["name"]]
    for mesh, part in zip(file.json.get("meshes", []), shed.parts, strict=True):
        assert materials[mesh["primitives"][0]["material"]]["name"] == part.role.word


@pytest.mark.parametrize("name", ALL)
def test_each_piece_is_a_node_with_its_key_and_what_it_is(name: str) -> None:
    file, shed = file_of(name), shed_of(name)
    nodes, first = file.json["nodes"], nodes_before_pieces(file, shed)
    assert [node["name"] for node in nodes[first:]] == list(shed.pieces.keys)
    assert [node["name"] for node in nodes if "mesh" in node] == list(shed.pieces.keys)
    names = [node["name"] for node in nodes]
    assert len(set(names)) == len(names)
    for node, index in zip(nodes[first:], shed.pieces.part.tolist(), strict=True):
        part = shed.parts[index]
        assert node["mesh"] == index
        assert node["extras"] == {
            "mark": part.mark,
            "section": described(part.shape),
            "role": part.role.word,
        }


@pytest.mark.parametrize("name", ALL)
def test_the_tree_has_roles_and_assemblies_that_hold_their_pieces(name: str) -> None:
    file, shed = file_of(name), shed_of(name)
    nodes, groups = file.json["nodes"], shed.assemblies
    first = nodes_before_pieces(file, shed)
    above = [nodes[parent]["name"] if parent >= 0 else None for parent in file.parents.tolist()]
    assert file.json["scenes"] == [{"nodes": [0]}]
    assert above[0] is None
    assert None not in above[1:]
    held = [
        groups.keys[owner] if owner >= 0 else shed.parts[part].role.word
        for owner, part in zip(shed.pieces.assembly.tolist(), shed.pieces.part.tolist(), strict=True)
    ]
    assert above[first:] == held
    project = shed.project.name
    start = first - len(groups)
    assert [node["name"] for node in nodes[start:first]] == list(groups.keys)
    assert above[start:first] == [groups.keys[p] if p >= 0 else project for p in groups.parent.tolist()]
    assert [node["extras"] for node in nodes[start:first]] == [
        {"mark": kind.mark, "kind": kind.kind, "made": kind.made}
        for kind in (shed.assembly_types[index] for index in groups.type.tolist())
    ]
    words = [node["name"] for node in nodes[1:start]]
    assert words == [role.word for role in Role if role.word in set(words)]
    assert set(above[1:start]) <= {project}


@pytest.mark.parametrize("name", ALL)
def test_pieces_and_assemblies_stand_where_the_model_has_them(name: str) -> None:
    file, shed = file_of(name), shed_of(name)
    first = nodes_before_pieces(file, shed)
    start = first - len(shed.assemblies)
    expected = np.concatenate([shed.assemblies.placement, shed.pieces.placement])
    # Up is y in the file: its z is the building's y turned back.
    x, y, z = np.moveaxis(file.world[start:], 1, 0)
    found = np.stack([x, -z, y], axis=1)
    assert np.allclose(found[:, :, :3], expected[:, :, :3], rtol=0, atol=1e-8)
    assert np.allclose(found[:, :, 3] * 1000, expected[:, :, 3], rtol=0, atol=0.02)


@pytest.mark.parametrize("name", ALL)
def test_the_box_of_each_piece_is_that_of_its_solid(name: str) -> None:
    file, shed = file_of(name), shed_of(name)
    if not len(shed.pieces):
        return
    boxes = np.array([solid(part.body, CHORD_ERROR).bounding_box() for part in shed.parts]).reshape(-1, 2, 3)
    expected = box_of_corners(boxes[shed.pieces.part], shed.pieces.placement)
    assert np.abs(file.piece_boxes(shed) - expected).max() < 0.1
    # Chords leave an arc: where a round bar is cut askew, its tip may be this much short of the exact one.
    exact = np.array([solid(part.body).bounding_box() for part in shed.parts]).reshape(-1, 2, 3)
    askew = np.array([is_askew(part.body) for part in shed.parts])
    short = np.abs(file.piece_boxes(shed) - box_of_corners(exact[shed.pieces.part], shed.pieces.placement))
    assert short[~askew[shed.pieces.part]].max() < 0.1
    assert short.max() < CHORD_ERROR + 0.1


@pytest.mark.parametrize("name", ALL)
def test_an_independent_reader_finds_closed_parts_and_every_piece(name: str) -> None:
    shed = shed_of(name)
    if not 0 < len(shed.pieces) <= MOST_FOR_HOSTILEER:
        return
    scene = trimesh.load_scene(BytesIO(data_of(name)), file_type="glb")
    assert len(scene.graph.nodes_geometry) == len(shed.pieces)
    assert len(scene.geometry) == len(shed.parts)
    corners = np.concatenate(list(piece_points(shed)))
    low, high = corners.min(axis=0), corners.max(axis=0)
    upright = [[low[0], low[2], -high[1]], [high[0], high[2], -low[1]]]
    assert np.allclose(scene.bounds * 1000, upright, rtol=0, atol=0.1)
    for part in shed.parts:
        mesh = scene.geometry[part.mark]
        mesh.merge_vertices(merge_norm=True, merge_tex=True)
        if isinstance(part.body, BoltGroup):
            continue
        assert mesh.is_watertight
        assert mesh.is_winding_consistent
        volume = mesh.volume * 1e9
        assert volume == pytest.approx(solid(part.body, CHORD_ERROR).volume(), rel=1e-4)
        assert abs(volume - part.body.volume) < CHORD_ERROR * wall_area(part.body)


def is_askew(shape: Shape) -> bool:
    """Whether an end of a bar is not square, or a notch cuts it."""
    return isinstance(shape, Bar) and not (
        shape.start.is_square and shape.end.is_square and not shape.notches
    )


def wall_area(shape: Bar | Plate) -> float:
    """The area of all walls square to a section or a plate, those of holes included, mm²."""
    if isinstance(shape, Plate):
        return sum(loop.length for loop in shape.outline.loops) * shape.thickness
    girth = sum(loop.length for loop in shape.section.outline.loops)
    bores = sum((np.pi * hole.diameter + 2 * hole.slot) * hole.thickness for hole in shape.holes)
    return girth * shape.length + bores


def test_each_prism_of_a_bolt_is_closed_and_as_large_as_its_disc_without_a_bore() -> None:
    part = next(part for part in bolted_frames().parts if part.mark == "BG1")
    mesh = flat_mesh(part.shape)
    corners = mesh.points[mesh.indices].astype(float).reshape(-1, 3, 3) * 1000
    volume = np.einsum("ij,ij->", corners[:, 0], np.cross(corners[:, 1], corners[:, 2])) / 6
    discs = [replace(disc, bore=0.0) for disc in BOLTS.stack]
    assert volume == pytest.approx(6 * sum(disc.volume for disc in discs), rel=0.06)
    # Six bolts of four prisms: a prism whose outline has k corners has 4 k - 4 triangles.
    outlines = [6, 6, 12, 16]
    assert len(corners) == 6 * sum(4 * corner - 4 for corner in outlines)
    body = trimesh.Trimesh(corners.reshape(-1, 3), np.arange(len(corners) * 3).reshape(-1, 3))
    assert body.is_watertight


def test_extras_tell_what_is_bought_or_cut() -> None:
    file = file_of("bolted")
    extras = {mesh["name"]: mesh["extras"] for mesh in file.json["meshes"]}
    assert {key: extras["BP1"][key] for key in ("section", "thickness_mm", "size_mm", "holes")} == {
        "section": "PL 20x230x410", "thickness_mm": 20, "size_mm": [410, 230], "holes": 4,
    }  # fmt: skip
    assert extras["BG1"] == {
        "mark": "BG1", "section": "M20x60 8.8 x6", "role": "bolts", "grade": "8.8", "finish": "galvanized",
        "designation": "M20x60 8.8", "count": 6, "diameter_mm": 20, "length_mm": 60, "grip_mm": 26.9,
        "nuts": 1, "washers": 1, "mass_kg": round(6 * BOLTS.volume * 7.85e-6, 3),
    }  # fmt: skip
    assert "length_mm" not in extras["NU1"]
    assert (extras["C1"]["length_mm"], extras["C1"]["holes"]) == (4210, 6)
    assert "holes" not in extras["R1"]


def piece_points(shed: Shed) -> list[np.ndarray]:
    """Corners of every solid where its pieces stand, mm."""
    found = []
    for index, part in enumerate(shed.parts):
        points = np.asarray(solid(part.body, CHORD_ERROR).to_mesh64().vert_properties)[:, :3]
        motion = shed.pieces.placement[shed.pieces.part == index]
        found.append((points @ np.swapaxes(motion[:, :, :3], 1, 2) + motion[:, None, :, 3]).reshape(-1, 3))
    return found


def test_the_file_says_where_it_comes_from_and_where_the_building_stands() -> None:
    shed = specimens.shed()
    imprint = Imprint(digest="a7" * 32)
    file = GlbFile.read(written(shed, imprint))
    told = file.json["asset"]["extras"]
    assert told["time_stamp"] == imprint.stamp
    assert told["description_sha256"] == imprint.digest
    assert told["cautions"] == list(CAUTIONS)
    assert told["notes"] == list(shed.notes)
    assert told["defaults"] == [{"field": "purlins.gap", "value": "6 mm"}]
    root = file.json["nodes"][0]["extras"]
    assert root["georeference"] == {
        "crs": "EPSG:25832",
        "easting_m": 512340.125,
        "northing_m": 5403120.5,
        "level_m": 212.35,
        "rotation_deg": 14.0,
    }
    assert root["grid"]["letters"] == ["A", "B", "C"]
    assert root["grid"]["x_m"] == [0.0, 6.1, 13.7]
    assert root["grid"]["y_m"] == [0.0, 6.05, 11.93]
    assert root["project"]["number"] == "2417"
    unplaced = GlbFile.read(written(specimens.shed(georeference=None)))
    assert "georeference" not in unplaced.json["nodes"][0]["extras"]
    # The map changes nothing else: the meshes stay local.
    assert unplaced.buffer == file.buffer
    assert unplaced.json["nodes"][1:] == file.json["nodes"][1:]


def test_text_of_a_user_is_data() -> None:
    file = file_of("hostile")
    assert file.text.isascii()
    assert file.json["nodes"][0]["name"] == HOSTILE
    assert file.json["nodes"][0]["extras"]["project"]["revision"] == HOSTILE
    assert all(node["name"].startswith(HOSTILE) for node in file.json["nodes"] if "mesh" in node)


def test_half_of_a_surrogate_pair_which_readers_stumble_over_becomes_the_sign_for_no_character() -> None:
    texts = ["\ud800", "\udc00\ud83d", "a\ud800\ud800b", "\U0001f600 \\ud800 \\\ud800\n", "plain", ""]
    meant = ["\ufffd", "\ufffd\ufffd", "a\ufffd\ufffdb", "\U0001f600 \\ud800 \\\ufffd\n", "plain", ""]
    assert [json.loads(text) for text in strings(texts)] == meant
    assert json.loads(compact({"texts": texts})) == {"texts": meant}


def test_equal_input_gives_equal_bytes() -> None:
    assert written(specimens.shed()) == data_of("by hand")
    assert written(expand(cast.described("lopsided"))) == data_of("lopsided")


def test_nothing_but_the_nodes_grows_with_the_pieces() -> None:
    few, many = (GlbFile.read(written(specimens.shed(frames=count))) for count in (2, 9))
    assert few.buffer == many.buffer
    for name in ("meshes", "accessors", "materials", "bufferViews", "buffers"):
        assert few.json[name] == many.json[name]
    assert len(many.json["nodes"]) == len(few.json["nodes"]) + 7 * 10


def test_quaternions_turn_as_the_placements_do() -> None:
    axes = np.random.default_rng(11).normal(size=(300, 3))
    turns = [rotation(axis, angle) for axis, angle in zip(axes, np.linspace(-3.2, 3.2, 300), strict=True)]
    # Quarter and half turns about every axis, and their sums: the cases where a component is 0 or ties.
    quarters = [rotation(axis, count * np.pi / 2) for axis in np.eye(3) for count in range(4)]
    turns += [compose(first, second) for first in quarters for second in quarters]
    motion: Placements = np.array(turns)
    found = quaternions(motion)
    assert np.allclose(np.linalg.norm(found, axis=1), 1, rtol=0, atol=1e-14)
    assert np.allclose(rotation_matrices(found), motion[:, :, :3], rtol=0, atol=1e-13)
    # The noise of a rotation does not change which of its two quaternions is given.
    noisy = quaternions(motion + np.random.default_rng(12).normal(scale=1e-15, size=motion.shape))
    assert np.allclose(noisy, found, rtol=0, atol=1e-12)


@dataclass(frozen=True)
class Sawteeth:
    """A profile of so many corners that 16 bits do not count its vertices."""

    teeth: int

    @property
    def outline(self) -> Outline:
        tips = [(float(i), 20.0 - 10.0 * (i % 2)) for i in range(self.teeth, -1, -1)]
        return Outline(polyline([(0.0, 0.0), (float(self.teeth), 0.0), *tips]))

    @property
    def symmetry(self) -> Symmetry:
        return Symmetry(turns=1, mirror=None)

    @property
    def thickness(self) -> float:
        return 10.0


def test_a_mesh_of_many_vertices_has_indices_of_32_bits() -> None:
    made = [flat_mesh(Bar(specimens.section("S", Sawteeth(teeth)), 700.0)) for teeth in (9_001, 12_001)]
    assert [mesh.indices.dtype for mesh in made] == [np.uint16, np.uint32]
    assert [mesh.indices.max() + 1 for mesh in made] == [len(mesh.points) for mesh in made]
    assert len(made[1].points) > 65536
