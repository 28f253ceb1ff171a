"""Two states of a building compared, from whatever files tell them: descriptions, registers, model files."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace
from functools import partial
from pathlib import Path
from typing import BinaryIO

from shedbim.description.source import printable
from shedbim.errors import ComparisonError
from shedbim.model.identity import global_ids
from shedbim.model.shed import ProjectInfo, Shed
from shedbim.pipeline import digest, read_under_register
from shedbim.readers.model_states import read_model_state
from shedbim.readers.registers import read_register, register_path
from shedbim.revisions.comparing import compare
from shedbim.revisions.model_states import ModelState, compare_models
from shedbim.revisions.snapshot import Snapshot, snapshot
from shedbim.saving import save
from shedbim.writers.changes import changes_text
from shedbim.writers.comparison import Comparison
from shedbim.writers.imprint import Imprint

__all__ = ["CHANGES_FILES", "compared", "write_comparison"]

#: Files of a comparison, and what is in them.
CHANGES_FILES = {
    "changes.json": "the changes as data, piece by piece",
    "changes.xlsx": "the changes as a workbook",
    "changes.bcf": "the changes as topics for coordination, BCF 2.1",
    "view.html": "the later state for a browser, to be coloured by change",
}
_OTHER_MARKS = (
    "Without a register marks are counted anew in every build, so a change of one part gives others another mark; "
    "`shedbim issue` keeps them."
)


@dataclass(frozen=True, eq=False)
class _Told:
    """A state as a file tells it."""

    name: str
    state: Snapshot | ModelState
    shed: Shed | None = None
    digest: str = ""
    registered: bool = True


def compared(
    old: Path, new: Path | None = None, settings: Sequence[str] = (), imprint: Imprint | None = None
) -> Comparison:
    """Give what became of each piece from one state to another.

    Args:
        old: the earlier state: a description, a register or a model file.
        new: the later one; where not given, ``old`` is a description, and it is compared with what it would be under
            ``settings``, or from what was last issued of it where there are none.
        settings: fields set over those of the file, each as ``path=value``.
        imprint: what the outputs state besides.

    Raises:
        ComparisonError: when the two cannot be compared.
        ShedbimError: when a file is refused.
    """
    if new is not None and settings:
        raise ComparisonError("--set is for one description, which is compared with what it would be")
    if new is None:
        before, after = _of_one(old, settings)
    else:
        before, after = _told(old), _told(new)
    notes = [*_remarks(before), *_remarks(after)]
    if isinstance(before.state, ModelState) and isinstance(after.state, ModelState):
        if not set(before.state.ids) & set(after.state.ids) and len(before.state) and len(after.state):
            notes.append(
                "The two models share no GlobalId: they are of two buildings, or were not exported alike."
            )
        changes = compare_models(before.state, after.state)
        project, guid = after.state.project, after.state.project_id
    elif isinstance(before.state, Snapshot) and isinstance(after.state, Snapshot):
        if before.state.project_id != after.state.project_id:
            before, note = _as_one_project(before, after)
            notes.append(note)
        if not (before.registered and after.registered):
            notes.append(_OTHER_MARKS)
        changes = compare(before.state, after.state)  # type: ignore[arg-type]  # a project is not a kind of state
        project = "" if after.shed is None else after.shed.project.name
        (guid,) = global_ids(after.state.project_id, ["project"])
    else:
        raise ComparisonError(
            "a model file is compared with another model file: write one, and compare the two"
        )
    made = replace(imprint or Imprint(), digest=after.digest, settings=tuple(settings))
    model = new.name if new is not None and isinstance(after.state, ModelState) else "model.ifc"
    return Comparison(
        changes, (before.name, after.name), project, guid, model, after.shed, tuple(notes), made
    )


def write_comparison(comparison: Comparison, folder: Path) -> list[Path]:
    """Write the files of a comparison into a folder, all or none of them; give their paths.

    There is no view where the later state is no description.

    Raises:
        OutputError: when a file cannot be written; what stood there is untouched.
    """
    writers: dict[str, Callable[[BinaryIO], object]] = {
        "changes.json": lambda sink: sink.write(changes_text(comparison).encode("utf-8", "replace")),
        "changes.xlsx": partial(_workbook, comparison),
        "changes.bcf": partial(_topics, comparison),
    }
    if comparison.shed is not None:
        writers["view.html"] = partial(_view, comparison)
    return list(save(folder, writers))


def _of_one(file: Path, settings: Sequence[str]) -> tuple[_Told, _Told]:
    """A description and what it would be, or what was issued of it and what it is."""
    if _ending(file) in (".ifc", ".register"):
        raise ComparisonError(f"{file}: it is compared with a second file; one alone is a description")
    if settings:
        return _told(file), _described(file, settings)
    target = register_path(file)
    if not target.exists():
        raise ComparisonError(
            f"{file}: nothing was issued of it, there is no {target}; give a second file, or --set"
        )
    return _told(target), _told(file)


def _told(file: Path) -> _Told:
    """The state that a file tells, by the ending of its name."""
    if _ending(file) == ".ifc":
        return _Told(printable(str(file)), read_model_state(file))
    if _ending(file) == ".register":
        register = read_register(file)
        if register is None:
            raise ComparisonError(f"{file}: there is no such file")
        return _Told(f"{printable(str(file))}, {register.issues[-1].revision} as issued", register.last)
    return _described(file, ())


def _described(file: Path, settings: Sequence[str]) -> _Told:
    read = read_under_register(file, settings=settings)
    name = " ".join((printable(str(file)), *(f"--set {each}" for each in settings)))
    made = digest(read.text, settings)
    return _Told(name, snapshot(read.shed), read.shed, made, read.register is not None)


def _ending(file: Path) -> str:
    return file.suffix.lower()


def _remarks(told: _Told) -> tuple[str, ...]:
    return told.state.remarks if isinstance(told.state, ModelState) else ()


def _as_one_project(before: _Told, after: _Told) -> tuple[_Told, str]:
    """The earlier state with the ids that the later project would give its pieces, met by key; and what to know."""
    if before.shed is None:
        raise ComparisonError(
            f"{before.name} and {after.name} are of two projects: their ids have nothing in common"
        )
    own = replace(before.shed, project=replace(before.shed.project, id=after.state.project_id))
    note = "The two descriptions are of two projects, so their pieces are met by key and not by GlobalId."
    return replace(before, state=snapshot(own), shed=own), note


def _workbook(comparison: Comparison, sink: BinaryIO) -> None:
    from shedbim.writers.schedules.changes import change_tables  # noqa: PLC0415 - only where files are asked for
    from shedbim.writers.schedules.workbook import changes_bytes  # noqa: PLC0415 - as above

    changes, imprint = comparison.changes, comparison.imprint
    about = [
        ("Project", comparison.project),
        ("Before", comparison.names[0]),
        ("After", comparison.names[1]),
        ("Made by", f"shedbim {imprint.version}"),
        ("Time stamp", imprint.stamp),
        *(("Note", note) for note in comparison.notes),
    ]
    sink.write(changes_bytes(_project(comparison), change_tables(changes, comparison.groups), about, imprint))


def _topics(comparison: Comparison, sink: BinaryIO) -> None:
    from shedbim.writers.bcf import write_topics  # noqa: PLC0415 - as above
    from shedbim.writers.bcf.change_topics import change_topics  # noqa: PLC0415 - as above

    project, guid = _project(comparison), comparison.project_guid
    write_topics(project, guid, change_topics(comparison), sink, "2.1", comparison.model)


def _view(comparison: Comparison, sink: BinaryIO) -> None:
    from shedbim.writers.view import write  # noqa: PLC0415 - as above
    from shedbim.writers.view.changed import shown_changes  # noqa: PLC0415 - as above

    if comparison.shed is not None and comparison.drawn is not None:
        shown = shown_changes(comparison.shed, comparison.changes, comparison.groups, comparison.drawn)
        write(comparison.drawn, sink, comparison.imprint, changes=shown)


def _project(comparison: Comparison) -> ProjectInfo:
    after = comparison.changes.after
    number = "" if comparison.shed is None else comparison.shed.project.number
    return ProjectInfo(after.project_id, comparison.project, number, after.revision)
