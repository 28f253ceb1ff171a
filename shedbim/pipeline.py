"""The order of the stages: read, expand, write. No engineering here."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from datetime import datetime
from functools import partial
from hashlib import sha256
from pathlib import Path

from shedbim.description import Description, read_text
from shedbim.description.reading import placed
from shedbim.description.source import printable, read_source
from shedbim.errors import DescriptionError, OutputError
from shedbim.expand import expand
from shedbim.model.levels import at_level
from shedbim.model.shed import Shed
from shedbim.outputs import LEVEL_NAMES, SCHEMAS, chosen
from shedbim.saving import save
from shedbim.writers.imprint import UNDATED, Imprint

__all__ = [
    "BuildResult",
    "Progress",
    "build",
    "digest",
    "read_and_expand",
    "write_model",
    "write_outputs",
    "write_schedules",
    "write_summary",
]

#: Called with the name of a stage before it starts, the stages done and all stages; and once at the end.
Progress = Callable[[str, int, int], None]

_PLAIN = Imprint()


@dataclass(frozen=True, eq=False)
class BuildResult:
    """What a build came to.

    Attributes:
        description: as read.
        shed: as expanded.
        imprint: what the outputs state of where they come from.
        folder: where the outputs are.
        files: path of each output by its name, in the order of the table of outputs.
    """

    description: Description
    shed: Shed
    imprint: Imprint
    folder: Path
    files: dict[str, Path]


def build(
    path: Path | str,
    out: Path | str | None = None,
    *,
    schema: str = SCHEMAS[0],
    level: str = LEVEL_NAMES[0],
    outputs: Sequence[str] = (),
    timestamp: datetime = UNDATED,
    progress: Progress | None = None,
) -> BuildResult:
    """Build the outputs of a description file; all of them are written, or none.

    Args:
        path: the description.
        out: folder of the outputs, made when it is not there; ``outputs/<file stem>`` where not given.
        schema: of the model file, one of ``SCHEMAS``.
        level: how much the models show, one of ``LEVEL_NAMES``; lists tell of everything.
        outputs: names or groups of outputs; all where not given.
        timestamp: written into the outputs; a fixed one where not given.
        progress: called as the work goes on.

    Raises:
        DescriptionError: when the description is refused, with all its faults.
        OutputError: when a name of an output, a schema or a level is unknown, or the outputs cannot be written.
        ModelError: when the program is at fault.
    """
    total = 2 + len(chosen(outputs))
    if schema not in SCHEMAS:
        raise OutputError(f"no schema {schema!r}; there are: {', '.join(SCHEMAS)}")
    if level not in LEVEL_NAMES:
        raise OutputError(f"no level of detail {level!r}; there are: {', '.join(LEVEL_NAMES)}")
    path = Path(path)
    folder = Path("outputs") / path.stem if out is None else Path(out)
    tell = progress or _silent
    description, shed, text = read_and_expand(path, lambda name, done: tell(name, done, total))
    imprint = Imprint(timestamp, schema, digest(text), level=level)
    files = write_outputs(
        shed,
        folder,
        outputs,
        imprint=imprint,
        progress=lambda name, done, _: tell(f"writing {name}", 2 + done, total),
    )
    tell("done", total, total)
    return BuildResult(description, shed, imprint, folder, files)


def read_and_expand(
    path: Path, tell: Callable[[str, int], None] = lambda name, done: None
) -> tuple[Description, Shed, str]:
    """Give the description in a file, the shed it means, and its text.

    Args:
        path: the description.
        tell: called with the name of a stage before it starts, and its number.

    Raises:
        DescriptionError: when the description is refused, or what it means cannot be built.
    """
    tell("reading the description", 0)
    text, name = read_source(path), printable(str(path))
    description = read_text(text, name)
    tell("expanding", 1)
    try:
        return description, expand(description), text
    except DescriptionError as error:
        raise placed(error, text, name) from None


def write_outputs(
    shed: Shed,
    folder: Path | str,
    outputs: Sequence[str] = (),
    *,
    imprint: Imprint = _PLAIN,
    progress: Progress | None = None,
) -> dict[str, Path]:
    """Write outputs of a shed into a folder, all or none of them; give the path of each by its name.

    Args:
        folder: made when it is not there.
        outputs: names or groups of outputs; all where not given.
        imprint: schema, level of detail, time stamp and digest that the outputs state.
        progress: called as ``saving.save`` calls it.

    Raises:
        OutputError: when a name is unknown, or a file cannot be written; what stood there is untouched.
    """
    rows = chosen(outputs)
    drawn = at_level(shed, imprint.level) if any(row.drawn for row in rows) else shed
    writers = {row.file: partial(row.write, drawn if row.drawn else shed, imprint) for row in rows}
    paths = save(Path(folder), writers, progress)
    return {row.name: path for row, path in zip(rows, paths, strict=True)}


def write_model(shed: Shed, folder: Path | str, *, imprint: Imprint = _PLAIN) -> dict[str, Path]:
    """Write the model file of a shed; see ``write_outputs``."""
    return write_outputs(shed, folder, ("model",), imprint=imprint)


def write_schedules(shed: Shed, folder: Path | str, *, imprint: Imprint = _PLAIN) -> dict[str, Path]:
    """Write the schedules of a shed, as CSV and as a workbook; see ``write_outputs``."""
    return write_outputs(shed, folder, ("schedules",), imprint=imprint)


def write_summary(shed: Shed, folder: Path | str, *, imprint: Imprint = _PLAIN) -> dict[str, Path]:
    """Write the summary of a shed; see ``write_outputs``."""
    return write_outputs(shed, folder, ("summary",), imprint=imprint)


def digest(text: str) -> str:
    """Give the SHA-256 of a description's bytes in UTF-8 as 64 hexadecimal digits."""
    return sha256(text.encode()).hexdigest()


def _silent(stage: str, done: int, total: int) -> None:
    """Tell nobody."""
