"""Findings as topics: valid by the published schemas, read by another library, stable, escaped, and to be seen.

The standard is BCF-XML of buildingSMART, releases 2.1 and 3.0, and the technical documentation beside its schemas.
"""

from __future__ import annotations

import io
import re
import uuid
from dataclasses import replace
from functools import cache
from math import atan, degrees, radians, tan
from pathlib import Path
from typing import Any
from xml.etree import ElementTree
from zipfile import ZipFile

import bcf.v2.bcfxml
import bcf.v3.bcfxml
import bcf_schema
import cast
import ifcopenshell
import numpy as np
import pytest
from found import CHANGE, CODE_OF, HOSTILE, found, hits_at, hostile, some
from ifcopenshell.util.placement import get_local_placement
from picture_scenes import UP, block, decoded, scene

from shedbim.checks.finding import Finding, Hit, Place
from shedbim.limits import CODES, Severity, Waiver
from shedbim.model.identity import namespace
from shedbim.model.other_trades import OtherElement
from shedbim.model.roles import Role
from shedbim.model.shed import Georeference, Shed
from shedbim.outputs import OUTPUTS
from shedbim.sections.profiles import Flat
from shedbim.writers import ifc
from shedbim.writers.bcf import VERSIONS, write
from shedbim.writers.bcf.markup import MODEL
from shedbim.writers.bcf.sight import Surroundings
from shedbim.writers.bcf.snapshot import HEIGHT, WIDTH, snapshot
from shedbim.writers.bcf.topics import Topic, topics_of
from shedbim.writers.finding_words import finding_ids
from shedbim.writers.handover import Handover
from shedbim.writers.imprint import Imprint
from shedbim.writers.pictures.tints import HIGHLIGHT

VERSION = pytest.mark.parametrize("version", VERSIONS)
READERS: dict[str, Any] = {"2.1": bcf.v2.bcfxml.BcfXml, "3.0": bcf.v3.bcfxml.BcfXml}
#: One column looked at and accepted, all base plates likewise.
WAIVERS = (
    Waiver(CODE_OF[Severity.ERROR], "1/column/A", "Agreed with the <client> & filed."),
    Waiver(CODE_OF[Severity.NOTE], "*", "Known."),
)
#: A duct of another trade, and what is said of that model as a whole.
DUCT = OtherElement("2O2Fr$t4X7Zf8NOew3FLOH", "IfcDuctSegment", "Duct <1>", True, "air & water.ifc")
NAMELESS = OtherElement("not a GlobalId", "IfcDuctSegment", "", True, "air & water.ifc")


def bytes_of(handover: Handover, version: str) -> bytes:
    sink = io.BytesIO()
    write(handover, sink, version)
    return sink.getvalue()


@cache
def handover() -> Handover:
    """The smallest specimen with findings open, waived in part and waived wholly, of others and of no place."""
    shed = cast.shed_of("flat")
    places = hits_at(shed, "other-overlap", Role.GABLE_POST, about="duct")
    theirs = [replace(hit, others=(DUCT, NAMELESS)) for hit in places]
    nowhere = Hit("other-far-away", (), (0.0, 0.0, 0.0), "It was not read.", CHANGE, about="air & water.ifc")
    return Handover(shed, findings=(*some(shed, WAIVERS), *found(shed, [*theirs, nowhere])))


@cache
def archive(version: str) -> dict[str, bytes]:
    """Every entry of the file by its name."""
    with ZipFile(io.BytesIO(bytes_of(handover(), version))) as opened:
        return {name: opened.read(name) for name in opened.namelist()}


def documents(files: dict[str, bytes]) -> dict[str, bytes]:
    """The entries that are XML."""
    return {name: data for name, data in files.items() if not name.endswith(("/", ".png"))}


def topic(code: str, *, waived: bool = False) -> Topic:
    """The topic of a code."""
    state = "Closed" if waived else "Open"
    (one,) = [each for each in handover().topics if code in each.labels and each.state == state]
    return one


@VERSION
def test_every_document_follows_the_published_schema(version: str) -> None:
    for name, data in documents(archive(version)).items():
        if name == "extensions.xsd":
            continue
        kind = bcf_schema.ROOTS[version][name.split("/")[-1]]
        assert bcf_schema.faults(data, kind) == [], name


@pytest.mark.parametrize(
    ("name", "old", "new", "said"),
    [
        ("markup.bcf", b"<Title>", b"<Titel>", "no element Titel"),
        ("markup.bcf", b' Guid="', b' Guid="X', "against"),
        ("markup.bcf", b"Z</CreationDate>", b"later</CreationDate>", "CreationDate"),
        ("markup.bcf", b' TopicStatus="Open"', b"", "no @TopicStatus"),
        ("viewpoint.bcfv", b"<X>", b"<X>about ", "X: could not"),
        ("viewpoint.bcfv", b' IfcGuid="', b' IfcGuid="long', "characters"),
        ("viewpoint.bcfv", b'DefaultVisibility="true"', b'DefaultVisibility="yes"', "yes"),
        ("viewpoint.bcfv", b"<FieldOfView>", b"<FieldOfView>1000", "FieldOfView: 1000"),
    ],
)
def test_the_schema_refuses_what_is_spoiled(name: str, old: bytes, new: bytes, said: str) -> None:
    data = archive("3.0")[f"{topic(CODE_OF[Severity.WARNING]).id}/{name}"]
    assert old in data
    closed = data.replace(old, new).replace(b"</Title>", b"</Titel>" if b"Titel" in new else b"</Title>")
    assert any(said in fault for fault in bcf_schema.faults(closed, bcf_schema.ROOTS["3.0"][name]))


def test_the_schema_refuses_elements_in_another_order() -> None:
    root = ElementTree.fromstring(archive("3.0")[f"{topic(CODE_OF[Severity.WARNING]).id}/markup.bcf"])
    told = root.find("Topic")
    assert told is not None
    told.insert(0, told[1])
    del told[2]
    said = bcf_schema.faults(ElementTree.tostring(root), bcf_schema.ROOTS["3.0"]["markup.bcf"])
    assert len(said) == 1
    assert "in the order" in said[0]


@VERSION
def test_another_library_opens_it_and_reads_what_was_found(version: str, tmp_path: Path) -> None:
    path = tmp_path / "findings.bcf"
    path.write_bytes(bytes_of(handover(), version))
    with READERS[version](path) as opened:
        assert opened.version.version_id == version
        assert opened.project.name == "Flat Kiosk"
        assert opened.project.project_id == "3f2f0c1e-51a5-4d0b-8a7e-0b6a4b3d7a04"
        assert set(opened.topics) == {str(each.id) for each in handover().topics}
        for each in handover().topics:
            read = opened.topics[str(each.id)]
            assert read.topic.title == each.title
            assert read.topic.description == each.description
            assert (read.topic.topic_type, read.topic.topic_status) == (each.kind, each.state)
            assert read.topic.priority == each.priority
            assert str(read.topic.creation_date) == "2000-01-01T00:00:00Z"
            assert read.topic.creation_author == "shedbim"
            labels = read.topic.labels if version == "2.1" else read.topic.labels.label
            assert tuple(labels) == each.labels
            comments = [one.comment for one in read.comments]
            assert comments == ([each.comment] if each.comment else [])
            if each.viewpoint is None:
                assert not read.viewpoints
                continue
            (view,) = read.viewpoints.values()
            assert view.snapshot == each.viewpoint.picture
            chosen = view.visualization_info.components.selection.component
            assert [one.ifc_guid for one in chosen] == [one.global_id for one in each.viewpoint.selected]


@VERSION
def test_words_of_topics_are_those_that_the_file_lists(version: str, tmp_path: Path) -> None:
    path = tmp_path / "findings.bcf"
    path.write_bytes(bytes_of(handover(), version))
    with READERS[version](path) as opened:
        lists = opened.extensions
        for each in handover().topics:
            assert each.kind in lists.topic_types.topic_type
            assert each.state in lists.topic_statuses.topic_status
            assert each.priority in lists.priorities.priority
            assert set(each.labels) <= set(lists.topic_labels.topic_label)
        assert {code.area for code in CODES.values()} <= set(lists.topic_labels.topic_label)


@VERSION
def test_the_archive_is_built_as_the_guide_asks_for(version: str) -> None:
    # Documentation of BCF-XML, "BCFZIP encoding guide": forward slashes, and entries for folders.
    data = bytes_of(handover(), version)
    with ZipFile(io.BytesIO(data)) as opened:
        assert opened.testzip() is None
        names = opened.namelist()
        assert names[0] == "bcf.version"
        assert {info.date_time for info in opened.infolist()} == {(1980, 1, 1, 0, 0, 0)}
        for name in names:
            assert re.fullmatch(r"(?:[0-9a-f]{8}(?:-[0-9a-f]{4}){3}-[0-9a-f]{12}/)?[a-z]*(?:\.[a-z]+)?", name)
            if "/" in name:
                assert f"{name.split('/')[0]}/" in names
                assert names.index(f"{name.split('/')[0]}/") <= names.index(name)
    again = Handover(handover().shed, findings=handover().findings)
    assert bytes_of(again, version) == data


def test_file_names_end_as_the_standard_says() -> None:
    # Documentation of releases 2.1 and 3.0: the extension "bcf" is introduced since 2.1.
    rows = {row.name: row.file for row in OUTPUTS}
    assert {name: rows[name] for name in ("bcf-2.1", "bcf-3.0")} == {
        "bcf-2.1": "findings.bcf",
        "bcf-3.0": "findings-3.0.bcf",
    }
    assert rows["model"] == MODEL


def test_severity_state_and_places_are_told() -> None:
    error, warning = topic(CODE_OF[Severity.ERROR]), topic(CODE_OF[Severity.WARNING])
    note = topic(CODE_OF[Severity.NOTE], waived=True)
    assert [(each.kind, each.priority) for each in (error, warning, note)] == [
        ("Error", "High"), ("Warning", "Medium"), ("Note", "Low")
    ]  # fmt: skip
    assert note.comment == "Waived: Known."
    assert topic(CODE_OF[Severity.ERROR], waived=True).comment == (
        "Waived: Agreed with the <client> & filed."
    )
    assert error.title == "Two pieces share 2.0 cm³ (3 places)"
    lines = error.description.splitlines()
    assert lines[:4] == [
        "Two pieces share 2.0 cm³.",
        "Measured: 2.0 cm³; limit: 1.0 cm³.",
        "Source of the limit: EN 1090-2.",
        f"What to change: {CHANGE}",
    ]
    assert lines[4] == "At 3 places, the worst first:"
    part = handover().shed.parts[
        int(handover().shed.pieces.part[handover().shed.pieces.keys.index("2/column/B")])
    ]
    assert lines[5] == f"- on 2, on B, 2.6 m above floor: {part.mark}: 2/column/B;"
    assert lines[-1].startswith(f"Code: {CODE_OF[Severity.ERROR]} (error): ")


def test_a_description_lists_the_first_places_and_counts_them_all() -> None:
    shed = cast.shed_of("flat")
    findings = found(shed, hits_at(shed, CODE_OF[Severity.ERROR], Role.BOLTS, about="bolts"))
    (one,) = topics_of(shed, Imprint(), findings)
    count = len(findings[0].places)
    assert count > 30
    lines = one.description.splitlines()
    assert sum(line.startswith("- ") for line in lines) == 21
    assert f"At {count} places, the worst first:" in lines
    assert lines[-2] == f"- and {count - 20} more, which the file of findings lists."


def test_ids_stay_when_a_dimension_changes_and_viewpoints_do_not() -> None:
    description = cast.changed("flat", building__bays=["5.1 m"], building__eaves="4.6 m")
    other = cast.expand(description)
    plain = cast.shed_of("flat")
    before, after = (topics_of(shed, Imprint(), some(shed)) for shed in (plain, other))
    assert [each.id for each in before] == [each.id for each in after]
    for one, two in zip(before, after, strict=True):
        assert one.viewpoint is not None
        assert two.viewpoint is not None
        assert one.viewpoint.id != two.viewpoint.id
    elsewhere = replace(plain, project=replace(plain.project, id="another"))
    assert not {*finding_ids(elsewhere.project.id, some(elsewhere))} & {each.id for each in before}


def test_ids_are_uuids_of_the_project_the_code_and_what_it_is_about() -> None:
    # RFC 9562, 5.5: UUID version 5 from a namespace and a name, by the standard library.
    ids = finding_ids("4a6d1d5c-6f0e-4b7e-9b39-000000000001", handover().findings or ())
    assert len({*ids}) == len(ids)
    finding = (handover().findings or ())[0]
    scope = uuid.UUID("4a6d1d5c-6f0e-4b7e-9b39-000000000001")
    assert ids[0] == uuid.uuid5(scope, f"finding/{finding.code.name}/{finding.about}")
    assert {each.version for each in ids} == {5}
    assert namespace("4a6d1d5c-6f0e-4b7e-9b39-000000000001") == scope


def test_a_finding_keeps_its_id_when_all_of_it_is_waived_and_its_open_part_keeps_it_otherwise() -> None:
    shed = cast.shed_of("flat")
    code = CODE_OF[Severity.ERROR]
    hits = hits_at(shed, code, Role.COLUMN, about="columns")
    open_ids = finding_ids("p", found(shed, hits))
    whole = found(shed, hits, (Waiver(code, "*", "Known."),))
    assert [each.waived for each in whole] == ["Known."]
    assert finding_ids("p", whole) == open_ids
    part = found(shed, hits, (Waiver(code, "1/column/A", "Known."),))
    assert [each.waived for each in part] == ["", "Known."]
    assert finding_ids("p", part)[0] == open_ids[0]
    assert finding_ids("p", part)[1] != open_ids[0]


@pytest.mark.parametrize("placed", [False, True], ids=["without a map", "on a map"])
def test_components_and_coordinates_are_those_of_the_model_file(placed: bool) -> None:
    shed = cast.shed_of("flat")
    if placed:
        shed = replace(shed, georeference=Georeference("EPSG:25832", 5e8, 5.9e9, 12_000.0, 0.4))
    findings = found(shed, hits_at(shed, CODE_OF[Severity.ERROR], Role.COLUMN, about="columns"))
    sink = io.BytesIO()
    ifc.write(shed, sink)
    model = ifcopenshell.file.from_string(sink.getvalue().decode())
    handed = Handover(shed, findings=findings)
    (one,) = handed.topics
    view = one.viewpoint
    assert view is not None
    assert len(view.selected) == 1
    assert len(view.further) == 3
    for component in (*view.selected, *view.further):
        assert model.by_guid(component.global_id).Name == component.key
    # The column stands upright on its axis: the middle of its box lies on it, as the model file places it.
    axis = get_local_placement(model.by_guid(view.selected[0].global_id).ObjectPlacement)
    assert np.allclose(view.target[:2], axis[:2, 3], atol=0.002)
    assert 0.0 < view.target[2] < 4.5
    markup = bytes_of(handed, "3.0")
    with ZipFile(io.BytesIO(markup)) as opened:
        root = ElementTree.fromstring(opened.read(f"{one.id}/markup.bcf"))
    file = root.find("Header/Files/File")
    assert file is not None
    assert file.get("IfcProject") == model.by_type("IfcProject")[0].GlobalId
    assert file.findtext("Filename") == "model.ifc"


def camera(version: str, name: uuid.UUID) -> dict[str, Any]:
    """The camera of a topic: vectors and numbers by name."""
    root = ElementTree.fromstring(archive(version)[f"{name}/viewpoint.bcfv"])
    node = root.find("PerspectiveCamera")
    assert node is not None
    return {
        each.tag: np.array([float(axis.text or "") for axis in each]) if len(each) else float(each.text or "")
        for each in node
    }


@VERSION
def test_the_camera_looks_at_the_worst_place_from_above_the_floor(version: str) -> None:
    for one, finding in zip(handover().topics, handover().findings or (), strict=True):
        if one.viewpoint is None:
            continue
        seen = camera(version, one.id)
        eye, way, up = (seen[f"Camera{name}"] for name in ("ViewPoint", "Direction", "UpVector"))
        to = np.array(finding.places[0].point) / 1000 - eye
        distance = float(np.linalg.norm(to))
        assert np.allclose(to / distance, way, atol=1e-5)
        assert np.linalg.norm(way) == pytest.approx(1.0, abs=1e-5)
        assert np.linalg.norm(up) == pytest.approx(1.0, abs=1e-5)
        assert abs(way @ up) < 1e-5
        assert up[2] > 0.0
        assert eye[2] > 0.0
        # The cube that the snapshot shows fits: its faces lie within the view's smaller angle.
        assert distance * np.sin(np.radians(angle_up(seen, version) / 2)) >= one.viewpoint.reach


def angle_up(seen: dict[str, Any], version: str) -> float:
    """The vertical field of view: release 2.1 states the horizontal one, release 3.0 the vertical one."""
    if version == "3.0":
        return float(seen["FieldOfView"])
    return degrees(2 * atan(tan(radians(seen["FieldOfView"]) / 2) * HEIGHT / WIDTH))


def test_both_versions_have_the_same_camera_within_their_bounds() -> None:
    name = topic(CODE_OF[Severity.ERROR]).id
    old, new = camera("2.1", name), camera("3.0", name)
    for key in ("CameraViewPoint", "CameraDirection", "CameraUpVector"):
        assert np.array_equal(old[key], new[key])
    # Documentation of release 2.1: restricted to a value between 45 and 60 degrees, horizontal.
    assert 45.0 <= old["FieldOfView"] <= 60.0
    assert new["AspectRatio"] == pytest.approx(WIDTH / HEIGHT, abs=1e-6)
    assert angle_up(old, "2.1") == pytest.approx(angle_up(new, "3.0"), abs=1e-4)


@VERSION
def test_all_stays_visible_and_what_is_meant_is_selected_and_coloured(version: str) -> None:
    one = topic(CODE_OF[Severity.ERROR])
    assert one.viewpoint is not None
    root = ElementTree.fromstring(archive(version)[f"{one.id}/viewpoint.bcfv"])
    visibility = root.find("Components/Visibility")
    assert visibility is not None
    assert (dict(visibility.attrib), len(visibility)) == ({"DefaultVisibility": "true"}, 0)
    colours = {
        node.get("Color"): [each.get("IfcGuid") for each in node.iter("Component")]
        for node in root.iterfind("Components/Coloring/Color")
    }
    assert list(colours) == ["{:02X}{:02X}{:02X}".format(*HIGHLIGHT), "F0A030"]
    worst, others = colours.values()
    assert worst == [each.get("IfcGuid") for each in root.iterfind("Components/Selection/Component")]
    assert worst == [each.global_id for each in one.viewpoint.selected]
    assert others == [each.global_id for each in one.viewpoint.further]
    assert len(worst + others) == 3


@VERSION
def test_other_trades_are_named_by_their_own_ids_and_files(version: str) -> None:
    one = topic("other-overlap")
    root = ElementTree.fromstring(archive(version)[f"{one.id}/viewpoint.bcfv"])
    chosen = root.findall("Components/Selection/Component")
    # What is no GlobalId is not written as one.
    assert [each.get("IfcGuid") for each in chosen][1:] == [DUCT.guid]
    assert [len(each) for each in chosen] == [2, 0]
    markup = ElementTree.fromstring(archive(version)[f"{one.id}/markup.bcf"])
    assert [each.findtext("Filename") for each in markup.iter("File")] == ["model.ifc", "air & water.ifc"]
    whole = topic("other-far-away")
    assert whole.viewpoint is None
    assert "- as a whole;" in whole.description
    assert set(archive(version)) >= {f"{whole.id}/markup.bcf"}
    assert f"{whole.id}/viewpoint.bcfv" not in archive(version)


@VERSION
def test_hostile_text_stays_text(version: str) -> None:
    shed = hostile(cast.shed_of("flat"))
    says = f"{HOSTILE} {{value}}."
    waiver = Waiver(CODE_OF[Severity.ERROR], "*", HOSTILE)
    hits = hits_at(shed, CODE_OF[Severity.ERROR], Role.COLUMN, says=says, change=HOSTILE, about=HOSTILE[:-6])
    data = bytes_of(Handover(shed, findings=found(shed, hits, (waiver,))), version)
    with ZipFile(io.BytesIO(data)) as opened:
        files = {name: opened.read(name) for name in opened.namelist()}
    safe = re.sub("[\x00\x1b\ud800]", "\ufffd", HOSTILE)
    roots = {}
    for name, content in documents(files).items():
        assert b"\x1b" not in content
        assert b"\x00" not in content
        roots[name.split("/")[-1]] = ElementTree.fromstring(content)
        if name != "extensions.xsd":
            kind = bcf_schema.ROOTS[version][name.split("/")[-1]]
            assert bcf_schema.faults(content, kind) == [], name
    assert roots["project.bcfp"].findtext("Project/Name") == safe
    assert (roots["markup.bcf"].findtext("Topic/Title") or "").startswith(safe)
    comment = roots["markup.bcf"].find(".//Comment/Comment")
    assert comment is not None
    assert comment.text == f"Waived: {safe}"
    keys = [each.text for each in roots["viewpoint.bcfv"].iter("AuthoringToolId")]
    assert keys[0] == f"{safe}/2/column/B"


def test_a_project_without_a_name_and_a_check_without_findings_give_valid_files() -> None:
    shed = cast.shed_of("flat")
    blank = replace(shed, project=replace(shed.project, name=" \t"))
    for version, kinds in bcf_schema.ROOTS.items():
        with ZipFile(io.BytesIO(bytes_of(Handover(blank, findings=()), version))) as opened:
            names = opened.namelist()
            assert [name for name in names if "/" in name] == []
            for name in names:
                if name in kinds:
                    assert bcf_schema.faults(opened.read(name), kinds[name]) == []
            assert b"<Name" not in opened.read("project.bcfp")


def loud(pixels: Any) -> Any:
    """Where a picture shows the loud colour, lit one way or another."""
    red, green, blue = (pixels[..., axis].astype(int) for axis in range(3))
    return (red > 100) & (red > 3 * green) & (red > 3 * blue)


def test_snapshots_are_pictures_that_show_the_pieces() -> None:
    drawn = [each for each in handover().topics if each.viewpoint is not None]
    assert len(drawn) == len(handover().topics) - 1
    for each in drawn:
        assert each.viewpoint is not None
        assert each.viewpoint.picture is not None
        pixels = decoded(each.viewpoint.picture)
        assert pixels.shape == (HEIGHT, WIDTH, 3)
        assert loud(pixels).sum() > 400, each.title
        # Besides the loud piece there are pale ones, and paper.
        assert (pixels == 255).all(axis=-1).mean() > 0.1
        assert len(np.unique(pixels.reshape(-1, 3), axis=0)) > 30


def test_the_eye_stands_where_nothing_hides_the_piece() -> None:
    # A block with slabs on three sides: it is seen from one corner, whichever corner that is.
    target = block("target", Role.COLUMN, -100.0, -100.0, 200.0)
    slabs = {
        "left": ("left", Role.PURLIN, Flat(1200.0, 10.0), (-200.0, -600.0, 0.0), (-200.0, 600.0, 0.0), UP),
        "right": ("right", Role.PURLIN, Flat(1200.0, 10.0), (200.0, -600.0, 0.0), (200.0, 600.0, 0.0), UP),
        "near": ("near", Role.PURLIN, Flat(1200.0, 10.0), (-600.0, -200.0, 0.0), (600.0, -200.0, 0.0), UP),
        "far": ("far", Role.PURLIN, Flat(1200.0, 10.0), (-600.0, 200.0, 0.0), (600.0, 200.0, 0.0), UP),
    }
    seen = {}
    for free in (("left", "near"), ("right", "near"), ("left", "far"), ("right", "far")):
        shed = scene(target, *(slab for name, slab in slabs.items() if name not in free))
        shed = raised(shed, 2000.0)
        sight = Surroundings(shed).sight(Place((0.0, 0.0, 2100.0), (0,)))
        x, y, _ = sight.direction
        seen[free] = ("right" if x < 0 else "left", "far" if y < 0 else "near")
        picture = snapshot(shed, sight, (0,), "")
        assert picture is not None
        assert loud(decoded(picture)).sum() > 5000
    assert seen == {free: free for free in seen}


def raised(shed: Shed, by: float) -> Shed:
    """The shed higher by so much, mm: the eye is not kept above the floor."""
    placement = shed.pieces.placement.copy()
    placement[:, 2, 3] += by
    return replace(shed, pieces=replace(shed.pieces, placement=placement))


def test_a_picture_reaches_as_far_as_what_it_shows() -> None:
    shed = cast.shed_of("flat")
    around = Surroundings(shed)
    keys = shed.pieces.keys
    column = keys.index("1/column/A")
    high = around.sight(some(shed)[0].places[0]).reach
    assert 2000.0 < high < 4000.0  # half of a column nearly 4 m high
    plate = keys.index("1/column/A/start/base plate")
    point = tuple(shed.pieces.placement[plate, :, 3].tolist())
    assert around.sight(Place(point, (plate,))).reach == 600.0
    assert around.sight(Place(point, (plate, column))).reach == 600.0
    far = keys.index("2/column/B")
    assert around.sight(Place(point, (plate, far))).reach == 4000.0


def test_where_nothing_stands_there_is_a_viewpoint_and_no_picture() -> None:
    shed = cast.shed_of("flat")
    empty = Hit(CODE_OF[Severity.ERROR], (), (0.0, 0.0, 90_000.0), "Nothing.", CHANGE, about="sky")
    (one,) = topics_of(shed, Imprint(), found(shed, [empty]))
    assert one.viewpoint is not None
    assert one.viewpoint.picture is None
    data = bytes_of(Handover(shed, findings=found(shed, [empty])), "2.1")
    with ZipFile(io.BytesIO(data)) as opened:
        assert f"{one.id}/viewpoint.bcfv" in opened.namelist()
        assert f"{one.id}/snapshot.png" not in opened.namelist()
        for name in ("markup.bcf", "viewpoint.bcfv"):
            kind = bcf_schema.ROOTS["2.1"][name]
            assert bcf_schema.faults(opened.read(f"{one.id}/{name}"), kind) == []


def test_a_viewpoint_never_has_more_components_than_the_guide_allows() -> None:
    # Documentation of BCF-XML, optimization rules: not over 1000 components.
    shed = cast.shed_of("lean")
    pieces = tuple(range(1500))
    place = Place((0.0, 0.0, 1000.0), pieces[:2])
    rest = Place((0.0, 0.0, 1000.0), pieces[2:])
    finding = Finding(CODES[CODE_OF[Severity.ERROR]], "all", "All.", CHANGE, (place, rest))
    assert len(shed.pieces) >= 1500
    (one,) = topics_of(shed, Imprint(), (finding,))
    assert one.viewpoint is not None
    assert (len(one.viewpoint.selected), len(one.viewpoint.further)) == (2, 998)
