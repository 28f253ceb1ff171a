"""What ``shedbim register`` does and prints: a register checked, repaired beside itself, or two of them merged."""

from __future__ import annotations

from pathlib import Path

from shedbim.cli.speech import complain, say
from shedbim.errors import Fault, RegisterError
from shedbim.readers.registers import read_register, register_file_text
from shedbim.revisions.merging import merged
from shedbim.revisions.register import Register
from shedbim.revisions.register_text import register_text
from shedbim.revisions.repairing import repaired
from shedbim.saving import save

__all__ = ["check", "merge", "repair"]


def check(file: Path) -> None:
    """Say what a register holds.

    Raises:
        RegisterError: when it is not there, or damaged, with every damaged line.
    """
    register = _read(file)
    live = sum(mark.live for mark in register.marks)
    say(
        f"{file} is whole: {len(register.last):,} pieces, {live:,} marks in use, {len(register.marks) - live:,} retired"
    )
    for issue in register.issues:
        say(f"  {issue.revision:<6}{issue.status:<5}{issue.date}  {issue.reason}")


def merge(ours: Path, theirs: Path, out: Path) -> None:
    """Write the register of both.

    Raises:
        RegisterError: when one is damaged, or they contradict one another.
        OutputError: when it cannot be written.
    """
    whole = merged(_read(ours), _read(theirs))
    _write(whole, out)
    say(f"{len(whole.issues)} issues, the last {whole.issues[-1].revision}")
    say(f"Written to {out}")


def repair(file: Path, out: Path | None) -> None:
    """Write what is whole of a register into another file.

    Raises:
        RegisterError: when nothing can be made of it.
        OutputError: when it cannot be written.
    """
    target = out or file.with_suffix(".repaired.register")
    if target == file:
        raise RegisterError(
            [Fault("a damaged register is never written over: name another file", file=str(file))]
        )
    register, losses = repaired(register_file_text(file), str(file))
    _write(register, target)
    for loss in losses:
        complain(loss)
    say(f"{len(register.last):,} pieces are whole" if losses else "Nothing was damaged")
    say(f"Written to {target}; {file} is as it was")


def _read(file: Path) -> Register:
    register = read_register(file)
    if register is None:
        raise RegisterError([Fault("there is no such file", file=str(file))])
    return register


def _write(register: Register, target: Path) -> None:
    data = register_text(register).encode("utf-8", "surrogateescape")
    save(target.parent, {target.name: lambda sink: sink.write(data)})
