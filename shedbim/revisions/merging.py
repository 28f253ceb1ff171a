"""One register of two that were issued from apart, as two branches of version control are."""

from __future__ import annotations

from dataclasses import replace

from shedbim.errors import Fault, RegisterError
from shedbim.model.marks import Stock, group_parts
from shedbim.model.shed import Part
from shedbim.revisions.register import Issue, IssuedLine, Register

__all__ = ["merged"]


def merged(ours: Register, theirs: Register) -> Register:
    """Give the register that holds every issue of both; what stands is what was issued last of all.

    Raises:
        RegisterError: when they contradict one another: two projects, one revision code for two issues, or one mark
            for two things; with every contradiction.
    """
    later, earlier = (ours, theirs) if _when(ours) >= _when(theirs) else (theirs, ours)
    common = [one for one in ours.issues if one in theirs.issues]
    if faults := _contradictions(ours, theirs, common):
        raise RegisterError(faults)
    both = sorted(dict.fromkeys((*earlier.issues, *later.issues)), key=lambda issue: issue.date)
    known = {mark.mark for mark in later.marks}
    code = later.issues[-1].revision
    gone = [
        replace(mark, live=False, revision=code, quantity=0) if mark.live else mark
        for mark in earlier.marks
        if mark.mark not in known
    ]
    return replace(
        later,
        issues=tuple(both),
        lines=(*later.lines, *_taken_away(later, earlier)),
        marks=(*later.marks, *gone),
    )


def _when(register: Register) -> tuple[str, int]:
    """When it was issued last; of two on one day the one with more issues is the later."""
    return register.issues[-1].date, len(register.issues)


def _contradictions(ours: Register, theirs: Register, common: list[Issue]) -> list[Fault]:
    """What cannot be true of one project."""
    if ours.project_id != theirs.project_id:
        return [Fault(f"they are of two projects: {ours.project_id} and {theirs.project_id}")]
    codes = {issue.revision for issue in ours.issues} & {issue.revision for issue in theirs.issues}
    twice = sorted(codes - {issue.revision for issue in common})
    faults = [Fault(f"revision {code} was issued twice, for two states") for code in twice]
    known = {issue.revision for issue in common}
    here, there = ({part.mark: part for part in each.parts} for each in (ours, theirs))
    for mark in sorted(here.keys() & there.keys()):
        one, other = here[mark], there[mark]
        if not {one.revision, other.revision} & known and not _equal(one, other):
            faults.append(
                Fault(f"mark {mark} was issued for two things, in {one.revision} and {other.revision}")
            )
    return faults


def _equal(one: Part, other: Part) -> bool:
    """Whether two parts are one."""
    stock = [Stock(part.role, part.shape, part.grade, part.finish) for part in (one, other)]
    return len(group_parts(stock).parts) == 1


def _taken_away(later: Register, earlier: Register) -> list[IssuedLine]:
    """Lines of the earlier register that the later one does not know: no other line gets their labels."""
    known = {(line.axis, line.label) for line in later.lines}
    return [replace(line, live=False) for line in earlier.lines if (line.axis, line.label) not in known]
