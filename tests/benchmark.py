"""Prints what the program costs at about 4,000, 40,000 and 350,000 pieces, bolts and plates included; run it by hand.

    python tests/benchmark.py             stages, exponents, memory, bytes, ratio to one entity at a time
    python tests/benchmark.py --receiver  besides: what opening and meshing the model costs a receiver
    python tests/benchmark.py --clash     only the clash check: see clash_benchmark.py
    python tests/benchmark.py --compare   only comparing and watching: see compare_benchmark.py

Times are medians of runs in one process on one machine: quote their ratios, not the times.
"""

from __future__ import annotations

import argparse
import io
import math
import os
import resource
import statistics
import subprocess
import sys
import tempfile
import time
from collections.abc import Callable
from dataclasses import replace
from pathlib import Path
from typing import Any

import numpy as np
from clash_benchmark import clash_costs
from compare_benchmark import compare_costs, watch_costs

from shedbim.description import read_text
from shedbim.expand import assembling, expand, shop
from shedbim.model.levels import LEVELS, at_level
from shedbim.model.shed import Shed
from shedbim.writers.glb import write as write_meshes
from shedbim.writers.ifc import write
from shedbim.writers.imprint import Imprint
from shedbim.writers.schedules.csv_text import csv_text
from shedbim.writers.schedules.tables import assemblies, members, totals
from shedbim.writers.schedules.workbook import workbook_bytes

_PRESET = Path(__file__).parent.parent / "presets" / "seed-store.yaml"
_BYTECODE = Path(tempfile.gettempdir()) / "shedbim-benchmark-bytecode"
#: Spans and inner bays that come to about the number of pieces.
_SIZES = {4_000: (1, 8), 40_000: (2, 52), 350_000: (6, 205)}


def description_text(spans: int, bays: int) -> str:
    """The 30 x 60 m preset with more spans and more bays."""
    replaced = {
        "  spans:": f"  spans: [{spans} x 30 m]",
        "  bays: [7 m": f"  bays: [7 m, {bays} x 5.75 m, 7 m]",
        "  bays: [first": "  bays: rule",
    }
    lines = _PRESET.read_text(encoding="utf-8").splitlines()
    return "\n".join(
        next((new for start, new in replaced.items() if line.startswith(start)), line) for line in lines
    )


def timed(work: Callable[[], Any], runs: int) -> tuple[float, Any]:
    """Median seconds of a piece of work, and what it gave last."""
    seconds, result = [], None
    for _ in range(runs):
        start = time.perf_counter()
        result = work()
        seconds.append(time.perf_counter() - start)
    return statistics.median(seconds), result


class Watched:
    """Adds up the seconds spent in functions, (module, name) each, while they are watched."""

    def __init__(self, *functions: tuple[Any, str]) -> None:
        self.seconds = 0.0
        for module, name in functions:
            setattr(module, name, self._watch(getattr(module, name)))

    def _watch(self, function: Callable[..., Any]) -> Callable[..., Any]:
        def watched(*args: Any) -> Any:
            start = time.perf_counter()
            try:
                return function(*args)
            finally:
                self.seconds += time.perf_counter() - start

        return watched


def model_bytes(shed: Shed) -> bytes:
    """The model file in memory."""
    sink = io.BytesIO()
    write(shed, sink)
    return sink.getvalue()


def mesh_bytes(shed: Shed) -> bytes:
    """The mesh model in memory."""
    sink = io.BytesIO()
    write_meshes(shed, sink)
    return sink.getvalue()


def schedules(shed: Shed) -> int:
    """All schedules in memory; gives their size."""
    text = "".join(csv_text(table(shed)) for table in (members, assemblies, totals))
    return len(text) + len(workbook_bytes(shed, Imprint()))


def stages(size: int, watched: Watched) -> dict[str, float]:
    """Seconds of each stage at one size, and the size of the result."""
    description = read_text(description_text(*_SIZES[size]))
    runs = 5 if size < 50_000 else 3
    watched.seconds = 0.0
    expansion, shed = timed(lambda: expand(description), runs)
    marks = watched.seconds / runs
    writing, data = timed(lambda: model_bytes(shed), runs)
    meshing, meshes = timed(lambda: mesh_bytes(shed), runs)
    scheduling, _ = timed(lambda: schedules(shed), runs)
    whole, memory = whole_process(size)
    return {
        "pieces": len(shed.pieces),
        "parts": len(shed.parts),
        "expansion": expansion - marks,
        "marks": marks,
        "model file": writing,
        "mesh model": meshing,
        "schedules": scheduling,
        "whole process": whole,
        "peak MB": memory,
        "bytes/piece": len(data) / len(shed.pieces),
        "mesh b/piece": len(meshes) / len(shed.pieces),
    }


def _run(*command: str) -> None:
    """Run Python with its bytecode kept, as an installed package has it."""
    environment = {k: v for k, v in os.environ.items() if k != "PYTHONDONTWRITEBYTECODE"}
    environment["PYTHONPYCACHEPREFIX"] = str(_BYTECODE)
    subprocess.run([sys.executable, *command], check=True, env=environment)


def whole_process(size: int) -> tuple[float, float]:
    """Seconds and peak memory (MB) of building model and schedules in a process of its own."""
    with tempfile.TemporaryDirectory() as folder:
        file = Path(folder) / "shed.yaml"
        file.write_text(description_text(*_SIZES[size]), encoding="utf-8")
        command = ["-m", "shedbim", "build", str(file), "--out", folder + "/out", "--quiet"]
        command += ["--only", "model,schedules"]
        _run(*command)
        seconds, _ = timed(lambda: _run(*command), 5)
    return seconds, resource.getrusage(resource.RUSAGE_CHILDREN).ru_maxrss / 1024


def one_by_one(data: bytes) -> float:
    """Seconds the library takes to make the same entities one call each and to write them."""
    import ifcopenshell  # noqa: PLC0415 - costs 0.4 s and only this figure needs it

    source = ifcopenshell.file.from_string(data.decode())
    made: list[tuple[int, str, list[Any]]] = [
        (e.id(), e.is_a(), list(e)) for e in sorted(source, key=lambda e: e.id())
    ]
    target = ifcopenshell.file(schema="IFC4")
    new: dict[int, Any] = {}

    def value(item: Any) -> Any:
        if isinstance(item, tuple):
            return tuple(value(each) for each in item)
        if isinstance(item, ifcopenshell.entity_instance):
            return new[item.id()] if item.id() else target.create_entity(item.is_a(), item[0])
        return item

    order = _dependencies_first(made)
    start = time.perf_counter()
    for number, kind, attributes in order:
        entity = target.create_entity(kind)
        derived = {"IfcSIUnit": {0}, "IfcGeometricRepresentationSubContext": {2, 3, 4, 5}}.get(kind, set())
        for place, attribute in enumerate(attributes):
            if attribute is not None and place not in derived:
                entity[place] = value(attribute)
        new[number] = entity
    with tempfile.TemporaryDirectory() as folder:
        target.write(folder + "/model.ifc")
    return time.perf_counter() - start


def _dependencies_first(made: list[tuple[int, str, list[Any]]]) -> list[tuple[int, str, list[Any]]]:
    """The entities so that each comes after all it refers to."""
    by_id = {number: (number, kind, attributes) for number, kind, attributes in made}
    order: list[tuple[int, str, list[Any]]] = []
    seen: set[int] = set()

    def references(item: Any) -> list[int]:
        if isinstance(item, tuple | list):
            return [number for each in item for number in references(each)]
        return [item.id()] if hasattr(item, "id") and item.id() else []

    for start in by_id:
        stack = [(start, False)]
        while stack:
            number, done = stack.pop()
            if done:
                order.append(by_id[number])
            elif number not in seen:
                seen.add(number)
                stack.append((number, True))
                stack.extend((n, False) for n in references(by_id[number][2]) if n not in seen)
    return order


def distinct(shed: Shed) -> Shed:
    """The same building with a part for each piece, as a model written piece by piece would have it."""
    parts = tuple(
        replace(shed.parts[part], mark=f"{shed.parts[part].mark}.{i}")
        for i, part in enumerate(shed.pieces.part)
    )
    return replace(shed, parts=parts, pieces=replace(shed.pieces, part=np.arange(len(shed.pieces))))


def receiver(size: int) -> None:
    """Print what the library takes to open and mesh the model, mapped and with distinct shapes."""
    import ifcopenshell  # noqa: PLC0415
    import ifcopenshell.geom  # noqa: PLC0415

    shed = expand(read_text(description_text(*_SIZES[size])))
    for name, building in (("types with maps", shed), ("distinct shapes", distinct(shed))):
        with tempfile.TemporaryDirectory() as folder:
            path = Path(folder) / "model.ifc"
            with path.open("wb") as sink:
                write(building, sink)
            megabytes = path.stat().st_size / 1e6
            opening, model = timed(lambda path=path: ifcopenshell.open(path), 1)
        start = time.perf_counter()
        iterator = ifcopenshell.geom.iterator(ifcopenshell.geom.settings(), model, 1)
        count = 0
        more = iterator.initialize()
        while more:
            count += 1
            more = iterator.next()
        meshing = time.perf_counter() - start
        print(
            f"  {name:16} {megabytes:8.1f} MB  opens {opening:6.2f} s  meshes {meshing:7.1f} s  ({count} shapes)"
        )


def levels() -> None:
    """Print what each level of detail of the smallest building costs: expansion and model file."""
    description = read_text(description_text(*_SIZES[min(_SIZES)]))
    costs = {}
    for level in LEVELS:
        costs[level], data = timed(lambda level=level: model_bytes(at_level(expand(description), level)), 7)
        print(f"  {level:14} {costs[level]:6.2f} s  {len(data) / 1e6:6.2f} MB")
    print(f"fabrication / coordination: {costs['fabrication'] / costs['coordination']:.2f}")


def main() -> None:
    """Print the tables."""
    arguments = argparse.ArgumentParser(description=__doc__)
    arguments.add_argument("--receiver", action="store_true")
    arguments.add_argument("--largest", type=int, default=350_000, choices=list(_SIZES))
    arguments.add_argument("--clash", action="store_true")
    arguments.add_argument("--fittings", action="store_true", help="with --clash: with fittings too")
    arguments.add_argument("--compare", action="store_true")
    chosen = arguments.parse_args()
    if chosen.compare:
        compare_costs(description_text, 2, 140)
        watch_costs(_PRESET)
        return
    if chosen.clash:
        clash_costs(description_text, fittings=chosen.fittings)
        return
    watched = Watched((assembling, "group_parts"), (shop, "group_assemblies"))
    rows = [stages(size, watched) for size in _SIZES if size <= chosen.largest]
    for name in rows[0]:
        values = "".join(f"{row[name]:14.4g}" for row in rows)
        exponent = ""
        if name not in ("pieces", "parts", "bytes/piece", "mesh b/piece"):
            growth = math.log(rows[-1][name] / rows[-2][name]) / math.log(
                rows[-1]["pieces"] / rows[-2]["pieces"]
            )
            exponent = f"  exponent of the last step {growth:5.2f}"
        print(f"{name:14}{values}{exponent}")
    for size, row in zip(_SIZES, rows, strict=False):
        each = 1e6 / row["pieces"]
        slow = one_by_one(model_bytes(expand(read_text(description_text(*_SIZES[size])))))
        print(
            f"{row['pieces']:8.0f} pieces, us a piece: "
            f"expansion and marks {(row['expansion'] + row['marks']) * each:6.1f}, "
            f"model file {row['model file'] * each:6.1f}, mesh model {row['mesh model'] * each:6.1f}; "
            f"the library one entity at a time {slow * each:6.1f}: {slow / row['model file']:.0f} times our model file"
        )
    _run("-c", "import numpy, ifcopenshell")
    imports, _ = timed(lambda: _run("-c", "import numpy, ifcopenshell"), 5)
    print(
        f"whole build of the smallest / importing numpy and ifcopenshell: {rows[0]['whole process'] / imports:.2f}"
    )
    levels()
    if chosen.receiver:
        receiver(chosen.largest)


if __name__ == "__main__":
    main()
