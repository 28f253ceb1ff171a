"""A register as text, and the register of a text."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import replace
from zlib import crc32

import numpy as np
from numpy.typing import NDArray

from shedbim.errors import Fault, RegisterError, ShedbimError
from shedbim.model.roles import Role
from shedbim.model.shed import Grid, Part
from shedbim.revisions.register import Issue, IssuedAssembly, IssuedLine, IssuedMark, Register
from shedbim.revisions.register_lines import FORMAT, checked, joined, parted
from shedbim.revisions.shape_text import shape_of, shape_text
from shedbim.revisions.snapshot import Snapshot

__all__ = ["Words", "register_from", "register_of", "register_text"]

Words = tuple[str, ...]

_LIVE, _GONE = "live", "gone"


def register_text(register: Register) -> str:
    """Give a register as text: UTF-8, one thing a line."""
    return joined(_lines(register))


def register_of(text: str, file: str) -> Register:
    """Give the register of a text.

    Args:
        text: as ``register_text`` gives it.
        file: its name, for messages.

    Raises:
        RegisterError: when the text is damaged or is no register, with every damaged line.
    """
    if faults := checked(text, file):
        raise RegisterError(faults)
    lines: dict[str, list[Words]] = defaultdict(list)
    try:
        for _, (word, *rest) in parted(text):
            lines[word].append(tuple(rest))
        return register_from(lines)
    except (ValueError, KeyError, IndexError, ShedbimError) as fault:
        raise RegisterError(
            [Fault(f"it cannot be read by this program: {fault}", file=file, line=1, column=1)]
        ) from fault


def _lines(register: Register) -> Iterator[Words]:
    """The lines of a register, each a tuple of words."""
    last = register.last
    yield (*FORMAT, register.project_id)
    for issue in register.issues:
        yield ("issue", issue.revision, issue.status, issue.date, issue.reason, issue.digest)
    for line in register.lines:
        yield ("line", line.axis, line.label, repr(line.place), _LIVE if line.live else _GONE)
    for mark in register.marks:
        yield ("mark", mark.mark, _LIVE if mark.live else _GONE, mark.revision, str(mark.quantity))
    for part in register.parts:
        yield ("part", part.mark, part.role.name, part.grade, part.finish, shape_text(part.shape))
    turns, turned = _turns(last.placement)
    yield from sorted(("turn", *words) for words in turns)
    keys = [each.key for each in register.assemblies]
    for each in sorted(register.assemblies, key=lambda one: (one.parent >= 0, one.key)):
        parent = keys[each.parent] if each.parent >= 0 else ""
        yield ("assembly", each.key, each.name if each.name != each.key else "", each.mark, parent)
    places = np.round(last.placement[:, :, 3], 3) + 0.0
    columns = zip(
        last.keys,
        register.names,
        last.ids,
        last.part.tolist(),
        register.assembly.tolist(),
        turned,
        places.tolist(),
        last.joints.tolist(),
        strict=True,
    )
    for key, name, each_id, part, owner, turn, place, joints in sorted(columns):
        yield (
            "piece",
            key,
            "" if name == key else name,
            each_id,
            last.parts[part].mark,
            keys[owner] if owner >= 0 else "",
            turn,
            *(f"{value:g}" if value == int(value) else repr(value) for value in place),
            f"{joints:x}",
        )


def _turns(placement: NDArray[np.float64]) -> tuple[list[Words], list[str]]:
    """The distinct rotations as words, each named after what it is, and the name of that of each piece."""
    rows = np.round(placement[:, :, :3].reshape(-1, 9), 9) + 0.0
    distinct, which = np.unique(rows, axis=0, return_inverse=True)
    texts = [" ".join(repr(value) for value in row) for row in distinct.tolist()]
    names = [f"{crc32(text.encode()):08x}" for text in texts]
    if len(set(names)) < len(names):
        names = [f"{name}{number}" for number, name in enumerate(names)]
    return list(zip(names, texts, strict=True)), [names[each] for each in which.reshape(-1).tolist()]


def register_from(lines: Mapping[str, Sequence[Words]]) -> Register:
    """Give the register of lines by their first word, each without it.

    Raises:
        ValueError, KeyError: when lines do not belong together.
    """
    lines = dict(lines)
    ((version, project_id),) = lines.pop(FORMAT[0])
    if version != FORMAT[1]:
        raise ValueError(f"its form is version {version}, this program knows version {FORMAT[1]}")
    grid_lines = tuple(IssuedLine(w[0], w[1], float(w[2]), w[3] == _LIVE) for w in lines.pop("line"))
    parts = tuple(Part(w[0], Role[w[1]], shape_of(w[4]), w[2], w[3]) for w in lines.pop("part"))
    marks = tuple(IssuedMark(w[0], w[1] == _LIVE, w[2], int(w[3])) for w in lines.pop("mark"))
    revision = {mark.mark: mark.revision for mark in marks}
    parts = tuple(replace(part, revision=revision[part.mark]) for part in parts)
    assemblies, row = _assemblies(lines.pop("assembly", []))
    turns = {name: np.array(text.split(), float) for name, text in lines.pop("turn", [])}
    issues = tuple(Issue(*words) for words in lines.pop("issue"))
    pieces = lines.pop("piece", [])
    if lines:
        raise ValueError(f"lines of an unknown kind: {', '.join(sorted(lines))}")
    assembly = np.array([row[w[4]] if w[4] else -1 for w in pieces], np.int64)
    placement = np.empty((len(pieces), 3, 4))
    if pieces:
        placement[:, :, :3] = np.array([turns[w[5]] for w in pieces]).reshape(-1, 3, 3)
        placement[:, :, 3] = np.array([w[6:9] for w in pieces], float)
    number = {part.mark: i for i, part in enumerate(parts)}
    last = Snapshot(
        project_id=project_id,
        revision=issues[-1].revision,
        grid=_grid(grid_lines),
        parts=parts,
        ids=tuple(w[2] for w in pieces),
        keys=tuple(w[0] for w in pieces),
        part=np.array([number[w[3]] for w in pieces], np.int64),
        placement=placement,
        joints=np.array([int(w[9], 16) for w in pieces], np.uint64),
        assembly=tuple(assemblies[each].mark if each >= 0 else "" for each in assembly.tolist()),
    )
    names = tuple(w[1] or w[0] for w in pieces)
    return Register(project_id, issues, grid_lines, marks, parts, assemblies, names, assembly, last)


def _assemblies(lines: Sequence[Words]) -> tuple[tuple[IssuedAssembly, ...], dict[str, int]]:
    """The assemblies of their lines, and the row of each by its path."""
    row = {words[0]: i for i, words in enumerate(lines)}
    made = tuple(IssuedAssembly(w[0], w[1] or w[0], w[2], row[w[3]] if w[3] else -1) for w in lines)
    return made, row


def _grid(lines: Sequence[IssuedLine]) -> Grid:
    """The grid of the live lines."""
    letters, numbers = (
        sorted((line.place, line.label) for line in lines if line.live and line.axis == axis)
        for axis in ("letter", "number")
    )
    return Grid(
        tuple(label for _, label in letters),
        tuple(place for place, _ in letters),
        tuple(label for _, label in numbers),
        tuple(place for place, _ in numbers),
    )
