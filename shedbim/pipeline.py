"""The order of the stages: read, expand, write. No engineering here."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace
from datetime import datetime
from functools import cached_property, partial
from hashlib import sha256
from pathlib import Path

import numpy as np

from shedbim.checks.checking import check
from shedbim.checks.finding import Finding
from shedbim.description import Description, read_text
from shedbim.description.labelled import labelled
from shedbim.description.reading import placed
from shedbim.description.source import printable, read_source
from shedbim.errors import DescriptionError, Fault, OutputError, RegisterError
from shedbim.expand import expand
from shedbim.limits import Criteria
from shedbim.model.shed import Shed
from shedbim.outputs import LEVEL_NAMES, SCHEMAS, chosen
from shedbim.readers import read_other
from shedbim.readers.registers import read_register, register_path
from shedbim.revisions.changes import Changes
from shedbim.revisions.codes import next_revision
from shedbim.revisions.comparing import compare
from shedbim.revisions.labels import kept_labels
from shedbim.revisions.register import Register
from shedbim.revisions.snapshot import snapshot
from shedbim.revisions.under_register import under_register
from shedbim.saving import save
from shedbim.writers.handover import Handover
from shedbim.writers.imprint import UNDATED, Imprint

__all__ = [
    "BuildResult",
    "Progress",
    "Read",
    "build",
    "default_folder",
    "digest",
    "expanded",
    "read_and_expand",
    "read_under_register",
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
        findings: of the checks, the severe first; None where the shed was not checked.
        changes: since the last issue; None where nothing was issued.
    """

    description: Description
    shed: Shed
    imprint: Imprint
    folder: Path
    files: dict[str, Path]
    findings: tuple[Finding, ...] | None = None
    changes: Changes | None = None

    @property
    def handover(self) -> Handover:
        """What the outputs were written from."""
        return Handover(self.shed, self.imprint, self.findings, self.changes)


@dataclass(frozen=True, eq=False)
class Read:
    """A description as read, the shed it means, its text, and the register beside it, where there is one."""

    description: Description
    shed: Shed
    text: str
    register: Register | None

    @cached_property
    def changes(self) -> Changes | None:
        """What changed since the last issue; None where nothing was issued."""
        return None if self.register is None else compare(self.register.last, snapshot(self.shed))


def build(
    path: Path | str,
    out: Path | str | None = None,
    *,
    settings: Sequence[str] = (),
    schema: str = SCHEMAS[0],
    level: str = LEVEL_NAMES[0],
    outputs: Sequence[str] = (),
    checks: bool = True,
    against: Sequence[Path | str] = (),
    timestamp: datetime = UNDATED,
    progress: Progress | None = None,
) -> BuildResult:
    """Build the outputs of a description file; all of them are written, or none.

    Args:
        path: the description.
        out: folder of the outputs, made when it is not there; that of ``default_folder`` where not given.
        settings: fields set over those of the file for this run, each as ``building.roof.pitch=8 deg``.
        schema: of the model file, one of ``SCHEMAS``.
        level: how much the models show, one of ``LEVEL_NAMES``; lists tell of everything.
        outputs: names or groups of outputs; all where not given.
        checks: whether the shed is checked; without, what tells of findings is not written.
        against: models of other trades that the shed is checked against.
        timestamp: written into the outputs; a fixed one where not given.
        progress: called as the work goes on.

    Raises:
        DescriptionError: when the description is refused, with all its faults.
        OutputError: when a name of an output, a schema or a level is unknown, or the outputs cannot be written.
        ModelError: when the program is at fault.
    """
    total = 2 + checks + len(chosen(outputs, checked=checks))
    if schema not in SCHEMAS:
        raise OutputError(f"no schema {schema!r}; there are: {', '.join(SCHEMAS)}")
    if level not in LEVEL_NAMES:
        raise OutputError(f"no level of detail {level!r}; there are: {', '.join(LEVEL_NAMES)}")
    path = Path(path)
    folder = default_folder(path, settings) if out is None else Path(out)
    tell = progress or _silent
    read = read_under_register(path, lambda name, done: tell(name, done, total), settings=settings)
    description, shed = read.description, read.shed
    findings = None
    if checks:
        others = tuple(read_other(each, lambda line: tell(line, 2, total)) for each in against)
        findings = tuple(
            check(
                shed,
                description.checks.criteria,
                others=others,
                tell=lambda name: tell(f"checking {name}", 2, total),
            )
        )
    imprint = Imprint(timestamp, schema, digest(read.text, settings), level=level, settings=tuple(settings))
    files = write_outputs(
        shed,
        folder,
        outputs,
        imprint=imprint,
        findings=findings,
        changes=read.changes,
        held_against=description.checks.criteria,
        progress=lambda name, done, _: tell(f"writing {name}", 2 + checks + done, total),
    )
    tell("done", total, total)
    return BuildResult(description, shed, imprint, folder, files, findings, read.changes)


def default_folder(path: Path, settings: Sequence[str] = ()) -> Path:
    """Give the folder of the outputs of a description; with settings another, so that they stand in for nothing."""
    return Path("outputs") / (f"{path.stem}-what-if" if settings else path.stem)


def read_and_expand(
    path: Path,
    tell: Callable[[str, int], None] = lambda name, done: None,
    *,
    settings: Sequence[str] = (),
) -> tuple[Description, Shed, str]:
    """Give the description in a file, the shed it means, and its text.

    Args:
        path: the description.
        tell: called with the name of a stage before it starts, and its number.
        settings: fields set over those of the file, each as ``path=value``; the shed's notes tell of them.

    Raises:
        DescriptionError: when the description is refused, or what it means cannot be built.
        RegisterError: when the register beside it is damaged, or is of another project.
    """
    read = read_under_register(path, tell, settings=settings)
    return read.description, read.shed, read.text


def read_under_register(
    path: Path,
    tell: Callable[[str, int], None] = lambda name, done: None,
    *,
    settings: Sequence[str] = (),
) -> Read:
    """Give what ``read_and_expand`` gives, with the register beside the description."""
    tell("reading the description", 0)
    text, name = read_source(path), printable(str(path))
    description = read_text(text, name, settings)
    register = read_register(register_path(path))
    tell("expanding", 1)
    try:
        shed = expanded(description, register, digest(text, settings))
    except DescriptionError as error:
        raise placed(error, text, name, settings) from None
    set_here = tuple(f"Not as in the description file, but set for this run: {each}" for each in settings)
    return Read(description, replace(shed, notes=(*set_here, *shed.notes)), text, register)


def expanded(description: Description, register: Register | None = None, text_digest: str = "") -> Shed:
    """Give the shed that a description means, under its register where there is one.

    A revision that was issued already stands for what was issued: where the description is another one since, the
    shed has the next.

    Args:
        description: as read.
        register: of its issues.
        text_digest: of the description; see ``digest``.

    Raises:
        DescriptionError: when what it means cannot be built.
        RegisterError: when the register is of another project.
    """
    if register is None:
        return expand(description)
    if register.project_id != str(description.project_id):
        raise RegisterError([Fault("it belongs to another project", "project.id", register.project_id)])
    building = description.building
    letters, numbers = (
        kept_labels(live, np.concatenate([[0.0], np.cumsum(steps)]).tolist(), gone)
        for steps, (live, gone) in (
            (building.spans, register.labels("letter")),
            (building.bays, register.labels("number")),
        )
    )
    shed = expand(labelled(description, letters, numbers))
    codes = [issue.revision for issue in register.issues]
    if shed.project.revision in codes and text_digest != register.issues[-1].digest:
        following = next_revision(codes, register.issues[-1].status)
        shed = replace(shed, project=replace(shed.project, revision=following))
    return under_register(shed, register)


def write_outputs(
    shed: Shed,
    folder: Path | str,
    outputs: Sequence[str] = (),
    *,
    imprint: Imprint = _PLAIN,
    findings: Sequence[Finding] | None = None,
    changes: Changes | None = None,
    held_against: Criteria | None = None,
    progress: Progress | None = None,
) -> dict[str, Path]:
    """Write outputs of a shed into a folder, all or none of them; give the path of each by its name.

    Args:
        folder: made when it is not there.
        outputs: names or groups of outputs; all where not given.
        imprint: schema, level of detail, time stamp and digest that the outputs state.
        findings: as ``checks.check`` gives them; None where the shed was not checked: what tells of findings and of
            nothing else is then not written.
        changes: since the last issue; None where nothing was issued.
        held_against: limits that outputs obey; those of the tables where not given.
        progress: called as ``saving.save`` calls it.

    Raises:
        OutputError: when a name is unknown, findings are to be told and there are none, or a file cannot be written;
            what stood there is untouched.
    """
    rows = chosen(outputs, checked=findings is not None)
    told = None if findings is None else tuple(findings)
    handover = Handover(shed, imprint, told, changes, held_against)
    writers = {row.file: partial(row.write, handover) for row in rows}
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


def digest(text: str, settings: Sequence[str] = ()) -> str:
    """Give the SHA-256 of a description's bytes in UTF-8, a zero byte before each setting, as 64 hex digits."""
    return sha256("\0".join((text, *settings)).encode()).hexdigest()


def _silent(stage: str, done: int, total: int) -> None:
    """Tell nobody."""
