"""The kinds of output: one function and one row each."""
# ruff: noqa: PLC0415 - a writer is imported when it writes, so that a listing or a single output starts quickly

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from difflib import get_close_matches
from typing import TYPE_CHECKING, BinaryIO

from shedbim.errors import OutputError

if TYPE_CHECKING:
    from shedbim.writers.handover import Handover
    from shedbim.writers.view.shown import ShownChange

__all__ = [
    "LABEL_NAMES",
    "LEVEL_NAMES",
    "OUTPUTS",
    "PICTURE_ENDINGS",
    "SCHEMAS",
    "VIEW_NAMES",
    "Output",
    "chosen",
]

#: Schemas of the model file, the default first.
SCHEMAS = ("IFC4", "IFC4X3_ADD2", "IFC2X3")

#: Levels of detail that models and pictures show, the default first; a test holds them against ``model.levels``.
LEVEL_NAMES = ("coordination", "fabrication", "outline")

#: Views that pictures are drawn of; a test holds them against the table of views, which needs numpy.
VIEW_NAMES = ("isometric", "back", "front", "side", "plan", "frame", "bay", "piece", "place")

#: What can be written on pictures, and the endings of their files; held against the pictures' own tables likewise.
LABEL_NAMES = ("none", "grid", "marks", "keys")
PICTURE_ENDINGS = ("png", "svg")


@dataclass(frozen=True)
class Output:
    """One kind of output.

    Attributes:
        name: how it is chosen.
        group: the name that chooses it together with its like.
        file: its file name.
        meaning: what is in it.
        write: writes its bytes to a binary sink.
        checked: whether it tells of findings and of nothing else, so that the shed has to be checked for it.
    """

    name: str
    group: str
    file: str
    meaning: str
    write: Callable[[Handover, BinaryIO], None]
    checked: bool = False


def _model(handover: Handover, sink: BinaryIO) -> None:
    from shedbim.writers.ifc import write

    write(handover.drawn, sink, schema=handover.imprint.schema, timestamp=handover.imprint.stamp)


def _mesh(handover: Handover, sink: BinaryIO) -> None:
    from shedbim.writers.glb import write

    write(handover.drawn, sink, handover.imprint)


def _schedule(module: str, name: str) -> Callable[[Handover, BinaryIO], None]:
    """Give the writer of one schedule as CSV, by the module and function that make its table."""

    def write(handover: Handover, sink: BinaryIO) -> None:
        from importlib import import_module

        from shedbim.writers.schedules.csv_text import csv_text

        table = getattr(import_module(f"shedbim.writers.schedules.{module}"), name)(handover.shed)
        sink.write(csv_text(table).encode())

    return write


def _passages(handover: Handover, sink: BinaryIO) -> None:
    from shedbim.writers.schedules.csv_text import csv_text
    from shedbim.writers.schedules.passages import passages

    sink.write(csv_text(passages(handover.shed, handover.criteria)).encode())


def _workbook(handover: Handover, sink: BinaryIO) -> None:
    from shedbim.writers.schedules.workbook import workbook_bytes

    groups = None if handover.changes is None else handover.change_groups
    sink.write(workbook_bytes(handover.shed, handover.imprint, handover.findings, groups))


def _summary(handover: Handover, sink: BinaryIO) -> None:
    from shedbim.writers.summary import summary_text

    sink.write(summary_text(handover.shed, handover.imprint, handover.findings).encode())


def _view(handover: Handover, sink: BinaryIO) -> None:
    from shedbim.writers.view import write
    from shedbim.writers.view.found import shown_findings

    shown = shown_findings(handover.shed, handover.findings or (), handover.drawn)
    changes: list[ShownChange] = []
    if handover.changes is not None:
        from shedbim.writers.view.changed import shown_changes

        changes = shown_changes(handover.shed, handover.changes, handover.change_groups, handover.drawn)
    write(handover.drawn, sink, handover.imprint, findings=shown, changes=changes)


def _findings(handover: Handover, sink: BinaryIO) -> None:
    from shedbim.writers.findings import findings_text

    sink.write(findings_text(handover).encode())


def _topics(version: str) -> Callable[[Handover, BinaryIO], None]:
    """Give the writer of findings as topics, in the form of a version of the standard."""

    def write(handover: Handover, sink: BinaryIO) -> None:
        from shedbim.writers.bcf import write

        write(handover, sink, version)

    return write


OUTPUTS: tuple[Output, ...] = (
    Output("model", "model", "model.ifc", "the building model", _model),
    Output("mesh", "mesh", "model.glb", "the model as meshes, for any 3D viewer", _mesh),
    Output("members", "schedules", "members.csv", "members by mark", _schedule("tables", "members")),
    Output(
        "plates", "schedules", "plates.csv", "plates and fittings by mark", _schedule("fittings", "fittings")
    ),
    Output(
        "bolts", "schedules", "bolts.csv", "bolts, nuts and washers to buy", _schedule("fasteners", "bolts")
    ),
    Output(
        "anchors",
        "schedules",
        "anchors.csv",
        "anchor bolts and their places",
        _schedule("fasteners", "anchors"),
    ),
    Output("welds", "schedules", "welds.csv", "welds by what they join", _schedule("fasteners", "welds")),
    Output("holes", "schedules", "holes.csv", "holes by mark and size", _schedule("fittings", "holes")),
    Output(
        "assemblies", "schedules", "assemblies.csv", "assemblies by mark", _schedule("tables", "assemblies")
    ),
    Output(
        "part-lists",
        "schedules",
        "part-lists.csv",
        "what each shop assembly is made of",
        _schedule("fittings", "part_lists"),
    ),
    Output(
        "finishes", "schedules", "finishes.csv", "what is to be coated", _schedule("fittings", "finishes")
    ),
    Output(
        "sections",
        "schedules",
        "sections.csv",
        "totals by section, by role and of everything",
        _schedule("tables", "totals"),
    ),
    Output("passages", "schedules", "passages.csv", "ducts that pass through the trusses", _passages),
    Output("workbook", "schedules", "schedule.xlsx", "all schedules in one workbook that prints", _workbook),
    Output(
        "view",
        "view",
        "view.html",
        "the building in three dimensions, for a browser, as one file",
        _view,
    ),
    Output(
        "findings", "findings", "findings.json", "findings of the checks as data", _findings, checked=True
    ),
    Output(
        "bcf-2.1",
        "bcf",
        "findings.bcf",
        "findings as topics for coordination, BCF 2.1",
        _topics("2.1"),
        checked=True,
    ),
    Output(
        "bcf-3.0",
        "bcf",
        "findings-3.0.bcf",
        "findings as topics for coordination, BCF 3.0",
        _topics("3.0"),
        checked=True,
    ),
    Output("summary", "summary", "summary.json", "counts, masses, defaults and cautions", _summary),
)


def chosen(names: Sequence[str], *, checked: bool = True) -> tuple[Output, ...]:
    """Give the rows chosen by names or group names, each once and in order; no names choose all.

    Args:
        names: of outputs or groups.
        checked: whether the shed was checked; if not, what tells of findings is no part of all.

    Raises:
        OutputError: when a name is neither, with the names there are and the nearest one; when what is chosen tells
            of findings and the shed was not checked.
    """
    known = list(dict.fromkeys(word for row in OUTPUTS for word in (row.name, row.group)))
    for name in names:
        if name not in known:
            near = get_close_matches(name, known, 1)
            hint = f"; nearest: {near[0]}" if near else ""
            raise OutputError(f"no output {name!r}; there are: {', '.join(sorted(known))}{hint}")
    if not names:
        return tuple(row for row in OUTPUTS if checked or not row.checked)
    rows = tuple(row for row in OUTPUTS if row.name in names or row.group in names)
    if not checked and (told := [row.name for row in rows if row.checked]):
        raise OutputError(
            f"cannot write {', '.join(told)}: the shed was not checked, so there are no findings"
        )
    return rows
