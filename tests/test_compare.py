"""Two states of a building compared: as sheds, through registers, and as model files of ours and of others."""

from __future__ import annotations

import json
from collections import Counter
from dataclasses import replace
from functools import cache
from pathlib import Path
from zipfile import ZipFile

import bcf_schema
import ifcopenshell
import numpy as np
import openpyxl
import pytest
from small_sheds import SMALL
from typer.testing import CliRunner
from view_data import data_text, unpacked

from shedbim.cli.commands import app
from shedbim.comparison import compared, write_comparison
from shedbim.description import read_text
from shedbim.errors import ComparisonError
from shedbim.expand import expand
from shedbim.model.roles import Role
from shedbim.model.shed import Shed
from shedbim.readers.model_states import read_model_state
from shedbim.revisions.amounts import amounts, masses_by
from shedbim.revisions.change_groups import change_groups
from shedbim.revisions.changes import Changes, Kind
from shedbim.revisions.comparing import compare
from shedbim.revisions.model_states import compare_models
from shedbim.revisions.piece_rows import applied, changed_rows, piece_rows
from shedbim.revisions.rolling import ROLLED_BY, rolled
from shedbim.revisions.snapshot import snapshot
from shedbim.writers.bcf import change_topics
from shedbim.writers.ifc import write
from shedbim.writers.schedules.fasteners import bolts, welds
from shedbim.writers.schedules.fittings import finishes

RAFTERS, TRUSSES = SMALL["rafters"], SMALL["trusses"]
#: Texts of two states: a bay longer, one put in between unequal ones, one taken out, other sections, another height.
EDITS = {
    "bay": (RAFTERS, RAFTERS.replace("4.7 m]", "4.95 m]")),
    "bay put in": (RAFTERS, RAFTERS.replace("[4.1 m,", "[4.1 m, 5.3 m,")),
    "bay taken out": (TRUSSES.replace("[4.6 m,", "[4.6 m, 5.1 m,"), TRUSSES),
    "section": (RAFTERS, RAFTERS.replace("section: IPE 220", "section: IPE 240")),
    "chord and height": (
        TRUSSES,
        TRUSSES.replace("top_chord: SHS 100x100x5", "top_chord: SHS 100x100x6").replace("3.6 m", "3.7 m"),
    ),
    "finish": (RAFTERS, f"{RAFTERS}\nfinish: {{frames: primed}}\n"),
}
EDIT = pytest.mark.parametrize("edit", EDITS)


@cache
def shed(text: str) -> Shed:
    return expand(read_text(text))


@cache
def changes(edit: str) -> Changes:
    before, after = EDITS[edit]
    return compare(snapshot(shed(before)), snapshot(shed(after)))


def kinds_by_id(found: Changes) -> dict[str, Kind]:
    return {found.id(row): Kind(int(found.kinds[row])) for row in range(len(found))}


def ids(found: Changes, kind: Kind) -> set[str]:
    return {found.id(int(row)) for row in found.having(kind)}


@EDIT
def test_the_other_way_round_everything_is_turned_over(edit: str) -> None:
    there = changes(edit)
    back = compare(there.after, there.before)
    turned = {Kind.ADDED: Kind.REMOVED, Kind.REMOVED: Kind.ADDED}
    assert len(there.changed) > 0
    assert kinds_by_id(back) == {name: turned.get(kind, kind) for name, kind in kinds_by_id(there).items()}
    moved = {there.id(row): there.moved[row] for row in range(len(there))}
    for row in range(len(back)):
        assert back.moved[row] == pytest.approx(-moved[back.id(row)], abs=1e-6)


@EDIT
def test_changes_applied_to_the_pieces_before_give_those_after(edit: str) -> None:
    there = changes(edit)
    # Through text, as a reader of the file has them.
    told = json.loads(json.dumps(changed_rows(there)))
    before, after = piece_rows(there.before), piece_rows(there.after)
    assert applied(before, told) == sorted(after, key=lambda row: row["id"])
    assert before != after
    with pytest.raises(ValueError, match="not as the changes say"):
        applied(after, told)


@EDIT
def test_a_state_compared_with_itself_has_no_changes(edit: str) -> None:
    state = changes(edit).after
    same = compare(state, snapshot(shed(EDITS[edit][1])))
    assert len(same.changed) == 0
    assert changed_rows(same) == []
    assert change_groups(same) == ()
    assert all(rolled(same, by) == () for by in ROLLED_BY)


def test_a_longer_bay_moves_what_stands_beyond_and_lengthens_what_spans_it() -> None:
    there = changes("bay")
    for row in range(len(there)):
        key, kind = there.key(row), Kind(int(there.kinds[row]))
        line = key.split("/")[0]
        if line in ("1", "2", "1-2"):
            assert not kind & ~Kind.REMARKED, key
        if line == "3":
            assert kind & Kind.MOVED, key
            assert there.moved[row] == pytest.approx([0, 250, 0], abs=1e-6), key
        role = there.after.things[there.after.thing[there.new[row]]].role
        if line == "2-3" and role in ("purlin", "side rail", "eaves strut"):
            # They keep the end at line 2: they grew, and did not move.
            assert (Kind.RESHAPED & kind, Kind.MOVED & kind) == (Kind.RESHAPED, 0), key
    assert there.counts()[Kind.ADDED] == there.counts()[Kind.REMOVED] == 0


def test_another_section_is_told_of_the_members_that_have_it() -> None:
    there = changes("section")
    sections = {there.key(int(row)) for row in there.having(Kind.RESECTIONED)}
    members = {key for key in sections if key.count("/") == 3 and "rafter" in key}
    assert members == {"2/rafter/A-B/1", "2/rafter/A-B/2"}
    says = [group.says for group in change_groups(there)]
    assert "all 2 rafters of line 2: IPE 220 became IPE 240" in says


def test_another_finish_changes_a_property_and_nothing_else() -> None:
    there = changes("finish")
    assert there.counts()[Kind.ALTERED] > 0
    assert all(
        not count for kind, count in there.counts().items() if kind not in (Kind.ALTERED, Kind.REMARKED)
    )
    altered = {there.key(int(row)) for row in there.having(Kind.ALTERED)}
    assert {"1/column/A", "2/rafter/A-B/1"} <= altered
    assert "1-2/purlin/A-B/1/1" not in altered


def turned(base: Shed, piece: int, about: np.ndarray, turn: np.ndarray) -> Shed:
    """The shed with a piece turned by a matrix about a point of its own frame."""
    placement = base.pieces.placement.copy()
    frame = placement[piece].copy()
    placement[piece, :, :3] = frame[:, :3] @ turn
    placement[piece, :, 3] = frame[:, 3] + frame[:, :3] @ (about - turn @ about)
    return replace(base, pieces=replace(base.pieces, placement=placement))


def test_a_piece_turned_onto_itself_did_not_move_and_one_turned_otherwise_did() -> None:
    base = shed(RAFTERS)
    row = {key: i for i, key in enumerate(base.pieces.keys)}
    plate = next(
        i for i, p in enumerate(base.pieces.part) if base.parts[p].role is Role.BASE_PLATE
    )  # a rectangle with holes in pairs: half a turn about its middle lays it on itself, a quarter does not
    middle = np.mean(base.parts[base.pieces.part[plate]].shape.box, axis=0)
    half, quarter = np.diag([-1.0, -1.0, 1.0]), np.array([[0.0, -1, 0], [1, 0, 0], [0, 0, 1]])
    before = snapshot(base)
    assert len(compare(before, snapshot(turned(base, plate, middle, half))).changed) == 0
    found = compare(before, snapshot(turned(base, plate, middle, quarter)))
    assert ids(found, Kind.MOVED) == {before.ids[plate]}
    column = row["1/column/A"]
    lifted = base.pieces.placement.copy()
    lifted[column, 2, 3] += 3.0
    higher = compare(before, snapshot(replace(base, pieces=replace(base.pieces, placement=lifted))))
    assert [higher.key(int(each)) for each in higher.changed] == ["1/column/A"]


@EDIT
def test_quantities_are_those_of_the_schedules(edit: str) -> None:
    for text, state in zip(EDITS[edit], (changes(edit).before, changes(edit).after), strict=True):
        building = shed(text)
        found = {each.name: each.value for each in amounts(state)}
        assert found["mass"] == pytest.approx(building.mass)
        # The schedule rounds each weld to whole mm.
        assert found["welds"] == pytest.approx(
            sum(map(float, welds(building).column("length total"))), rel=1e-3
        )
        assert found["fasteners"] == sum(bolts(building).column("quantity"))
        coats = {row[0]: row[2:] for row in finishes(building).rows}
        assert found["painted surface"] == pytest.approx(coats.get("painted", (0, 0, 0))[2])
        assert found["galvanized mass"] == pytest.approx(coats["galvanized"][1])


@EDIT
def test_groups_and_rolls_tell_of_every_changed_piece_once(edit: str) -> None:
    there = changes(edit)
    rows = np.concatenate([group.rows for group in change_groups(there)])
    assert sorted(rows.tolist()) == there.changed.tolist()
    for by in ("mark", "role"):
        rolls = rolled(there, by)
        assert sum(roll.changed for roll in rolls) == len(there.changed)
        for kind in Kind:
            assert sum(roll.counts.get(kind, 0) for roll in rolls) == there.counts()[kind]
    old, new = masses_by(there.before, "role"), masses_by(there.after, "role")
    for roll in rolled(there, "role"):
        assert roll.mass == pytest.approx((old.get(roll.name, (0, 0))[1], new.get(roll.name, (0, 0))[1]))
    places = [roll for by in ("frame", "bay") for roll in rolled(there, by)]
    # A piece counts where it is now; one that was removed, where it was.
    counted = Counter(there.key(int(row)).split("/")[0] for row in there.changed)
    assert {roll.name: roll.changed for roll in places} == counted
    marks: Counter[str] = Counter()
    for row in there.changed.tolist():
        state, rows = (there.after, there.new) if there.new[row] >= 0 else (there.before, there.old)
        marks[state.things[state.thing[rows[row]]].mark] += 1
    assert {roll.name: roll.changed for roll in rolled(there, "mark")} == marks


@EDIT
def test_a_group_says_all_where_it_is_all_pieces_of_the_role_in_the_places_named(edit: str) -> None:
    there = changes(edit)
    for group in change_groups(there):
        state = there.before if group.kind is Kind.REMOVED else there.after
        rows = (there.old if group.kind is Kind.REMOVED else there.new)[group.rows]
        places = {state.keys[row].split("/")[0] for row in rows}
        there_are = sum(
            key.split("/")[0] in places and state.things[thing].role == group.role
            for key, thing in zip(state.keys, state.thing.tolist(), strict=True)
        )
        assert group.whole == (there_are == len(rows)), group.says
        assert group.says.startswith("all ") == (group.whole and len(rows) > 1), group.says


def model_file(folder: Path, name: str, text: str) -> Path:
    path = folder / f"{name}.ifc"
    with path.open("wb") as sink:
        write(shed(text), sink)
    return path


@pytest.mark.parametrize("edit", ["bay put in", "section", "chord and height"])
def test_two_written_models_tell_what_the_sheds_tell(edit: str, tmp_path: Path) -> None:
    sheds = changes(edit)
    before, after = (
        read_model_state(model_file(tmp_path, str(number), text)) for number, text in enumerate(EDITS[edit])
    )
    models = compare_models(before, after)
    assert set(before.ids) == set(sheds.before.ids)
    assert set(after.ids) == set(sheds.after.ids)
    for kind in (Kind.ADDED, Kind.REMOVED, Kind.REMARKED):
        assert ids(models, kind) == ids(sheds, kind), kind
    # Relations of a file say who meets whom, but not with which welds.
    assert ids(models, Kind.REJOINED) <= ids(sheds, Kind.REJOINED)
    # The file names no stock of plates and bolts, and sees no symmetry of a shape.
    bars = {there for there, key in zip(before.ids, before.keys, strict=True) if key.count("/") == 3}
    assert ids(models, Kind.RESECTIONED) & bars == ids(sheds, Kind.RESECTIONED) & bars
    # A shed says that a solid is elsewhere, a file that a frame is: of less than 2 mm the two may differ.
    far = {sheds.id(row) for row in range(len(sheds)) if np.linalg.norm(sheds.moved[row]) > 2.0}
    reshaped = ids(sheds, Kind.RESHAPED | Kind.RESECTIONED)
    assert (ids(sheds, Kind.MOVED) & far) - reshaped <= ids(models, Kind.MOVED)
    still = set(before.ids) & set(after.ids) - {sheds.id(int(row)) for row in sheds.changed}
    assert len(still) > 50
    told = kinds_by_id(models)
    assert [name for name in still if told[name] & ~Kind.MOVED] == []
    rows = applied(piece_rows(before), json.loads(json.dumps(changed_rows(models))))
    assert rows == sorted(piece_rows(after), key=lambda row: row["id"])
    back = compare_models(after, before)
    turn = {Kind.ADDED: Kind.REMOVED, Kind.REMOVED: Kind.ADDED}
    assert kinds_by_id(back) == {name: turn.get(kind, kind) for name, kind in told.items()}


def foreign(path: Path, *, schema: str, moved: float, depth: float, rating: str, beams: int) -> Path:
    """A model that another program could have written, in mm: beams of an extruded rectangle in nested frames."""
    model = ifcopenshell.file(schema=schema)
    owner: dict[str, object] = {}
    if schema == "IFC2X3":
        person = model.createIfcPerson(FamilyName="nobody")
        who = model.createIfcPersonAndOrganization(person, model.createIfcOrganization(Name="none"))
        tool = model.createIfcApplication(who.TheOrganization, "1", "hand", "hand")
        owner = {"OwnerHistory": model.createIfcOwnerHistory(who, tool, None, "ADDED", None, None, None, 0)}

    def axes(*at: float) -> ifcopenshell.entity_instance:
        return model.createIfcAxis2Placement3D(model.createIfcCartesianPoint(at))

    guid = iter(f"0000000000000000000{number:03d}" for number in range(100))
    millimetre = model.createIfcSIUnit(None, "LENGTHUNIT", "MILLI", "METRE")
    context = model.createIfcGeometricRepresentationContext(None, "Model", 3, None, axes(0.0, 0.0, 0.0))
    model.createIfcProject(
        next(guid), owner.get("OwnerHistory"), "Foreign", RepresentationContexts=[context],
        UnitsInContext=model.createIfcUnitAssignment([millimetre]),
    )  # fmt: skip
    storey = model.createIfcLocalPlacement(None, axes(1000.0, 0.0, 0.0))
    for number in range(beams):
        profile = model.createIfcRectangleProfileDef(
            "AREA", "a profile", None, 100.0, depth if number == 1 else 200.0
        )
        upwards = model.createIfcDirection((0.0, 0.0, 1.0))
        solid = model.createIfcExtrudedAreaSolid(profile, axes(0.0, 0.0, 0.0), upwards, 3000.0)
        body = model.createIfcShapeRepresentation(context, "Body", "SweptSolid", [solid])
        place = model.createIfcLocalPlacement(
            storey, axes(0.0, 500.0 * number + (moved if number == 0 else 0.0), 0.0)
        )
        beam = model.createIfcBeam(
            next(guid), owner.get("OwnerHistory"), f"beam {number}", None, None, place,
            model.createIfcProductDefinitionShape(None, None, [body]), f"B-{number}",
        )  # fmt: skip
        value = model.createIfcLabel(rating if number == 2 else "R30")
        said = model.createIfcPropertySingleValue("FireRating", None, value, None)
        pset = model.createIfcPropertySet(
            next(guid), owner.get("OwnerHistory"), "Pset_BeamCommon", None, [said]
        )
        model.createIfcRelDefinesByProperties(next(guid), owner.get("OwnerHistory"), None, None, [beam], pset)
    model.write(str(path))
    return path


@pytest.mark.parametrize("schema", ["IFC2X3", "IFC4", "IFC4X3"])
def test_models_of_others_are_compared_by_what_they_hold(schema: str, tmp_path: Path) -> None:
    one = foreign(tmp_path / "one.ifc", schema=schema, moved=0, depth=200, rating="R30", beams=5)
    two = foreign(tmp_path / "two.ifc", schema=schema, moved=250, depth=240, rating="R60", beams=4)
    found = compared(one, two)
    told = {found.changes.key(row): list(found.changes.words(row)) for row in range(5)}
    assert told == {
        "beam 0": ["moved"],
        "beam 1": ["reshaped"],
        "beam 2": ["property changed"],
        "beam 3": [],
        "beam 4": ["removed"],
    }
    row = next(row for row in range(5) if found.changes.key(row) == "beam 0")
    assert found.changes.moved[row] == pytest.approx([0, 250, 0])  # mm, whatever the unit of the file
    assert found.changes.before.placement[0][:, 3] == pytest.approx([1000, 0, 0])


def test_a_model_without_elements_is_a_state_too(tmp_path: Path) -> None:
    none, two = (
        foreign(tmp_path / f"{n}.ifc", schema="IFC4", moved=0, depth=200, rating="R30", beams=n)
        for n in (0, 2)
    )
    for one, other, kind in ((none, two, Kind.ADDED), (two, none, Kind.REMOVED)):
        found = compared(one, other)
        assert found.changes.counts()[kind] == len(found.changes.changed) == 2
        write_comparison(found, tmp_path / "out")
    assert len(compared(none, none).changes) == 0


def test_units_of_a_model_make_no_difference_to_where_its_elements_are(tmp_path: Path) -> None:
    own = model_file(tmp_path, "own", RAFTERS)  # in metres
    state, base = read_model_state(own), shed(RAFTERS)
    order = {name: i for i, name in enumerate(snapshot(base).ids)}
    rows = [order[name] for name in state.ids]
    assert state.placement == pytest.approx(
        base.pieces.placement[rows], abs=0.02
    )  # the file rounds to 0.01 mm
    masses = [state.things[thing].mass for thing in state.thing]
    members = [
        i for i, key in enumerate(state.keys) if base.parts[base.pieces.part[rows[i]]].role is Role.COLUMN
    ]
    assert [masses[i] for i in members] == pytest.approx(
        [base.parts[base.pieces.part[rows[i]]].shape.mass for i in members]
    )


def spoiled(text: bytes, way: str) -> bytes:
    if way == "cut short":
        return text[: len(text) // 2]
    if way == "ring":  # a placement that is placed by itself
        line = next(each for each in text.splitlines() if b"IFCLOCALPLACEMENT(" in each)
        own = line.split(b"=")[0].strip()
        start, _, rest = line.partition(b"IFCLOCALPLACEMENT(")
        ring = start + b"IFCLOCALPLACEMENT(" + own + b"," + rest.split(b",", 1)[1]
        return text.replace(line, ring)
    if way == "nowhere":  # a coordinate beyond all numbers
        return text.replace(b"(1000.,0.,0.)", b"(1.E999,0.,0.)")
    return b"\x00\xff" * 500 if way == "bytes" else b""


@pytest.mark.parametrize("way", ["cut short", "ring", "nowhere", "bytes", "empty"])
def test_a_hostile_model_is_one_plain_error(way: str, tmp_path: Path) -> None:
    good = foreign(tmp_path / "good.ifc", schema="IFC4", moved=0, depth=200, rating="R30", beams=2)
    bad = tmp_path / "bad.ifc"
    bad.write_bytes(spoiled(good.read_bytes(), way))
    with pytest.raises(ComparisonError) as refusal:
        compared(good, bad)
    assert str(bad) in str(refusal.value)
    assert "\n" not in str(refusal.value)


def written(folder: Path, name: str, text: str) -> Path:
    path = folder / name
    path.write_text(text, encoding="utf-8")
    return path


def run(*words: object) -> tuple[int, str, str]:
    result = CliRunner().invoke(app, [str(word) for word in words])
    return result.exit_code, result.stdout, result.stderr


@pytest.fixture
def few_pictures(monkeypatch: pytest.MonkeyPatch) -> None:
    """Fewer snapshots of topics: each takes a while to draw."""
    monkeypatch.setattr(change_topics, "_MOST_SNAPSHOTS", 2)


@pytest.mark.usefixtures("few_pictures")
def test_files_of_a_comparison(tmp_path: Path) -> None:
    old, new = (written(tmp_path, f"{n}.yaml", text) for n, text in enumerate(EDITS["section"]))
    comparison = compared(old, new)
    paths = {path.name: path for path in write_comparison(comparison, tmp_path / "out")}
    assert list(paths) == ["changes.json", "changes.xlsx", "changes.bcf", "view.html"]
    data = json.loads(paths["changes.json"].read_text(encoding="utf-8"))
    there = changes("section")
    assert applied(piece_rows(there.before), data["pieces"]) == sorted(
        piece_rows(there.after), key=lambda row: row["id"]
    )
    mass = next(each for each in data["quantities"] if each["quantity"] == "mass")
    assert mass["after"] == pytest.approx(shed(EDITS["section"][1]).mass, abs=1e-3)
    book = openpyxl.load_workbook(paths["changes.xlsx"])
    assert book.sheetnames == ["Changes", "Quantities", "Frames and bays", "Marks", "Pieces", "About"]
    keys = [cell.value for cell in book["Pieces"]["A"]][1 : 1 + len(there.changed)]
    assert sorted(keys) == sorted(there.key(int(row)) for row in there.changed)
    texts, _ = unpacked(data_text(paths["view.html"].read_text(encoding="utf-8")))
    coloured = {texts["keys"][piece]: word for word, pieces in texts["changes"] for piece in pieces}
    assert sum(len(pieces) for _, pieces in texts["changes"]) == len(coloured)
    assert coloured.keys() == {there.key(int(row)) for row in there.changed if there.new[row] >= 0}
    assert coloured["2/rafter/A-B/1"] == "other section"
    assert all(coloured[there.key(int(row))] == "added" for row in there.having(Kind.ADDED))


def topics(path: Path) -> dict[str, set[str]]:
    """GlobalIds in each topic's viewpoint; every document is held against the published schema on the way."""
    found = {}
    with ZipFile(path) as archive:
        for name in archive.namelist():
            kind = bcf_schema.ROOTS["2.1"].get(name.split("/")[-1])
            if kind:
                assert bcf_schema.faults(archive.read(name), kind) == [], name
            if name.endswith("viewpoint.bcfv"):
                words = archive.read(name).decode().split('IfcGuid="')[1:]
                found[name.split("/")[0]] = {word[:22] for word in words}
    return found


@pytest.mark.usefixtures("few_pictures")
def test_topics_are_valid_hold_all_changed_pieces_and_keep_their_ids(tmp_path: Path) -> None:
    first = written(tmp_path, "1.yaml", RAFTERS)
    for number, edit in enumerate(("4.95 m]", "5.05 m]")):
        new = written(tmp_path, "2.yaml", RAFTERS.replace("4.7 m]", edit))
        write_comparison(compared(first, new), tmp_path / str(number))
    one, other = (topics(tmp_path / str(number) / "changes.bcf") for number in range(2))
    there = changes("bay")
    assert set.union(*one.values()) == {there.id(int(row)) for row in there.changed}
    assert sum(map(len, one.values())) == len(there.changed)
    assert set(one) == set(other)


def test_a_description_alone_is_compared_with_its_register(tmp_path: Path) -> None:
    file = written(tmp_path, "store.yaml", RAFTERS)
    code, _, err = run("compare", file)
    assert (code, "nothing was issued" in err) == (2, True)
    assert run("issue", file, "--status", "S3", "--reason", "first")[0] == 0
    code, out, _ = run("compare", file)
    assert code == 0
    assert "nothing changed" in out
    written(tmp_path, "store.yaml", RAFTERS.replace("[4.1 m,", "[4.1 m, 5.3 m,"))
    code, out, _ = run("compare", file, "--json")
    data = json.loads(out)
    # A line is put in: under the register the end wall keeps its label and its pieces their ids.
    assert data["counts"]["removed"] < 30
    assert data["counts"]["added"] > 0
    columns = {
        row["key"]: row["kinds"]
        for row in data["pieces"]
        if "/column/" in row["key"] and row["key"].count("/") == 2
    }
    assert columns["3/column/A"] == ["moved"]
    again = run("compare", tmp_path / "store.register", file, "--json")
    assert json.loads(again[1])["pieces"] == data["pieces"]


def test_what_if_compares_with_what_it_would_be(tmp_path: Path) -> None:
    file = written(tmp_path, "store.yaml", RAFTERS)
    code, out, _ = run("compare", file, "--set", "building.bays=[4.1 m, 4.95 m]", "--json")
    assert code == 0
    data = json.loads(out)
    assert data["pieces"] == json.loads(json.dumps(changed_rows(changes("bay"))))
    code, out, _ = run("compare", file, "--set", "building.bays=[4.1 m, 4.95 m]")
    assert "all 2 columns of line 3: moved by y +250 mm" in out


def test_two_projects_are_met_by_key(tmp_path: Path) -> None:
    old = written(tmp_path, "old.yaml", RAFTERS)
    new = written(tmp_path, "new.yaml", EDITS["bay"][1].replace("3d7b01", "3d7b99"))
    found = compared(old, new)
    assert found.changes.counts() == changes("bay").counts()
    assert any("two projects" in note for note in found.notes)


@pytest.mark.parametrize(
    ("words", "says"),
    [
        (("store.yaml", "other.yaml", "--set", "building.eaves=4 m"), "--set is for one description"),
        (("store.yaml", "model.ifc"), "model.ifc: no such file"),
        (("model.ifc",), "compared with a second file"),
        (("none.register", "store.yaml"), "there is no such file"),
        (("store.yaml", "none.yaml"), "there is no such file"),
        (("store.yaml", "--set", "building.eavs=4 m"), "eavs"),
    ],
)
def test_what_cannot_be_compared_is_one_plain_error(
    words: tuple[str, ...], says: str, tmp_path: Path
) -> None:
    written(tmp_path, "store.yaml", RAFTERS)
    written(tmp_path, "other.yaml", RAFTERS)
    code, out, err = run(
        "compare", *(tmp_path / word if "." in word and "=" not in word else word for word in words)
    )
    assert (code, out) == (2, "")
    assert says in err
    assert "Traceback" not in err


def test_a_build_under_a_register_tells_what_changed_and_when(tmp_path: Path) -> None:
    file, out = written(tmp_path, "store.yaml", RAFTERS), tmp_path / "out"
    words = ("build", file, "--out", out, "--only", "schedules,view", "--no-checks", "-q")
    assert run(*words)[0] == 0
    assert "revision" not in (out / "members.csv").read_text(encoding="utf-8").splitlines()[0]
    assert "Changes" not in openpyxl.load_workbook(out / "schedule.xlsx").sheetnames
    assert run("issue", file, "--status", "S3", "--reason", "first")[0] == 0
    written(tmp_path, "store.yaml", EDITS["section"][1])
    assert run(*words)[0] == 0
    rows = [line.split(",") for line in (out / "members.csv").read_text(encoding="utf-8").splitlines()]
    revisions = {row[0]: row[-1] for row in rows[1:]}
    assert rows[0][-1] == "revision"
    assert (revisions["R1"], revisions["GR1"]) == ("P02", "P01")
    for name in ("plates.csv", "assemblies.csv"):
        assert (out / name).read_text(encoding="utf-8").splitlines()[0].endswith("revision")
    sheet = openpyxl.load_workbook(out / "schedule.xlsx")["Changes"]
    assert "all 2 rafters of line 2: IPE 220 became IPE 240" in [cell.value for cell in sheet["E"]]
