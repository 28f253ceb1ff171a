"""What-if: fields set for one run, as if they were written in the file, and never taken for the file's own."""

from __future__ import annotations

import hashlib
import json
import re
import time
from contextlib import suppress
from math import degrees
from pathlib import Path
from xml.etree import ElementTree

import pytest
from cast import text_of
from hypothesis import given
from hypothesis import strategies as st
from ruamel.yaml import YAML
from typer.testing import CliRunner, Result

from shedbim import DescriptionError, read_text
from shedbim.cli.commands import app
from shedbim.description.nodes import node_tree
from shedbim.description.settings import MOST_SETTINGS, with_settings
from shedbim.description.source import MOST_BYTES
from shedbim.pipeline import build, default_folder, digest

TEXT = text_of("lean")


def faults(*settings: str, text: str = TEXT) -> list[str]:
    """The faults of a description with settings, as they are told."""
    with pytest.raises(DescriptionError) as refusal:
        read_text(text, "lean.yaml", settings)
    return [str(fault) for fault in refusal.value.faults]


# --- what can be set ----------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("path", "value"),
    [
        ("building.roof.pitch", "8 deg"),
        ("building.roof", {"form": "gable", "pitch": "9 deg"}),
        ("building.bays", ["6 m", "2 x 7 m"]),
        ("building.bays[2]", "7.9 m"),
        ("project.number", "T=4: x"),
        ("connections.bases.thickness", "31 mm"),
        ("purlins.sag_bars", "1"),
    ],
)
def test_a_field_set_is_as_if_it_were_written_in_the_file(path, value):
    """Against the same change made to the parsed text by a general YAML library."""
    data = YAML(typ="safe", pure=True).load(TEXT)
    *groups, last = re.findall(r"\w+", path)
    inner = data
    for name in groups:
        inner = inner.setdefault(name, {})
    inner[int(last) if isinstance(inner, list) else last] = value
    written = read_text(json.dumps(data))
    assert read_text(TEXT, settings=[f"{path}={json.dumps(value)}"]) == written
    if isinstance(value, str) and ":" not in value:
        assert read_text(TEXT, settings=[f" {path} = {value} "]) == written
    assert written != read_text(TEXT)


def test_settings_are_laid_one_over_the_other():
    bays = read_text(TEXT, settings=["building.bays=[6 m, 3 x 7 m]", "building.bays[1]=8 m"]).building.bays
    assert bays == (6000.0, 8000.0)


def test_a_group_that_is_empty_in_the_file_can_be_filled():
    text = TEXT + "\nconnections:\n"
    description = read_text(text, settings=["connections.bases.thickness=31 mm"])
    assert description.connections.bases.thickness == 31.0


def test_the_tree_given_stays_as_it_is():
    tree = node_tree(TEXT, "lean.yaml")
    before = tree.root.value
    with_settings(tree, ["building.bays[0]=6 m", "connections.bases.thickness=31 mm", "nonsense"])
    assert (tree.root.value, tree.faults) == (before, [])


# --- what is refused ----------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("setting", "told"),
    [
        ("building.roof.pitch=80 deg", "--set building.roof.pitch: out of bounds.*80 deg\n.*1 deg to 45 deg"),
        ("building.roof.ptich=8 deg", "--set building.roof.ptich: there is no such field here\n.*nearest: pitch"),
        ("bulding.eaves=5 m", "--set bulding.eaves: bulding: there is no such field here\n.*nearest: building"),
        ("frames.columns.section=IPE 3000", "--set frames.columns.section: no such section.*nearest: IPE 600"),
        ("frames.roof={system: rafter, section: IPE 3000}", r"--set frames.roof:1:27: frames.roof.section: no such"),
        ("building.bays=[6 m, 99 m]", r"--set building.bays:1:7: building.bays\[1\]: out of bounds"),
        ("building.bays[4]=6 m", r"--set building.bays\[4\]: no item 4: there are 4.* to building.bays\[3\]"),
        ("building.eaves[0]=6 m", r"--set building.eaves\[0\]: not a list"),
        ("building.letters[0]=Q", r"--set building.letters\[0\]: not a list\n.*whole list: building.letters="),
        ("building.eaves.high=6 m", "--set building.eaves.high: building.eaves: a value or a list, which has"),
        ("building.bays.first=6 m", "--set building.bays.first: building.bays: a value or a list"),
        ("building.eaves", "--set building.eaves: no value: there is no = in it"),
        ("building.eaves=", "--set building.eaves: nothing is given after ="),
        ("building.eaves=#6 m", "--set building.eaves: the text is empty"),
        ("building.eaves=null", "--set building.eaves: nothing is given"),
        ("building.eaves=[", r"--set building.eaves:1:\d: building.eaves: not readable as YAML"),
        ("building.eaves=&a 5 m", "--set building.eaves:1:1: building.eaves: an anchor"),
        ("building.eaves=*a", "--set building.eaves.*: an alias|not readable as YAML"),
        ("building.eaves=!!python/name:os.system 5", "--set building.eaves:1:1: building.eaves: a tag"),
        ("building.eaves=5 m\nproject: {}", "--set building.eaves: a line break"),
        ("building.eaves=5\x1b[31m m", r"--set building.eaves:1:2: building.eaves: a control character.*U\+001B"),
        ("=5 m", "--set : not the path of a field"),
        ("a..b=5 m", r"--set a\.\.b: not the path of a field"),
        ("../../etc=5 m", "not the path of a field"),
        ("building.bays[-1]=5 m", "not the path of a field"),
        ("\x1b[31m=5 m", r"--set \\u001b\[31m: not the path of a field"),
        (".".join("a" * 17) + "=1", "nested more than 16 deep"),
        ("building.eaves=" + "[" * 50, "--set building.eaves:1:17: building.eaves: nested more than 16 deep"),
    ],
)  # fmt: skip
def test_what_is_wrong_with_a_setting_is_told_at_its_place(setting, told):
    found = faults(setting)
    assert any(re.match(f"(--set .*)?({told})", fault, re.DOTALL) for fault in found), found
    assert not any("lean.yaml" in fault for fault in found)
    assert not any(letter in fault for fault in found for letter in "\x1b\r")


def test_a_field_is_set_once():
    assert "set twice" in faults("building.eaves=5 m", "building.eaves=6 m")[0]


def test_faults_of_file_and_settings_are_told_together():
    found = faults("building.eaves=99 m", "x", text=TEXT.replace("spacing: 1.4 m", "spacing: 99 m"))
    places = [fault.split(": ")[0] for fault in found]
    assert places[:2] == ["--set x", "--set building.eaves"]
    assert len(places) == 3


def test_a_rule_that_a_setting_breaks_names_the_setting():
    (fault,) = faults("building.numbers=[a, b]")
    assert fault.startswith("--set building.numbers: ")


def test_settings_that_cannot_be_built_name_the_setting(tmp_path):
    (tmp_path / "lean.yaml").write_text(TEXT)
    with pytest.raises(DescriptionError) as refusal:
        build(
            tmp_path / "lean.yaml",
            tmp_path / "out",
            settings=["connections.bolts.size=M36", "purlins.lift=2 mm"],
        )
    assert all(fault.file.startswith("--set ") or fault.line for fault in refusal.value.faults)
    assert not (tmp_path / "out").exists()


@pytest.mark.parametrize(
    "settings",
    [
        ["building.eaves=5 m"] * (MOST_SETTINGS + 1),
        ["building.eaves=" + "x" * MOST_BYTES],
        ["building.eaves=" + "[" * (MOST_BYTES // 2)],
        ["building.bays=[" + "1 m," * 60_000 + "]"],
        ["building.bays[9999]=5 m"],
        ["a" * 100_000 + "=5 m"],
        [".".join("a" * 100_000) + "=5 m"],
        [f"f{number}=1" for number in range(MOST_SETTINGS)],
    ],
    ids=["many", "long", "deep", "many items", "far item", "long name", "long path", "many names"],
)
def test_hostile_settings_are_refused_in_bounded_time(settings):
    """The bound is that of hostile files; most of these take a few hundredths of a second."""
    start = time.perf_counter()
    found = faults(*settings)
    assert time.perf_counter() - start < 10
    assert max(map(len, found)) < 1000


@given(st.text(max_size=60), st.sampled_from(["", "building.eaves=", "building.bays[0]=", "building.roof="]))
def test_whatever_a_setting_says_it_is_read_or_refused(text, start):
    with suppress(DescriptionError):  # and nothing else
        read_text(TEXT, settings=[start + text])


# --- what the outputs say -----------------------------------------------------------------------------------


@pytest.fixture
def lean(tmp_path, monkeypatch) -> Path:
    monkeypatch.chdir(tmp_path)
    path = tmp_path / "lean.yaml"
    path.write_text(TEXT, encoding="utf-8")
    return path


def run(*words: str) -> Result:
    return CliRunner().invoke(app, words)


def test_a_build_says_what_was_set_and_leaves_the_file_s_own_outputs(lean):
    plain = run("build", "lean.yaml", "--only", "summary", "--no-checks")
    assert plain.exit_code == 0, plain.output
    own = (lean.parent / "outputs" / "lean" / "summary.json").read_bytes()
    setting = "building.roof.pitch=8 deg"
    done = run(
        "build", "lean.yaml", "--only", "summary,model,mesh,view,workbook", "--no-checks", "--set", setting
    )
    assert done.exit_code == 0, done.output
    assert f"Not as in the description file, but set for this run: {setting}" in done.output
    assert (lean.parent / "outputs" / "lean" / "summary.json").read_bytes() == own
    folder = lean.parent / "outputs" / "lean-what-if"
    told = json.loads((folder / "summary.json").read_text())
    assert told["settings"] == [setting]
    assert told["mass_kg"] != json.loads(own)["mass_kg"]
    assert json.loads(own)["settings"] == []
    # The digest as anyone can work it out: the bytes of the file, a zero byte, the setting.
    expected = hashlib.sha256(TEXT.encode() + b"\0" + setting.encode()).hexdigest()
    assert told["description_sha256"] == expected
    assert json.loads(own)["description_sha256"] == hashlib.sha256(TEXT.encode()).hexdigest()
    for name in ("model.ifc", "model.glb", "view.html"):
        assert b"set for this run: " + setting.encode() in (folder / name).read_bytes(), name


def test_a_digest_tells_settings_apart():
    digests = [
        digest("a: 1"), digest("a: 1", ["b=1"]), digest("a: 1", ["b=1", "c=2"]), digest("a: 1", ["c=2", "b=1"]),
        digest("a: 1b=1"), digest("a: 1\nb=1"),
    ]  # fmt: skip
    assert len(set(digests)) == len(digests)


def test_the_roof_of_a_build_has_the_pitch_that_was_set(lean):
    result = build(lean, lean.parent / "out", settings=["building.roof.pitch=8 deg"], outputs=["summary"])
    assert degrees(result.description.building.roof.pitch) == pytest.approx(8)
    assert result.imprint.settings == ("building.roof.pitch=8 deg",)


def test_a_picture_says_what_was_set(lean):
    done = run("picture", "lean.yaml", "--out", "p.svg", "--set", "building.eaves=5 m", "--width", "900")
    assert done.exit_code == 0, done.output
    title = ElementTree.parse(lean.parent / "p.svg").find("{http://www.w3.org/2000/svg}title")
    assert title is not None
    assert title.text is not None
    assert title.text.endswith(" · what if building.eaves=5 m")
    refused = run("picture", "lean.yaml", "--set", "building.eves=5 m")
    assert refused.exit_code == 2
    assert "nearest: eaves" in refused.output
    assert default_folder(lean, ["x=1"]) == Path("outputs/lean-what-if")
