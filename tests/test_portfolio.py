"""Several descriptions in one command: side by side, each by itself, summed up in one table or one list."""

from __future__ import annotations

import json
import os
import signal
import subprocess
import sys
import time
from pathlib import Path

import pytest
from cast import shed_of, text_of
from played_builds import play
from typer.testing import CliRunner, Result

from shedbim import portfolio
from shedbim.cli.commands import app
from shedbim.cli.spreading import spread
from shedbim.errors import OutputError
from shedbim.portfolio import Job, built_each, jobs_of

#: What is quick to build.
QUICK = ("--only", "summary", "--no-checks", "--time-stamp", "2024-05-17T09:30:00Z")


@pytest.fixture
def desk(tmp_path, monkeypatch) -> Path:
    """A folder with three descriptions, of which the second in the order of their names is wrong."""
    monkeypatch.chdir(tmp_path)
    (tmp_path / "lean.yaml").write_text(text_of("lean"), encoding="utf-8")
    (tmp_path / "long.yaml").write_text(
        text_of("lean").replace("eaves: 4.4 m", "eaves: 99 m"), encoding="utf-8"
    )
    (tmp_path / "other.yaml").write_text(text_of("lean").replace("8.3 m", "7.3 m"), encoding="utf-8")
    return tmp_path


def run(*words: str) -> Result:
    return CliRunner().invoke(app, ["build", *words, *QUICK])


# --- one table ----------------------------------------------------------------------------------------------


def test_a_failure_ends_no_other_and_all_are_summed_up(desk):
    done = run("other.yaml", "long.yaml", "lean.yaml")
    assert done.exit_code == 2
    rows = [line.split() for line in done.stdout.splitlines() if line.strip()]
    assert rows[0] == ["file", "pieces", "tonnes", "errors", "warnings", "seconds", "result"]
    table = {row[0]: row[1:] for row in rows[2:5]}
    assert list(table) == ["other.yaml", "long.yaml", "lean.yaml"]
    assert table["long.yaml"][:4] == ["-"] * 4
    assert [row[-1] for row in table.values()] == ["built", "refused", "built"]
    shed = shed_of("lean")  # built by itself, in this process
    assert table["lean.yaml"][:2] == [f"{len(shed.pieces):,}", f"{shed.mass / 1000:,.2f}"]
    assert "2 sheds of 3 built" in done.stdout
    assert "long.yaml: refused\n  long.yaml:" in done.stderr
    assert "out of bounds" in done.stderr
    assert sorted(path.name for path in (desk / "outputs").iterdir()) == ["lean", "other"]


def test_outputs_are_those_of_each_built_by_itself(desk):
    assert run("lean.yaml", "long.yaml", "--out", "issue", "--jobs", "1").exit_code == 2
    assert run("lean.yaml", "--out", "alone").exit_code == 0
    together, alone = desk / "issue" / "lean" / "summary.json", desk / "alone" / "summary.json"
    assert together.read_bytes() == alone.read_bytes()


def test_checks_are_counted_in_the_table(desk):
    done = CliRunner().invoke(app, ["build", "lean.yaml", "other.yaml", "--only", "summary", "--json"])
    assert done.exit_code == 0, done.output
    for each in json.loads(done.stdout):
        told = json.loads(Path(each["files"]["summary"]).read_text())
        assert each["findings"] == told["findings"] is not None


def test_json_is_a_list_in_the_order_given(desk):
    done = run("long.yaml", "other.yaml", "lean.yaml", "--json", "--set", "building.roof.pitch=7 deg")
    assert done.exit_code == 2
    long, other, lean = json.loads(done.stdout)
    assert (long["file"], long["exit_code"], long["result"]) == ("long.yaml", 2, "refused")
    assert "out of bounds" in long["error"]
    assert "pieces" not in long
    assert (lean["exit_code"], lean["error"], lean["settings"]) == (0, "", ["building.roof.pitch=7 deg"])
    assert lean["folder"] == "outputs/lean-what-if"
    told = json.loads((desk / other["files"]["summary"]).read_text())
    assert {key: other[key] for key in told} == told


def test_quiet_prints_nothing_but_errors(desk):
    done = run("lean.yaml", "long.yaml", "-q")
    assert done.stdout == ""
    assert done.stderr.startswith("long.yaml: refused")


def test_one_file_is_as_ever(desk):
    done = run("lean.yaml", "--out", "here", "--jobs", "2")
    assert done.exit_code == 0
    assert "T3 Leaning Shed" in done.stdout
    assert (desk / "here" / "summary.json").exists()
    assert isinstance(json.loads(run("lean.yaml", "--json").stdout), dict)


# --- which files, which folders -----------------------------------------------------------------------------


def test_patterns_are_spread_where_no_shell_did_it(desk):
    assert spread([Path("l*.yaml"), Path("other.yaml")]) == (
        Path("lean.yaml"),
        Path("long.yaml"),
        Path("other.yaml"),
    )
    (desk / "[1].yaml").touch()
    assert spread([Path("[1].yaml"), Path("no*.yaml")]) == (Path("[1].yaml"), Path("no*.yaml"))
    assert run("no*.yaml").exit_code == 2


@pytest.mark.parametrize(
    ("paths", "told"),
    [
        (["a/shed.yaml", "b/shed.yaml"], "a/shed.yaml and b/shed.yaml would both be written into"),
        (["shed.yaml", "shed.yml"], "rename one of them"),
        (["Shed.yaml", "shed.yaml"], "both be written"),
        (["shed.yaml", "./shed.yaml"], "shed.yaml is given twice"),
        (["shed.yaml", "x/../shed.yaml"], "given twice"),
    ],
)
@pytest.mark.parametrize("out", [None, Path("issue")])
def test_two_never_share_a_folder(paths, told, out):
    with pytest.raises(OutputError, match=told):
        jobs_of([Path(path) for path in paths], out)


def test_shared_folders_are_refused_before_anything_is_built(desk):
    (desk / "sub").mkdir()
    (desk / "sub" / "lean.yaml").write_text(text_of("lean"), encoding="utf-8")
    done = run("lean.yaml", "sub/lean.yaml")
    assert done.exit_code == 3
    assert "nothing was built" in done.output
    assert not (desk / "outputs").exists()


# --- processes ----------------------------------------------------------------------------------------------


@pytest.mark.parametrize("most", [1, 2, 3])
def test_as_many_work_at_a_time_as_are_asked_for(tmp_path, most):
    log = tmp_path / "log"
    jobs = [Job(Path(f"{number}.yaml"), tmp_path / "x") for number in range(4)]
    done = list(built_each(jobs, play, most=most))
    assert sorted(number for number, _ in done) == [0, 1, 2, 3]
    at_work, peak = 0, 0
    for line in log.read_text().splitlines():
        at_work += 1 if line[0] == "+" else -1
        peak = max(peak, at_work)
    assert peak <= most
    assert at_work == 0


@pytest.mark.skipif(sys.platform == "win32", reason="signals are those of POSIX")
def test_a_process_that_dies_or_breaks_ends_no_other(tmp_path):
    jobs = [
        Job(Path(f"{name}.yaml"), tmp_path / "x") for name in ("dies", "breaks", "is-at-fault", "listens")
    ]
    done = dict(built_each(jobs, play, most=2))
    assert [done[number].code for number in range(4)] == [1, 1, 70, 3]
    assert "signal 9, for want of memory perhaps" in done[0].error
    assert "ZeroDivisionError: nobody foresaw this" in done[1].error
    assert [done[2].error, done[3].error] == [
        "a promise is broken",
        f"hears an interrupt by {signal.SIG_IGN!r}",
    ]


def test_who_stops_listening_ends_the_processes(tmp_path):
    log = tmp_path / "log"
    jobs = [Job(Path(f"{name}.yaml"), tmp_path / "x") for name in ("goes-on", "endless")]
    start = time.monotonic()
    for _number, built in built_each(jobs, play, most=2):
        assert built.job.path == Path("goes-on.yaml")
        break
    assert time.monotonic() - start < 300
    assert "-endless.yaml" not in log.read_text()


@pytest.mark.skipif(sys.platform == "win32", reason="signals are those of POSIX")
def test_an_interrupt_leaves_every_folder_whole_and_tells_what_is_done(desk):
    """The whole group hears it, as at a terminal; no process prints a traceback."""
    code = (
        # A run in the background of a shell hears no interrupt; this one stands for a person at a terminal.
        "import signal; signal.signal(signal.SIGINT, signal.default_int_handler)\n"
        "from pathlib import Path; from played_builds import play\n"
        "from shedbim.cli import portfolio_command as command\n"
        "command.build = play\n"
        "files = [Path('short.yaml'), Path('endless.yaml')]\n"
        "options = {'jobs': 2, 'checks': False, 'as_json': False, 'quiet': False}\n"
        "command.run(files, None, (), 'IFC4', 'outline', (), None, **options)"
    )
    environment = {**os.environ, "PYTHONPATH": str(Path(__file__).parent)}
    with subprocess.Popen(
        [sys.executable, "-c", code],
        stdout=subprocess.PIPE,
        stderr=subprocess.PIPE,
        text=True,
        start_new_session=True,
        env=environment,
    ) as running:
        log, end = desk / "outputs" / "log", time.monotonic() + 300
        (desk / "outputs").mkdir()
        while time.monotonic() < end and not (log.exists() and len(log.read_text().splitlines()) == 3):
            time.sleep(0.1)
        time.sleep(1.0)  # for the message of the one that is done to arrive
        os.killpg(running.pid, signal.SIGINT)
        out, err = running.communicate(timeout=120)
    assert running.returncode == 130, err
    assert "Interrupted: 1 shed of 2 done; all others are as they were." in err
    assert "Traceback" not in err
    assert "short.yaml" in out
    assert "endless.yaml" not in out


def test_the_processors_that_may_be_used_are_counted():
    assert 1 <= portfolio.processors() <= (os.cpu_count() or 1)
