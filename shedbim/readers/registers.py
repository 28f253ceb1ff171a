"""The register that stands beside a description."""

from __future__ import annotations

from pathlib import Path

from shedbim.errors import Fault, RegisterError
from shedbim.revisions.register import Register
from shedbim.revisions.register_text import register_of

__all__ = ["read_register", "register_file_text", "register_path"]

#: A register of a million pieces has about 150 MB.
_MOST_BYTES = 400_000_000


def register_path(description: Path) -> Path:
    """Give where the register of a description file is: beside it, with its name and another ending."""
    return description.with_suffix(".register")


def read_register(path: Path) -> Register | None:
    """Give the register in a file; None where there is none.

    Raises:
        RegisterError: when the file cannot be read, is damaged or is no register.
    """
    if not path.exists():
        return None
    return register_of(register_file_text(path), str(path))


def register_file_text(path: Path) -> str:
    """Give the text of a register file; bytes that are no UTF-8 are kept as signs that no line has.

    Raises:
        RegisterError: when the file cannot be read, or is larger than any register.
    """
    try:
        if path.stat().st_size > _MOST_BYTES:
            raise RegisterError([Fault("the file is larger than any register", file=str(path))])
        with path.open(encoding="utf-8", errors="surrogateescape", newline="") as file:
            return file.read()
    except OSError as error:
        reason = (error.strerror or str(error)).lower()
        raise RegisterError([Fault(f"cannot be read: {reason}", file=str(path))]) from error
