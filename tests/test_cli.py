"""The command line and the public door: what they print, how they end, and what they import."""

from __future__ import annotations

import hashlib
import json
import pickle
import re
import shlex
import subprocess
import sys
import tomllib
from collections.abc import Callable
from functools import cache
from pathlib import Path

import jsonschema
import pytest
from ruamel.yaml import YAML
from typer.main import get_command

import shedbim
from shedbim import errors, outputs, pipeline
from shedbim.checks.checking import check
from shedbim.checks.finding import Finding
from shedbim.checks.table import CHECKS
from shedbim.cli import commands, main, speech
from shedbim.cli.guard import EXIT_CODES
from shedbim.cli.tables import show_table
from shedbim.description import presets
from shedbim.description.listing import all_fields
from shedbim.expand import expand
from shedbim.model import levels
from shedbim.model.shed import Pieces, Shed
from shedbim.sections.catalogue import designations, families
from shedbim.writers import ifc
from shedbim.writers.imprint import CAUTIONS
from shedbim.writers.summary_keys import KEYS

STAMP = ("--time-stamp", "2024-05-17T09:30:00Z")

#: What takes long to import, or is heavy for help that should come at once.
HEAVY = (
    "numpy",
    "scipy",
    "pydantic",
    "ruamel",
    "rich",
    "xlsxwriter",
    "manifold3d",
    "ifcopenshell",
    "trimesh",
)

BARN = """\
# A small [red]shed[/] with unequal bays,
# spans and pitches. And more.
project: {id: 5f0c9e3a-1111-4222-8333-123456789abc, name: "Grün [bold]Store[/] =1+1", number: 2417}
building:
  spans: [14 m, 9 m]
  bays: [5 m, 6 m, 4.5 m]
  eaves: 5 m
  roof: {form: gable, pitch: 8 deg, pitch_right: 11 deg}
frames:
  columns: {section: HEB 260}
  roof: {system: rafter, section: IPE 330}
  gables: {system: rafter, rafter: IPE 240, posts: IPE 200}
purlins: {section: Z 200x75x20x2.5, spacing: 1.7 m}
rails: {section: C 200x75x20x2.0}
bracing:
  roof: {pattern: crossed, section: L 80x80x8}
  walls: {pattern: crossed, section: L 90x90x8}
"""


class Shell:
    """Runs the command line in this process, in a folder of its own, with what it prints."""

    def __init__(self, folder: Path, monkeypatch, capsys) -> None:
        self.folder = folder
        self._patch, self._capture = monkeypatch, capsys
        monkeypatch.chdir(folder)

    def __call__(self, *arguments: str) -> tuple[int, str, str]:
        self._patch.setattr(sys, "argv", ["shedbim", *arguments])
        with pytest.raises(SystemExit) as left:
            main()
        out, err = self._capture.readouterr()
        return left.value.code or 0, out, err

    def ok(self, *arguments: str) -> str:
        code, out, err = self(*arguments)
        assert (code, err) == (0, "")
        return out

    def contents(self, folder: str) -> dict[str, bytes]:
        return {path.name: path.read_bytes() for path in sorted((self.folder / folder).glob("*"))}


@cache
def expanded(description: bytes) -> Shed:
    """The shed of a description as it was pickled, expanded once for all tests."""
    return expand(pickle.loads(description))


#: What the checks of a shed found, and what they told as they went, by its pieces, its notes and the criteria.
LOOKED_AT: dict[tuple[Pieces, tuple[str, ...], bytes], tuple[list[Finding], list[str]]] = {}


def checked(
    shed: Shed, criteria: object, *, others: tuple[object, ...], tell: Callable[[str], None]
) -> list[Finding]:
    """Check as the pipeline does, each shed once for all tests."""
    if others:
        return list(check(shed, criteria, others=others, tell=tell))
    which = (shed.pieces, shed.notes, pickle.dumps(criteria))
    if which not in LOOKED_AT:
        told: list[str] = []
        LOOKED_AT[which] = list(check(shed, criteria, tell=told.append)), told
    found, told = LOOKED_AT[which]
    for name in told:
        tell(name)
    return found


@pytest.fixture
def shell(tmp_path, monkeypatch, capsys) -> Shell:
    monkeypatch.setattr(pipeline, "expand", lambda description: expanded(pickle.dumps(description)))
    monkeypatch.setattr(pipeline, "check", checked)
    (tmp_path / "barn.yaml").write_text(BARN, encoding="utf-8")
    return Shell(tmp_path, monkeypatch, capsys)


@pytest.fixture
def preset(tmp_path, monkeypatch) -> str:
    """The name of a preset that exists for the test only."""
    folder = tmp_path / "presets"
    folder.mkdir()
    text = BARN.replace("project: {id: 5f0c9e3a-1111-4222-8333-123456789abc,", "project:\n  id: " + "0" * 8)
    text = text.replace("0" * 8 + ' name: "', '5f0c9e3a-1111-4222-8333-123456789abc\n  name: "')
    text = text.replace('", number: 2417}', '"\n  number: 2417')
    (folder / "small-barn.yaml").write_text(text, encoding="utf-8")
    monkeypatch.setattr(presets, "_FOLDERS", (folder,))
    return "small-barn"


# --- the public door --------------------------------------------------------------------------------


def test_every_name_of_the_public_door_is_there_and_no_other():
    assert shedbim.__all__ == sorted(set(shedbim.__all__))
    for name in shedbim.__all__:
        assert getattr(shedbim, name) is not None
        assert name in dir(shedbim)
    assert set(shedbim.__all__) == set(shedbim._LATE) | set(errors.__all__) | {"__version__"}
    with pytest.raises(AttributeError, match="'nothing'"):
        _ = shedbim.nothing


def test_the_door_gives_what_type_checkers_see():
    seen = re.findall(
        r"from (shedbim\.\S+) import \(?([^)]*?)\)?\n(?=    from|\n)", Path(shedbim.__file__).read_text()
    )
    listed = {}
    for module, names in seen:
        for name in filter(None, (each.strip() for each in names.split(","))):
            there, _, here = name.partition(" as ")
            listed[here or there] = (module, there)
    assert {name: listed[name] for name in shedbim._LATE} == shedbim._LATE


def test_the_stages_can_be_run_one_by_one(tmp_path):
    description = shedbim.read_text(BARN)
    shed = shedbim.expand_description(description)
    assert isinstance(shed, shedbim.Shed)
    files = shedbim.write_schedules(shed, tmp_path)
    assert list(files) == [row.name for row in outputs.OUTPUTS if row.group == "schedules"]
    assert shedbim.write_summary(shed, tmp_path)["summary"].exists()
    assert shedbim.write_model(shed, tmp_path)["model"].read_bytes().startswith(b"ISO-10303-21;")


def test_the_version_is_the_one_of_the_package():
    project = tomllib.loads((Path(__file__).parents[1] / "pyproject.toml").read_text())["project"]
    assert project["version"] == shedbim.__version__


# --- start ------------------------------------------------------------------------------------------


def loaded(code: str) -> tuple[set[str], str]:
    """The heavy libraries that a fresh process has imported at the end of some code, and what it printed."""
    watch = f"import atexit, sys; atexit.register(lambda: print('|', *set(sys.modules) & set({HEAVY!r})))\n"
    done = subprocess.run([sys.executable, "-c", watch + code], capture_output=True, text=True, check=False)
    assert "Traceback" not in done.stderr
    printed, _, names = done.stdout.rpartition("|")
    return set(names.split()), printed + done.stderr


def test_import_loads_nothing_heavy():
    assert loaded("import shedbim") == (set(), "")
    assert "numpy" in loaded("import shedbim; shedbim.Shed")[0]  # the watch can see


@pytest.mark.parametrize("words", ["", "--help", "-h", "build --help", "sections -h", "new --help", "build"])
def test_help_loads_nothing_heavy(words):
    call = f"sys.argv = ['shedbim', *{words!r}.split()]; from shedbim.cli import main; main()"
    heavy, printed = loaded(f"import sys; {call}")
    # Newer versions of the option parser check the options of a command with pydantic; the program does not.
    assert heavy - ({"pydantic"} if words[:1].isalpha() else set()) == set()
    assert "Usage: shedbim" in printed


def test_python_m_is_the_command_line():
    done = subprocess.run(
        [sys.executable, "-m", "shedbim", "--version"], capture_output=True, text=True, check=False
    )
    assert (done.returncode, done.stdout, done.stderr) == (0, shedbim.__version__ + "\n", "")


# --- help -------------------------------------------------------------------------------------------


def examples() -> list[str]:
    texts = [commands.app.info.help, *(each.callback.__doc__ for each in commands.app.registered_commands)]
    return [
        line.strip()
        for text in texts
        for line in text.splitlines()
        if line.startswith(("  shedbim", "      shedbim"))
    ]


def test_every_command_teaches_by_example(shell):
    for name in get_command(commands.app).commands:
        text = shell.ok(name, "--help")
        assert re.search(rf"(?m)^  Examples:\n    shedbim {name}\b", text) or name == "new"
        assert f"    shedbim {name}" in text


@pytest.mark.parametrize("line", examples())
def test_every_example_of_the_help_is_understood(line):
    words = shlex.split(re.split(r" {3,}| > ", line)[0])
    if "--help" not in words:
        command = get_command(commands.app).commands[words[1]]
        command.make_context(words[1], words[2:])


def test_the_help_names_every_output_schema_and_exit_code(shell):
    text = " ".join(shell.ok("build", "--help").split())
    for row in outputs.OUTPUTS:
        assert row.name in text
        assert row.group in text
    for word in (*outputs.SCHEMAS, *outputs.LEVEL_NAMES):
        assert word in text
    text = shell.ok("--help")
    for code, meaning in EXIT_CODES:
        assert f"{code} " in text
        assert meaning in text
    kinds = [errors.ShedbimError, *errors.ShedbimError.__subclasses__()]
    assert {kind.exit_code for kind in kinds} <= {code for code, _ in EXIT_CODES}


def test_the_schemas_are_those_of_the_model_writer():
    assert set(outputs.SCHEMAS) == set(ifc.SCHEMAS)


# --- build ------------------------------------------------------------------------------------------


def test_build_writes_every_output_and_tells_a_person_what_came_out(shell):
    out = shell.ok("build", "barn.yaml")
    made = shell.contents("outputs/barn")
    assert set(made) == {
        "model.ifc", "model.glb", "members.csv", "plates.csv", "bolts.csv", "anchors.csv", "welds.csv", "holes.csv",
        "assemblies.csv", "part-lists.csv", "finishes.csv", "sections.csv", "schedule.xlsx", "view.html",
        "findings.json", "findings.bcf", "findings-3.0.bcf", "passages.csv", "summary.json",
    }  # fmt: skip
    told = json.loads(made["summary.json"])
    assert out.startswith("2417 Grün [bold]Store[/] =1+1, revision P01\n")  # a user's text is only text
    assert f"{told['pieces']:,} pieces of {told['parts']:,} parts" in out
    assert f"{told['mass_kg'] / 1000:,.2f} t of steel" in out
    assert f"{told['mass_per_m2_kg'] / 1000:.4f} t/m²" in out
    assert f"  {'purlin':<18}{told['roles']['purlin']['pieces']:>9,}" in out
    assert "Left open, so by default:" in out
    assert "  purlins.gap: 6 mm\n" in out
    assert "project.revision: P01" in out
    for caution in CAUTIONS:
        assert caution in " ".join(out.split())
    assert f"Written to {Path('outputs/barn')}:" in out
    for name in made:
        assert f"  {name}" in out
    assert told["defaults"]
    assert told["time_stamp"].startswith("20")


def test_the_summary_carries_the_digest_of_the_files_own_bytes(shell):
    data = BARN.replace("\n", "\r\n").encode()
    (shell.folder / "barn.yaml").write_bytes(data)
    shell.ok("build", "barn.yaml", "--only", "summary", "-q")
    told = json.loads(shell.contents("outputs/barn")["summary.json"])
    assert told["description_sha256"] == hashlib.sha256(data).hexdigest()


def test_json_is_one_object_and_nothing_else(shell):
    told = json.loads(shell.ok("build", "barn.yaml", "--json", "--only", "schedules,summary", *STAMP))
    files = told.pop("files")
    assert told == json.loads((shell.folder / files["summary"]).read_text(encoding="utf-8"))
    assert list(files) == [
        "members", "plates", "bolts", "anchors", "welds", "holes", "assemblies", "part-lists", "finishes",
        "sections", "passages", "workbook", "summary",
    ]  # fmt: skip
    assert all((shell.folder / path).exists() for path in files.values())


def test_quiet_says_nothing(shell):
    assert shell.ok("build", "barn.yaml", "--quiet", "--only", "summary") == ""


def test_only_the_chosen_outputs_are_written_and_where_one_wants(shell):
    shell.ok("build", "barn.yaml", "-q", "--only", "members, summary", "--out", "x/y")
    assert set(shell.contents("x/y")) == {"members.csv", "summary.json"}
    assert not (shell.folder / "outputs").exists()


def test_the_same_input_gives_the_same_bytes_and_another_time_stamp_others(shell, monkeypatch):
    for folder, stamp in (("c", "2024-05-17T09:30:01"), ("a", STAMP[1]), ("b", "2024-05-17T11:30:00+02:00")):
        shell.ok("build", "barn.yaml", "-q", "--out", folder, "--time-stamp", stamp)
        monkeypatch.setattr(pipeline, "expand", expand)  # anew from here on, and with it the checks
    first, second, third = (shell.contents(folder) for folder in "abc")
    assert first == second
    changed = {name for name in first if first[name] != third[name]}
    assert changed == {
        "model.ifc", "model.glb", "schedule.xlsx", "view.html", "summary.json",
        "findings.json", "findings.bcf", "findings-3.0.bcf",
    }  # fmt: skip


@pytest.mark.parametrize("schema", outputs.SCHEMAS)
def test_the_schema_is_the_one_asked_for(shell, schema):
    shell.ok("build", "barn.yaml", "-q", "--only", "model,summary", "--schema", schema.lower())
    made = shell.contents("outputs/barn")
    assert f"FILE_SCHEMA(('{schema}'))".encode() in made["model.ifc"]
    assert json.loads(made["summary.json"])["schema"] == schema


def test_the_levels_are_those_of_the_model():
    assert set(outputs.LEVEL_NAMES) == set(levels.LEVELS)


def test_the_level_is_that_of_models_and_lists_tell_of_everything(shell):
    for level in outputs.LEVEL_NAMES:
        shell.ok(
            "build", "barn.yaml", "-q", "--level", level, "--out", level, "--only", "model,schedules", *STAMP
        )
    made = {level: shell.contents(level) for level in outputs.LEVEL_NAMES}
    shell.ok("build", "barn.yaml", "-q", "--out", "plain", "--only", "model", *STAMP)
    assert shell.contents("plain")["model.ifc"] == made["coordination"]["model.ifc"]
    for name in made["outline"]:
        assert (len({made[level][name] for level in made}) == 1) == (name != "model.ifc"), name
    # Members have the same ids at each level, and so has everything else that is shown.
    ids = {level: piece_ids_in(made[level]["model.ifc"]) for level in made}
    assert ids["outline"].keys() < ids["coordination"].keys() == ids["fabrication"].keys()
    assert ids["coordination"] == ids["fabrication"]
    assert ids["outline"].items() <= ids["fabrication"].items()
    sizes = [len(made[level]["model.ifc"]) for level in levels.LEVELS]
    assert sizes == sorted(sizes)


def piece_ids_in(model: bytes) -> dict[str, str]:
    """The GlobalId of each element of a model file by its name, which is its key."""
    line = re.compile(rb"=IFC(?!REL|PROP|ELEMENTQ|PROJECT|SITE|BUILDING)\w+\('([^']{22})',[^,]*,'([^']+)'")
    return {name.decode(): guid.decode() for guid, name in line.findall(model) if b"/" in name}


def test_a_description_without_an_id_is_built_with_a_warning(shell):
    text = BARN.replace("id: 5f0c9e3a-1111-4222-8333-123456789abc, ", "")
    (shell.folder / "barn.yaml").write_text(text, encoding="utf-8")
    code, _, err = shell("build", "barn.yaml", "--only", "summary")
    assert code == 0
    assert err.startswith("Warning: project.id is missing")
    assert shell("build", "barn.yaml", "--only", "summary", "-q")[2] == ""


def test_progress_is_shown_to_a_person_at_a_terminal_only(shell, monkeypatch):
    assert shell("build", "barn.yaml", "--only", "summary")[2] == ""
    stages = []
    monkeypatch.setattr("shedbim.cli.build_command.stage_line", lambda *each: stages.append(each))
    monkeypatch.setattr("shedbim.cli.build_command._watched", lambda: True)
    shell.ok("build", "barn.yaml", "--only", "members,summary", "--no-checks")
    assert stages == [
        ("reading the description", 0, 4), ("expanding", 1, 4), ("writing members.csv", 2, 4),
        ("writing summary.json", 3, 4), ("done", 4, 4),
    ]  # fmt: skip
    stages.clear()
    shell.ok("build", "barn.yaml", "--only", "summary")
    assert stages == [
        ("reading the description", 0, 4), ("expanding", 1, 4),
        *((f"checking {row.name}", 2, 4) for row in CHECKS),
        ("writing summary.json", 3, 4), ("done", 4, 4),
    ]  # fmt: skip
    stages.clear()
    for silent in ("--quiet", "--json"):
        shell.ok("build", "barn.yaml", "--only", "summary", silent)
    assert stages == []


def test_a_stage_line_is_written_over_and_taken_away_at_the_end(capsys):
    speech.stage_line("expanding", 1, 8)
    speech.stage_line("done", 8, 8)
    shown = capsys.readouterr().err
    assert shown == "\r" + "2/8 expanding".ljust(40) + "\r" + " " * 40 + "\r"


# --- refusals ---------------------------------------------------------------------------------------


def refused(shell: Shell, code: int, *arguments: str) -> str:
    """Run what must be refused: nothing on standard output, words and no traceback on the other."""
    got, out, err = shell(*arguments)
    assert (got, out) == (code, "")
    assert "Traceback" not in err
    assert err.endswith("\n")
    return err


def test_a_refused_description_names_every_fault_with_its_place_and_writes_nothing(shell):
    text = BARN.replace("HEB 260", "HEB 26O").replace("spacing: 1.7 m", "spaceing: 1.7 m")
    (shell.folder / "barn.yaml").write_text(text, encoding="utf-8")
    err = refused(shell, 2, "build", "barn.yaml")
    assert "barn.yaml:10:22: frames.columns.section" in err
    assert "nearest: " in err
    assert "barn.yaml:13:" in err
    assert "spacing" in err
    assert not (shell.folder / "outputs").exists()


def test_a_failed_build_leaves_the_outputs_of_the_one_before(shell):
    shell.ok("build", "barn.yaml", "-q", "--only", "schedules,summary", *STAMP)
    before = shell.contents("outputs/barn")
    (shell.folder / "barn.yaml").write_text(BARN.replace("5 m, 6 m", "5 m, 6"), encoding="utf-8")
    refused(shell, 2, "build", "barn.yaml")
    assert shell.contents("outputs/barn") == before


def test_a_missing_description(shell):
    assert "no such file" in refused(shell, 2, "build", "nowhere.yaml")


def test_a_target_that_is_a_file(shell):
    err = refused(shell, 3, "build", "barn.yaml", "--only", "summary", "--out", "barn.yaml")
    assert "it is a file, not a folder" in err
    assert (shell.folder / "barn.yaml").read_text(encoding="utf-8") == BARN


@pytest.mark.parametrize(
    ("option", "value", "words"),
    [
        ("--schema", "IFC5", "no schema 'IFC5'; there are: IFC4, IFC4X3_ADD2, IFC2X3"),
        ("--level", "rough", "no level of detail 'rough'; there are: coordination, fabrication, outline"),
        ("--only", "modle", "no output 'modle'"),
        ("--time-stamp", "yesterday", "'yesterday' is no ISO 8601 time"),
        ("--wrong", "x", "No such option"),
    ],
)
def test_an_option_that_makes_no_sense(shell, option, value, words):
    assert words in refused(shell, 2, "build", "barn.yaml", option, value)
    assert not (shell.folder / "outputs").exists()


def test_a_wrong_choice_in_a_program_is_an_error_of_the_package(tmp_path):
    (tmp_path / "barn.yaml").write_text(BARN, encoding="utf-8")
    with pytest.raises(shedbim.OutputError, match="nearest: members"):
        shedbim.build(tmp_path / "barn.yaml", tmp_path / "out", outputs=["member"])
    with pytest.raises(shedbim.OutputError, match="no schema 'ifc4'"):
        shedbim.build(tmp_path / "barn.yaml", tmp_path / "out", schema="ifc4")
    assert not (tmp_path / "out").exists()


def test_a_fault_of_the_program_is_called_one(shell, monkeypatch):
    def broken(description):
        raise errors.ModelError("two pieces share a key")

    monkeypatch.setattr(pipeline, "expand", broken)
    err = refused(shell, 70, "build", "barn.yaml")
    assert (
        err == "A fault of the program, not of your description; please report it.\ntwo pieces share a key\n"
    )


@pytest.mark.parametrize("stage", ["expand", "save"])
def test_an_interruption_changes_nothing(shell, monkeypatch, stage):
    def interrupted(*_):
        raise KeyboardInterrupt

    shell.ok("build", "barn.yaml", "-q", "--only", "summary", *STAMP)
    before = shell.contents("outputs/barn")
    monkeypatch.setattr(pipeline, stage, interrupted)
    assert "Interrupted; nothing was written" in refused(
        shell, 130, "build", "barn.yaml", "--only", "summary"
    )
    assert shell.contents("outputs/barn") == before


def test_no_text_of_a_user_acts_on_the_terminal(shell, capsys):
    speech.say("a\x1b[31mb\tc\u202ed ü m²")
    speech.complain("x\x07\ny")
    assert capsys.readouterr() == ("a\\x1b[31mb\\tc\\u202ed ü m²\n", "x\\x07\ny\n")
    assert "\x1b" not in refused(shell, 2, "sections", "\x1b[31mIPE")
    show_table(("name", "what"), [("a\x1b[31mb", "[red]c[/]")])
    assert re.search(r"a\\x1b\[31mb +\[red\]c\[/\]", capsys.readouterr().out)


# --- look-up ----------------------------------------------------------------------------------------


def test_sections_lists_every_family(shell):
    out = shell.ok("sections")
    for family in families():
        assert re.search(rf"(?m)^ {family.name} +(\d+|any) .*{re.escape(family.example)}", out)
    told = json.loads(shell.ok("sections", "--json"))["families"]
    assert [each["name"] for each in told] == [family.name for family in families()]


def test_sections_lists_every_section_of_a_family(shell):
    out = shell.ok("sections", "ipe")
    assert re.findall(r"(?m)^ (IPE \S+) ", out) == list(designations("IPE"))
    # EN 10365: IPE 300 has 42.2 kg/m, 53.8 cm², Iy 8356 cm⁴ and Iz 604 cm⁴.
    row = re.search(r"(?m)^ IPE 300 +(.*)$", out)
    assert row is not None
    mass, _, height, width, area, iy, iz = map(float, row[1].split())
    assert (mass, height, width, area, iy, iz) == pytest.approx((42.2, 300, 150, 53.8, 8356, 604), rel=2e-3)
    told = json.loads(shell.ok("sections", "IPE", "--json"))
    assert [each["designation"] for each in told["sections"]] == list(designations("IPE"))


def test_sections_shows_one_section_whole(shell):
    out = shell.ok("sections", "z200x75x20x2.5")
    assert out.startswith("Z 200x75x20x2.5 (Z)\n")
    assert "-0.00" not in out
    unequal = json.loads(shell.ok("sections", "Z 200x75/68x20x2.5", "--json"))["dimensions_mm"]
    equal = json.loads(shell.ok("sections", "Z 200x75x20x2.5", "--json"))["dimensions_mm"]
    assert unequal == {**equal, "b2": 68}
    told = json.loads(shell.ok("sections", "IPE", "300", "--json"))
    assert told["designation"] == "IPE 300"
    assert told["dimensions_mm"] == {"h": 300, "b": 150, "tw": 7.1, "tf": 10.7, "r": 15}  # EN 10365
    assert told["radius_y_mm"] == pytest.approx(124.6, rel=1e-3)  # EN 10365: 12.46 cm
    assert "EN 10365" in told["source"]
    for heading, value in (("radius least", "radius_least_mm"), ("surface", "surface_m2_per_m")):
        assert heading in out
        assert value in told


def test_sections_says_how_a_made_family_is_written(shell):
    assert "for example C 200x75x20x2" in shell.ok("sections", "C")


@pytest.mark.parametrize("name", ["IPE 301", "IPX", "SHS 100x100x99"])
def test_an_unknown_section_is_answered_with_near_ones(shell, name):
    err = refused(shell, 2, "sections", *name.split())
    assert repr(name) in err
    assert "nearest: " in err


def test_fields_lists_every_field_with_its_default(shell):
    out = shell.ok("fields")
    for row in all_fields():
        assert f"{row.path}: {row.default or '(must be given)'}\n" in out
        assert f"    allowed: {row.allowed}\n" in out
    told = json.loads(shell.ok("fields", "--json"))["fields"]
    assert [each["path"] for each in told] == [row.path for row in all_fields()]


def test_fields_under_a_path_only(shell):
    told = json.loads(shell.ok("fields", "purlins.sag_bar", "--json"))["fields"]
    assert [each["path"] for each in told] == ["purlins.sag_bar"]  # and not purlins.sag_bars
    assert "nearest: purlins" in refused(shell, 2, "fields", "purlin")


def test_the_schema_is_a_schema_and_takes_a_description(shell):
    schema = json.loads(shell.ok("schema"))
    jsonschema.Draft202012Validator.check_schema(schema)
    data = YAML(typ="safe").load(BARN)
    jsonschema.validate(data, schema)
    data["purlins"]["spaceing"] = "1 m"
    with pytest.raises(jsonschema.ValidationError):
        jsonschema.validate(data, schema)


def test_summary_keys_explains_every_key(shell):
    out = shell.ok("summary-keys")
    for key, meaning in KEYS:
        assert f" {key} " in out
        assert meaning in out


# --- beginning --------------------------------------------------------------------------------------


def test_presets_are_listed_with_their_first_comment(shell, preset):
    assert re.search(r"(?m)^ small-barn +A small \[red\]shed\[/\] with unequal bays", shell.ok("presets"))
    told = json.loads(shell.ok("presets", "--json"))
    assert told == {
        "presets": [{"name": preset, "meaning": "A small [red]shed[/] with unequal bays, spans and pitches"}]
    }


def test_new_writes_a_commented_description_with_an_id_of_its_own(shell, preset):
    out = shell.ok("new", "a/first.yaml", "--preset", preset)
    assert "shedbim build a/first.yaml" in out
    shell.ok("new", "second.yaml", "--preset", preset)
    first, second = (shedbim.read(shell.folder / name) for name in ("a/first.yaml", "second.yaml"))
    assert len({first.project.id, second.project.id, "5f0c9e3a-1111-4222-8333-123456789abc"}) == 3
    assert first.building == second.building
    assert (shell.folder / "a/first.yaml").read_text(encoding="utf-8").startswith("# A small [red]shed")
    shell.ok("build", "second.yaml", "-q", "--only", "summary")


def test_new_never_touches_a_file_that_is_there(shell, preset):
    assert "is there already" in refused(shell, 3, "new", "barn.yaml", "--preset", preset)
    assert (shell.folder / "barn.yaml").read_text(encoding="utf-8") == BARN


def test_new_from_an_unknown_preset(shell, preset):
    err = refused(shell, 2, "new", "x.yaml", "--preset", "smal-barn")
    assert "nearest: small-barn" in err
    assert not (shell.folder / "x.yaml").exists()


def test_the_presets_that_the_help_names_exist():
    named = {word for line in examples() for word in re.findall(r"--preset (\S+)", line)}
    assert named
    assert named <= set(presets.preset_names())
