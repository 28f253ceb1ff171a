"""The register after an issue: what was issued now, and everything that was ever issued before."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterable
from dataclasses import replace

from shedbim.model.roles import Role
from shedbim.model.shed import Grid, Shed
from shedbim.revisions.marking import number_of
from shedbim.revisions.register import Issue, IssuedAssembly, IssuedLine, IssuedMark, Register
from shedbim.revisions.snapshot import snapshot

__all__ = ["in_revision", "issued"]


def in_revision(shed: Shed, revision: str) -> Shed:
    """Give the shed as another revision of itself: what changed in its own changed in that one."""
    own = shed.project.revision

    def code(last: str) -> str:
        return revision if last == own else last

    return replace(
        shed,
        project=replace(shed.project, revision=revision),
        parts=tuple(replace(part, revision=code(part.revision)) for part in shed.parts),
        assembly_types=tuple(replace(kind, revision=code(kind.revision)) for kind in shed.assembly_types),
    )


def issued(shed: Shed, issue: Issue, register: Register | None = None) -> Register:
    """Give the register after an issue.

    Args:
        shed: under its register, where there is one.
        issue: what is said of it.
        register: of the issues before.
    """
    last = replace(snapshot(shed), revision=issue.revision)
    parts = tuple(replace(part, revision=part.revision or issue.revision) for part in shed.parts)
    types = [replace(kind, revision=kind.revision or issue.revision) for kind in shed.assembly_types]
    quantities = dict(zip((part.mark for part in parts), shed.quantities.tolist(), strict=True))
    counts = Counter(types[each].mark for each in shed.assemblies.type.tolist())
    live = {part.mark: part.revision for part in parts} | {kind.mark: kind.revision for kind in types}
    quantities |= counts
    marks = [IssuedMark(mark, True, revision, quantities[mark]) for mark, revision in live.items()]
    before = register.marks if register else ()
    marks += [_retired(mark, issue.revision) for mark in before if mark.mark not in live]
    groups = shed.assemblies
    return Register(
        project_id=shed.project.id,
        issues=(*(register.issues if register else ()), issue),
        lines=_lines(shed.grid, register.lines if register else ()),
        marks=tuple(sorted(marks, key=_in_order)),
        parts=parts,
        assemblies=tuple(
            IssuedAssembly(key, name, types[kind].mark, parent)
            for key, name, kind, parent in zip(
                groups.keys, groups.names, groups.type.tolist(), groups.parent.tolist(), strict=True
            )
        ),
        names=shed.pieces.names,
        assembly=shed.pieces.assembly,
        last=replace(last, parts=parts),
    )


def _retired(mark: IssuedMark, revision: str) -> IssuedMark:
    """A mark that nothing has any more; retired once, it stays as it was."""
    return replace(mark, live=False, revision=revision, quantity=0) if mark.live else mark


_PREFIXES = {role.prefix: number for number, role in enumerate(Role)}


def _in_order(mark: IssuedMark) -> tuple[int, str, int]:
    """By role, then by number; assemblies last."""
    prefix = mark.mark.removesuffix(str(number_of(mark.mark)))
    return _PREFIXES.get(prefix, len(_PREFIXES)), prefix, number_of(mark.mark)


def _lines(grid: Grid, before: Iterable[IssuedLine]) -> tuple[IssuedLine, ...]:
    """The lines of the grid, and those that were taken away."""
    now = [IssuedLine("letter", label, place) for label, place in zip(grid.letters, grid.x, strict=True)]
    now += [IssuedLine("number", label, place) for label, place in zip(grid.numbers, grid.y, strict=True)]
    here = {(line.axis, line.label) for line in now}
    gone = [replace(line, live=False) for line in before if (line.axis, line.label) not in here]
    return (*now, *sorted(gone, key=lambda line: (line.axis, line.label)))
