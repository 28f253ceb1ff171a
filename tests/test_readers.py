"""Models of other trades from their files: every schema, placed alike, and whatever is wrong with a file in words."""

from __future__ import annotations

import math
import re
import sys
from pathlib import Path
from typing import Any

import ifcopenshell
import ifcopenshell.validate
import numpy as np
import pytest
import services_model
from cast import described, shed_of
from ifcopenshell.util import geolocation
from services_file import Bend, Run, Setting, services_text

from shedbim.checks.grouping import findings_of
from shedbim.checks.others.bodies import body_of_mesh
from shedbim.checks.others.placing import placed
from shedbim.checks.others.trades import trades
from shedbim.checks.subject import Subject
from shedbim.limits import criteria
from shedbim.model.other_trades import OtherModel
from shedbim.readers import other_models, read_other, supervising

DUCT = Run("IfcDuctSegment", "RIGIDSEGMENT", "duct", (0.4, 0.3), (3.0, 1.0, 5.0), (3.0, 9.0, 5.5))
PIPE = Run("IfcPipeSegment", "RIGIDSEGMENT", "pipe", (0.2,), (1.0, 2.0, 3.0), (7.0, 2.5, 3.0))
BEND = Bend("IfcDuctFitting", "BEND", "bend", (0.5,), 0.5, (2.0, 3.0, 4.0), (0, 1, 0), (0, 0, -1))
THREE = (DUCT, PIPE, BEND)


def read(folder: Path, text: str | bytes, name: str = "services.ifc") -> OtherModel:
    path = folder / name
    path.write_bytes(text.encode() if isinstance(text, str) else text)
    return read_other(path)


def said(model: OtherModel) -> str:
    """The one remark of a model that was not read."""
    (remark,) = model.remarks
    assert remark.code == "other-unread"
    return remark.says


def points_in_shed(model: OtherModel) -> list[np.ndarray]:
    """The corners of the least boxes round each element, in the axes of the seed store, by name."""
    laid = placed(model, shed_of("seed-store"))
    assert laid.remarks == ()
    found = []
    for k in np.argsort([each.name for each in model.elements]):
        place = laid.placement[k]
        points = laid.model.meshes[model.mesh[k]].points @ place[:, :3].T + place[:, 3]
        found.append(np.array([points.min(axis=0), points.max(axis=0)]))
    return found


SETTINGS = {
    "metres": Setting(),
    "another origin and turn": Setting(origin=(512_345.0, 5_403_000.0, 212.35), turn=math.radians(14.0)),
    "millimetres": Setting(milli=True),
    "millimetres, scale between the units": Setting(milli=True, scale=0.001),
    "millimetres, scale of 1": Setting(milli=True, scale=1.0),
    "IFC4X3": Setting(schema="IFC4X3_ADD2", turn=math.radians(-75.0)),
    "IFC2X3": Setting(schema="IFC2X3", turn=math.radians(30.0)),
}


@pytest.mark.parametrize("name", SETTINGS)
def test_however_a_file_is_written_its_elements_lie_at_one_place_in_the_shed(
    tmp_path: Path, name: str
) -> None:
    setting = SETTINGS[name]
    boxes = points_in_shed(read(tmp_path, services_text(THREE, setting, "x")))
    bend, duct, pipe = boxes
    # The duct runs from (3, 1, 5) to (3, 9, 5.5): its section of 400 by 300 is square to it.
    tilt = math.atan2(0.5, 8.0)
    exact = [
        (2800.0, 1000.0 - 150.0 * math.sin(tilt), 5000.0 - 150.0 * math.cos(tilt)),
        (3200.0, 9000.0 + 150.0 * math.sin(tilt), 5500.0 + 150.0 * math.cos(tilt)),
    ]
    np.testing.assert_allclose(duct, exact, atol=0.01)
    across = 100.0 * np.array([0.5, 6.0]) / math.hypot(0.5, 6.0)
    exact = [
        (1000.0 - across[0], 2000.0 - across[1], 2900.0),
        (7000.0 + across[0], 2500.0 + across[1], 3100.0),
    ]
    np.testing.assert_allclose(pipe, exact, atol=1.0)
    np.testing.assert_allclose(bend, [(1750.0, 3000.0, 3500.0), (2250.0, 3750.0, 4250.0)], atol=3.0)


@pytest.mark.parametrize("name", ["another origin and turn", "IFC4X3"])
def test_the_place_on_the_map_is_that_of_the_general_library(tmp_path: Path, name: str) -> None:
    path = tmp_path / "x.ifc"
    path.write_text(services_text(THREE, SETTINGS[name], "x"), encoding="utf-8")
    place = read_other(path).place
    assert place is not None
    model = ifcopenshell.open(str(path))
    for local in ((0.0, 0.0, 0.0), (10.0, -3.0, 7.0)):
        turned = complex(local[0], local[1]) * np.exp(1j * place.rotation)
        ours = (
            place.easting / 1e3 + turned.real,
            place.northing / 1e3 + turned.imag,
            place.level / 1e3 + local[2],
        )
        np.testing.assert_allclose(ours, geolocation.auto_xyz2enh(model, *local), atol=1e-6)


def test_classes_of_ifc2x3_are_told_by_their_types(tmp_path: Path) -> None:
    model = read(tmp_path, services_text(THREE, SETTINGS["IFC2X3"], "x"))
    assert {each.name: each.kind for each in model.elements} == {
        "duct": "IfcDuctSegment",
        "pipe": "IfcPipeSegment",
        "bend": "IfcDuctFitting",
    }
    assert all(each.is_service for each in model.elements)


def test_curved_bodies_come_out_with_their_volume(tmp_path: Path) -> None:
    model = read(tmp_path, services_text(THREE, Setting(), "x"))
    exact = {
        "duct": 0.12 * math.hypot(8.0, 0.5),
        "pipe": math.pi * 0.01 * math.hypot(6.0, 0.5),
        "bend": math.pi * 0.0625 * math.pi / 2 * 0.5,  # Pappus: area times the way of its middle
    }
    for k, element in enumerate(model.elements):
        body = body_of_mesh(model.meshes[model.mesh[k]])
        assert body.closed
        # Round sections are inscribed: a 32-gon is less than its circle by 0.64 %.
        assert 0.99 < body.solid.volume() / 1e9 / exact[element.name] < 1.0001


TEXT = services_text(THREE, Setting(), "x")
#: What stands before the first element.
HALF = TEXT[: TEXT.rindex("\n", 0, TEXT.index("IFCDUCTSEGMENT"))]


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("", "the file is empty"),
        ("a letter, no model", "no IFC model"),
        (bytes(range(256)) * 40, "no IFC model"),
        (b"PK\x03\x04" + b"0" * 400, "no IFC model"),
        (HALF, "cut short"),
        (HALF + "\nENDSEC;\nEND-ISO-10303-21;\n", "no elements with a shape"),
        (TEXT.replace("'IFC4'", "'IFC9'"), "IFC9"),
        (services_text((), Setting(), "x"), "no elements with a shape"),
    ],
    ids=["empty", "letter", "bytes", "zip", "cut", "cut and closed", "schema", "nothing"],
)
def test_a_file_that_is_no_model_ends_in_words(tmp_path: Path, text: str | bytes, message: str) -> None:
    model = read(tmp_path, text)
    assert model.elements == ()
    assert message in said(model)
    assert "services.ifc" in said(model)


def test_a_file_that_is_not_there_or_is_a_folder_ends_in_words(tmp_path: Path) -> None:
    assert "no such file" in said(read_other(tmp_path / "none.ifc"))
    assert "no file" in said(read_other(tmp_path))


def test_a_file_too_large_is_not_opened(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(other_models, "MOST_BYTES", 1000)
    monkeypatch.setattr(other_models, "supervise", lambda *given: pytest.fail("it was opened"))
    assert "at most" in said(read(tmp_path, TEXT))


@pytest.mark.parametrize(
    ("pattern", "by"),
    [
        (
            r"IFCRECTANGLEPROFILEDEF\(\.AREA\.,\$,(#\d+),0\.4,0\.3\)",
            r"IFCRECTANGLEPROFILEDEF(.AREA.,$,\1,0.,0.)",
        ),
        (r"IFCREVOLVEDAREASOLID\(#\d+", "IFCREVOLVEDAREASOLID(#99999"),
        (r"IFCREVOLVEDAREASOLID", "IFCNOSUCHTHING"),
    ],
    ids=["no size", "nothing there", "no class"],
)
def test_of_an_element_without_a_sound_shape_the_rest_is_read(tmp_path: Path, pattern: str, by: str) -> None:
    text, count = re.subn(pattern, by, TEXT)
    assert count == 1
    model = read(tmp_path, text)
    assert len(model.elements) == 2
    assert "1 of the 3 elements" in said(model)


def test_a_placement_within_itself_ends_in_words(tmp_path: Path) -> None:
    number, _ = re.findall(r"#(\d+)=IFCLOCALPLACEMENT\(#(\d+),", TEXT)[-1]
    text = re.sub(rf"#{number}=IFCLOCALPLACEMENT\(#\d+,", f"#{number}=IFCLOCALPLACEMENT(#{number},", TEXT)
    model = read(tmp_path, text)
    assert len(model.elements) == 2
    assert "1 of the 3 elements" in said(model)


#: A stand-in for the process that meshes: it ends, or hangs, at the elements it is told to.
_STAND_IN = """
import os, sys, time
import shedbim.readers.meshing as meshing
bad, how = {bad}, "{how}"
plain = meshing._batch
def batch(model, elements, chosen):
    if bad & set(chosen):
        if how == "hang":
            time.sleep(60)
        os._exit(139)
    return plain(model, elements, chosen)
meshing._batch = batch
if how == "open":
    os._exit(139)
meshing.main(sys.argv[1], sys.argv[2], *map(int, sys.argv[3:]))
"""


def stand_in(monkeypatch: pytest.MonkeyPatch, folder: Path, bad: set[int], how: str) -> None:
    script = folder / "meshes.py"
    script.write_text(_STAND_IN.format(bad=bad or "set()", how=how), encoding="utf-8")
    monkeypatch.setattr(supervising, "COMMAND", (sys.executable, str(script)))


@pytest.mark.parametrize("how", ["crash", "hang"])
def test_an_element_that_ends_or_stops_the_library_is_left_out_alone(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, how: str
) -> None:
    stand_in(monkeypatch, tmp_path, {1}, how)
    monkeypatch.setattr(supervising, "PATIENCE", (30.0, 8.0, 8.0))
    model = read(tmp_path, TEXT)
    assert len(model.elements) == 2
    assert "1 of the 3 elements" in said(model)


def test_a_library_that_ends_over_the_file_ends_in_words(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    stand_in(monkeypatch, tmp_path, set(), "open")
    assert "ended over it" in said(read(tmp_path, TEXT))


def test_too_many_that_end_it_stop_the_reading_and_what_was_read_stays(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    stand_in(monkeypatch, tmp_path, {1, 2}, "crash")
    monkeypatch.setattr(supervising, "_MOST_STARTS", 2)
    model = read(tmp_path, TEXT)
    assert len(model.elements) == 1
    assert "too many" in said(model)
    assert "1 of its 3 elements" in said(model)


def test_a_scale_that_no_unit_explains_is_refused(tmp_path: Path) -> None:
    model = read(tmp_path, services_text(THREE, Setting(scale=0.3048), "x"))
    assert [each.code for each in model.remarks] == ["other-unplaced"]
    assert model.elements == ()
    assert "0.3048" in model.remarks[0].says


def test_axes_that_are_moved_twice_are_refused(tmp_path: Path) -> None:
    number = re.search(r"IFCGEOMETRICREPRESENTATIONCONTEXT\(\$,'Model',3,1\.E-05,#(\d+)", TEXT)
    assert number is not None
    placement = re.search(rf"#{number[1]}=IFCAXIS2PLACEMENT3D\(#(\d+)", TEXT)
    assert placement is not None
    moved = f"#{placement[1]}=IFCCARTESIANPOINT((9.,0.,0.));"
    text = re.sub(rf"#{placement[1]}=IFCCARTESIANPOINT\(.*?\);", moved, TEXT)
    assert "world coordinate system" in read(tmp_path, text).remarks[0].says


def test_without_a_place_on_the_map_there_is_none(tmp_path: Path) -> None:
    model = read(tmp_path, services_text((DUCT,), Setting(crs=None), "x"))
    assert model.place is None
    assert model.remarks == ()


def test_nothing_is_imported_from_the_folder_that_the_user_is_in(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    for name in ("json", "numpy", "ifcopenshell", "shedbim"):
        (tmp_path / f"{name}.py").write_text("raise SystemExit('imported from the folder')", encoding="utf-8")
    monkeypatch.chdir(tmp_path)
    assert len(read(tmp_path, services_text((DUCT,), Setting(), "x")).elements) == 1


def test_progress_is_told(tmp_path: Path) -> None:
    lines: list[str] = []
    path = tmp_path / "x.ifc"
    path.write_text(TEXT, encoding="utf-8")
    read_other(path, lines.append)
    assert lines == ["x.ifc: 3 of 3 elements"]


def test_names_are_read_as_they_are(tmp_path: Path) -> None:
    hostile = "<img src=x> 'Lüftung' =1+1 {value}"
    model = read(
        tmp_path,
        services_text(
            (Run("IfcDuctSegment", "RIGIDSEGMENT", hostile, (0.3,), (0, 0, 0), (1, 0, 0)),), Setting(), "x"
        ),
    )
    assert [each.name for each in model.elements] == [hostile]


# The model that comes with the presets.


def test_the_services_of_the_seed_store_are_what_their_script_makes() -> None:
    assert services_model.FILE.read_text(encoding="utf-8") == services_model.model_text()


@pytest.mark.filterwarnings(
    # The library does not close the file it reads a schema's rules from.
    r"ignore:Exception ignored in. <_io.FileIO name='.*ifcopenshell:pytest.PytestUnraisableExceptionWarning"
)
def test_they_are_valid() -> None:
    logger: Any = ifcopenshell.validate.json_logger()
    ifcopenshell.validate.validate(ifcopenshell.open(str(services_model.FILE)), logger, express_rules=True)
    assert logger.statements == []


def test_they_meet_the_steel_where_they_were_made_to() -> None:
    model = read_other(services_model.FILE)
    assert len(model.elements) == len(services_model.ELEMENTS)
    assert model.remarks == ()
    shed = shed_of("seed-store")
    subject = Subject(shed, described("seed-store").checks.criteria, (model,))
    found = {each.places[0].others[0].name: each for each in findings_of(subject, trades(subject))}
    assert {name: each.code.name for name, each in found.items()} == {
        "Extract air 1": "other-overlap",
        "Gas supply": "other-overlap",
        "Sprinkler main": "other-too-near",
        "Cable tray 1": "other-too-near",
    }
    # The extract air passes the frames on lines 3 to 7, and cuts one diagonal of each.
    keys = [shed.pieces.keys[k] for k in found["Extract air 1"].pieces]
    assert sorted({key.split("/")[0] for key in keys}) == ["3", "4", "5", "6", "7"]
    assert criteria().limit("clear_of_pipes")[0] == found["Sprinkler main"].limit
