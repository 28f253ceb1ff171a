"""``shedbim check``, ``issue`` and ``register`` as a user runs them: what they print, write, and end with."""

from __future__ import annotations

import json
import sys
from pathlib import Path

import pytest
from cast import text_of

from shedbim.cli import main

FLAT = text_of("flat")
#: A zone across the whole shed, which every column stands in.
ZONE = """
reserved:
  - {name: hall, kind: free, x: [-1 m, 14 m], y: [-1 m, 8 m], z: [1 m, 1.2 m]}
"""
WAIVED = """
checks:
  waive:
    - {code: zone-overlap, reason: 'agreed with [bold]the[/] client'}
    - {code: zone-too-near, pieces: '*', reason: as above}
"""


class Shell:
    def __init__(self, folder: Path, monkeypatch, capsys) -> None:
        self.folder, self._patch, self._capture = folder, monkeypatch, capsys
        monkeypatch.chdir(folder)

    def __call__(self, *arguments: str) -> tuple[int, str, str]:
        self._patch.setattr(sys, "argv", ["shedbim", *arguments])
        with pytest.raises(SystemExit) as left:
            main()
        out, err = self._capture.readouterr()
        return left.value.code or 0, out, err


@pytest.fixture
def shell(tmp_path, monkeypatch, capsys) -> Shell:
    return Shell(tmp_path, monkeypatch, capsys)


def test_a_clean_shed_ends_with_0_and_a_severe_finding_with_4_until_it_is_waived(shell: Shell) -> None:
    (shell.folder / "a.yaml").write_text(FLAT)
    code, out, err = shell("check", "a.yaml", "--time-stamp", "2026-03-04T05:06:07Z")
    assert (code, err) == (0, "")
    assert "T4 Flat Kiosk, revision P01: 0 errors" in out
    folder = shell.folder / "outputs" / "a"
    assert {path.name for path in folder.iterdir()} == {"findings.json", "findings.bcf", "findings-3.0.bcf"}

    (shell.folder / "b.yaml").write_text(FLAT + ZONE)
    code, out, _ = shell("check", "b.yaml")
    assert code == 4
    assert "ERRORS" in out
    assert "zone-overlap" in out
    assert out.index("ERRORS") < out.index("Written to")
    told = json.loads((shell.folder / "outputs" / "b" / "findings.json").read_text())
    severe = [each for each in told["findings"] if each["severity"] == "error"]
    assert {each["code"] for each in severe} == {"zone-overlap"}
    assert told["counts"]["error"] == len(severe)
    keys = {piece["key"] for each in severe for place in each["places"] for piece in place["pieces"]}
    assert {"1/column/A", "2/column/B"} <= keys

    (shell.folder / "c.yaml").write_text(FLAT + ZONE + WAIVED)
    code, out, _ = shell("check", "c.yaml")
    assert code == 0
    assert "WAIVED" in out
    assert "waived: agreed with [bold]the[/] client" in out
    code, out, _ = shell("check", "c.yaml", "--json")
    told = json.loads(out)
    assert {each["waived"] for each in told["findings"] if each["code"] == "zone-overlap"} == {
        "agreed with [bold]the[/] client"
    }


def test_build_says_the_counts_and_writes_the_findings_unless_told_not_to(shell: Shell) -> None:
    (shell.folder / "b.yaml").write_text(FLAT + ZONE)
    code, out, _ = shell("build", "b.yaml", "--only", "summary,findings")
    assert code == 0
    told = json.loads((shell.folder / "outputs" / "b" / "findings.json").read_text())
    errors = told["counts"]["error"]
    assert errors
    assert f"{errors} error" in out.partition("Checks:")[2].splitlines()[1]
    assert "zone-overlap:" in out
    summary = json.loads((shell.folder / "outputs" / "b" / "summary.json").read_text())
    assert summary["findings"]["error"] == errors
    code, out, _ = shell("build", "b.yaml", "--no-checks", "--only", "summary")
    assert code == 0
    assert "Checks:" not in out
    code, _, err = shell("build", "b.yaml", "--no-checks", "--only", "findings")
    assert code == 3
    assert "was not checked" in err


def test_a_model_that_cannot_be_read_is_told_of_and_the_rest_is_checked(shell: Shell) -> None:
    (shell.folder / "a.yaml").write_text(FLAT)
    (shell.folder / "other.ifc").write_text("no model at all")
    code, out, err = shell("check", "a.yaml", "--against", "other.ifc", "--against", "nowhere.ifc")
    assert (code, err) == (0, "")
    assert "other.ifc" in out
    assert "nowhere.ifc" in out
    assert out.count("other-unread") == 2
    assert "Traceback" not in out


def test_what_if_is_checked_in_a_folder_of_its_own(shell: Shell) -> None:
    (shell.folder / "a.yaml").write_text(FLAT)
    code, out, _ = shell("check", "a.yaml", "--set", "purlins.spacing=2.6 m")
    assert code == 0
    assert "purlins-far-apart" in out
    assert [path.name for path in (shell.folder / "outputs").iterdir()] == ["a-what-if"]


def test_issues_follow_one_another_and_the_register_keeps_ids_and_marks(shell: Shell) -> None:
    file = shell.folder / "a.yaml"
    file.write_text(FLAT)
    code, out, _ = shell(
        "issue", "a.yaml", "--status", "S3", "--reason", "for review", "--time-stamp", "2026-01-02"
    )
    assert code == 0
    assert "P01 issued, status S3 (for review and comment)" in out
    first = (shell.folder / "a.register").read_bytes()
    code, _, err = shell("issue", "a.yaml", "--status", "S3", "--reason", "again")
    assert code == 5
    assert "P01 was issued already" in err
    assert (shell.folder / "a.register").read_bytes() == first
    file.write_text(FLAT.replace("eaves: 3.9 m", "eaves: 4.2 m"))
    assert shell("build", "a.yaml", "--only", "members", "--no-checks")[0] == 0
    assert (shell.folder / "a.register").read_bytes() == first, "a build never changes the register"
    code, out, _ = shell("issue", "a.yaml", "--status", "A1", "--reason", "go", "--json")
    told = json.loads(out)
    assert (code, told["revision"], told["added"], told["removed"]) == (0, "P02", 0, 0)
    assert told["moved"] > 100
    code, out, _ = shell("register", "check", "a.register")
    assert code == 0
    assert all(word in out for word in ("P01", "P02", "for review"))


def test_a_damaged_register_stops_a_build_is_repaired_beside_itself_and_never_written_over(
    shell: Shell,
) -> None:
    (shell.folder / "a.yaml").write_text(FLAT)
    assert shell("issue", "a.yaml", "--status", "S1", "--reason", "x")[0] == 0
    file = shell.folder / "a.register"
    lines = file.read_text().splitlines(keepends=True)
    file.write_text("".join([*lines[:60], "\x1b[31m damaged\n", *lines[61:]]))
    damaged = file.read_bytes()
    for command in (("build", "a.yaml"), ("issue", "a.yaml", "--status", "S1", "--reason", "y")):
        code, _, err = shell(*command)
        assert code == 5
        assert "a.register:61:1: this line is damaged" in err
        assert "\x1b" not in err
    assert file.read_bytes() == damaged
    assert not (shell.folder / "outputs").exists()
    code, _, err = shell("register", "repair", "a.register")
    assert code == 0
    assert "line 61" in err
    assert file.read_bytes() == damaged
    assert shell("register", "check", "a.repaired.register")[0] == 0
    code, _, err = shell("register", "repair", "a.register", "--out", "a.register")
    assert code == 5
    assert "never written over" in err
    code, _, err = shell("register", "merge", "a.register", "a.repaired.register", "--out", "m.register")
    assert code == 5
    code, _, _ = shell(
        "register", "merge", "a.repaired.register", "a.repaired.register", "--out", "m.register"
    )
    assert code == 0
    assert (shell.folder / "m.register").read_bytes() == (shell.folder / "a.repaired.register").read_bytes()


@pytest.mark.parametrize(
    ("arguments", "message"),
    [
        (("issue", "a.yaml", "--status", "S3"), "--reason"),
        (("issue", "a.yaml", "--status", "S3", "--reason", ""), "--reason takes one line"),
        (("issue", "a.yaml", "--status", "x" * 13, "--reason", "r"), "--status takes one line"),
        (("issue", "a.yaml", "--status", "S3", "--reason", "two\nlines"), "--reason takes one line"),
        (("register", "check", "b.register"), "there is no such file"),
        (("check", "b.yaml"), "b.yaml"),
    ],
)
def test_what_is_refused_is_refused_in_one_sentence(
    shell: Shell, arguments: tuple[str, ...], message: str
) -> None:
    (shell.folder / "a.yaml").write_text(FLAT)
    code, _, err = shell(*arguments)
    assert code in (2, 5)
    assert message in err
    assert "Traceback" not in err
    assert [path.name for path in shell.folder.iterdir()] == ["a.yaml"]
