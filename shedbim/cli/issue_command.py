"""What ``shedbim issue`` does and prints: what stands now is written down in the register as issued."""

from __future__ import annotations

from datetime import UTC, datetime
from pathlib import Path

from shedbim.cli.speech import say, show_json
from shedbim.errors import Fault, RegisterError
from shedbim.pipeline import digest, read_and_expand
from shedbim.readers.registers import read_register, register_path
from shedbim.revisions.changes import Kind
from shedbim.revisions.codes import STATUSES
from shedbim.revisions.comparing import compare
from shedbim.revisions.issuing import in_revision, issued
from shedbim.revisions.register import Issue
from shedbim.revisions.register_text import register_text
from shedbim.revisions.snapshot import snapshot
from shedbim.saving import save

__all__ = ["run"]


def run(
    file: Path, status: str, reason: str, revision: str, moment: datetime | None, *, as_json: bool
) -> None:
    """Issue the shed in a description file.

    Args:
        file: the description.
        status: what the issue may be used for.
        reason: why it is issued.
        revision: its code; that of the description, or the next one, where empty.
        moment: of the issue; now where not given.

    Raises:
        ShedbimError: when the description or its register is refused, or the revision was issued already.
    """
    target = register_path(file)
    register = read_register(target)
    _, shed, text = read_and_expand(file)
    code = revision or shed.project.revision
    codes = [issue.revision for issue in register.issues] if register else []
    if code in codes:
        raise RegisterError(
            [
                Fault(
                    f"revision {code} was issued already",
                    given=code,
                    allowed="a new code, see --revision",
                    file=str(target),
                )
            ]
        )
    shed = in_revision(shed, code)
    day = (moment or datetime.now(UTC)).astimezone(UTC).strftime("%Y-%m-%dT%H:%M:%SZ")
    after = issued(shed, Issue(code, status, day, reason, digest(text)), register)
    data = register_text(after).encode("utf-8", "surrogateescape")
    save(target.parent, {target.name: lambda sink: sink.write(data)})
    changes = compare(register.last, snapshot(shed)) if register else None
    counts = changes.counts() if changes else {Kind.ADDED: len(shed.pieces)}
    if as_json:
        told = {kind.word: count for kind, count in counts.items()}
        show_json(
            {"register": str(target), "revision": code, "status": status, "pieces": len(shed.pieces), **told}
        )
        return
    meaning = STATUSES.get(status, "")
    say(f"{code} issued, status {status}{f' ({meaning})' if meaning else ''}: {len(shed.pieces):,} pieces")
    if changes:
        told_counts = [f"{count:,} {kind.word}" for kind, count in counts.items() if count]
        say(f"  since {codes[-1]}: {', '.join(told_counts) or 'nothing changed'}")
    say(f"Written to {target}: keep it beside the description, under version control.")
