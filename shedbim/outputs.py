"""The kinds of output: one function and one row each."""
# ruff: noqa: PLC0415 - a writer is imported when it writes, so that a listing or a single output starts quickly

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from difflib import get_close_matches
from typing import TYPE_CHECKING, BinaryIO

from shedbim.errors import OutputError

if TYPE_CHECKING:
    from shedbim.model.shed import Shed
    from shedbim.writers.imprint import Imprint

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
        drawn: whether it shows the shed, at the level of detail asked for; lists tell of everything.
    """

    name: str
    group: str
    file: str
    meaning: str
    write: Callable[[Shed, Imprint, BinaryIO], None]
    drawn: bool = False


def _model(shed: Shed, imprint: Imprint, sink: BinaryIO) -> None:
    from shedbim.writers.ifc import write

    write(shed, sink, schema=imprint.schema, timestamp=imprint.stamp)


def _mesh(shed: Shed, imprint: Imprint, sink: BinaryIO) -> None:
    from shedbim.writers.glb import write

    write(shed, sink, imprint)


def _schedule(module: str, name: str) -> Callable[[Shed, Imprint, BinaryIO], None]:
    """Give the writer of one schedule as CSV, by the module and function that make its table."""

    def write(shed: Shed, imprint: Imprint, sink: BinaryIO) -> None:
        from importlib import import_module

        from shedbim.writers.schedules.csv_text import csv_text

        table = getattr(import_module(f"shedbim.writers.schedules.{module}"), name)(shed)
        sink.write(csv_text(table).encode())

    return write


def _workbook(shed: Shed, imprint: Imprint, sink: BinaryIO) -> None:
    from shedbim.writers.schedules.workbook import workbook_bytes

    sink.write(workbook_bytes(shed, imprint))


def _summary(shed: Shed, imprint: Imprint, sink: BinaryIO) -> None:
    from shedbim.writers.summary import summary_text

    sink.write(summary_text(shed, imprint).encode())


def _view(shed: Shed, imprint: Imprint, sink: BinaryIO) -> None:
    from shedbim.writers.view import write

    write(shed, sink, imprint)


OUTPUTS: tuple[Output, ...] = (
    Output("model", "model", "model.ifc", "the building model", _model, drawn=True),
    Output("mesh", "mesh", "model.glb", "the model as meshes, for any 3D viewer", _mesh, drawn=True),
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
    Output("workbook", "schedules", "schedule.xlsx", "all schedules in one workbook that prints", _workbook),
    Output(
        "view",
        "view",
        "view.html",
        "the building in three dimensions, for a browser, as one file",
        _view,
        drawn=True,
    ),
    Output("summary", "summary", "summary.json", "counts, masses, defaults and cautions", _summary),
)


def chosen(names: Sequence[str]) -> tuple[Output, ...]:
    """Give the rows chosen by names or group names, each once and in order; no names choose all.

    Raises:
        OutputError: when a name is neither, with the names there are and the nearest one.
    """
    known = list(dict.fromkeys(word for row in OUTPUTS for word in (row.name, row.group)))
    for name in names:
        if name not in known:
            near = get_close_matches(name, known, 1)
            hint = f"; nearest: {near[0]}" if near else ""
            raise OutputError(f"no output {name!r}; there are: {', '.join(sorted(known))}{hint}")
    return tuple(row for row in OUTPUTS if not names or row.name in names or row.group in names)
