"""Prints what comparing two states costs beside writing one of them, and a cycle of a watch beside a build anew."""

from __future__ import annotations

import io
import resource
import statistics
import subprocess
import sys
import tempfile
import time
from collections.abc import Callable
from pathlib import Path

from shedbim.description import read_text
from shedbim.expand import expand
from shedbim.revisions.change_groups import change_groups
from shedbim.revisions.comparing import compare
from shedbim.revisions.snapshot import snapshot
from shedbim.watching import steps
from shedbim.writers.ifc import write

__all__ = ["compare_costs", "watch_costs"]

_RUNS = 5


def compare_costs(description_text: Callable[[int, int], str], spans: int, bays: int) -> None:
    """Print CPU seconds of comparing a building of about 100,000 pieces with one whose first bay is longer."""
    text = description_text(spans, bays)
    sheds = [expand(read_text(each)) for each in (text, text.replace("bays: [7 m,", "bays: [7.25 m,"))]
    before, after = (snapshot(shed) for shed in sheds)
    comparing = _cpu(lambda: compare(before, after))
    # Sheds moved beyond the bay compare no shape; other holes in every column ask for many shapes to be compared.
    same = _cpu(lambda: compare(before, before))
    changes = compare(before, after)
    grouping = _cpu(lambda: change_groups(changes))
    writing = _cpu(lambda: write(sheds[0], io.BytesIO()))
    snapping = _cpu(lambda: snapshot(sheds[0]))
    print(
        f"{len(before):,} pieces, {len(before.parts):,} parts, {len(changes.changed):,} changed: CPU s of "
        f"model file {writing:.2f}, two snapshots {2 * snapping:.2f}, comparing {comparing:.2f} "
        f"(with itself {same:.2f}), sentences {grouping:.2f}; comparing / model file {comparing / writing:.2f}"
    )


def watch_costs(preset: Path) -> None:
    """Print CPU seconds of regenerating, comparing and checking after an edit of one number, beside a cold build."""
    text = preset.read_text(encoding="utf-8")
    with tempfile.TemporaryDirectory() as folder:
        file = Path(folder) / "shed.yaml"
        file.write_text(text, encoding="utf-8")
        builds = [_cold(file, folder) for _ in range(3)]
        eaves = next(line for line in text.splitlines() if line.startswith("  eaves:"))
        edits = iter(range(100))

        def edit() -> None:
            file.write_text(text.replace(eaves, f"  eaves: {8000 + 20 * next(edits)} mm"), encoding="utf-8")

        looks = steps(file, edit, checks=True)
        next(looks)
        cycles = []
        for _ in range(_RUNS):
            start = time.process_time()
            step = next(looks)
            assert step.changes is not None
            change_groups(step.changes)
            cycles.append(time.process_time() - start)
    cycle, build = statistics.median(cycles), statistics.median(builds)
    print(f"CPU s of a watch cycle {cycle:.2f}, of a cold build {build:.2f}: ratio {cycle / build:.2f}")


def _cold(file: Path, folder: str) -> float:
    """CPU seconds of a whole build in a process of its own."""
    before = resource.getrusage(resource.RUSAGE_CHILDREN)
    command = [sys.executable, "-m", "shedbim", "build", str(file), "--out", f"{folder}/out", "--quiet"]
    subprocess.run(command, check=True)
    after = resource.getrusage(resource.RUSAGE_CHILDREN)
    return after.ru_utime + after.ru_stime - before.ru_utime - before.ru_stime


def _cpu(work: Callable[[], object]) -> float:
    """Median CPU seconds of a piece of work."""
    seconds = []
    for _ in range(_RUNS):
        start = time.process_time()
        work()
        seconds.append(time.process_time() - start)
    return statistics.median(seconds)
