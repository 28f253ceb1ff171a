"""The error tree of the package.

ShedbimError
├── DescriptionError   the description is refused: one or more faults, each with its place
├── UnknownSection     a designation that the catalogue does not hold
├── ComparisonError    two states of a building cannot be compared: a file is no state of one, or of another kind
├── OutputError        results cannot be written where they should go
├── RegisterError      a register is damaged, or two of them contradict one another
└── ModelError         a programming error: the expansion broke one of its own promises
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

__all__ = [
    "ComparisonError",
    "DescriptionError",
    "Fault",
    "ModelError",
    "OutputError",
    "RegisterError",
    "ShedbimError",
    "UnknownSection",
]


class ShedbimError(Exception):
    """Base of every error this package raises on purpose."""

    exit_code = 1


@dataclass(frozen=True)
class Fault:
    """One thing wrong with a description, and where it stands."""

    message: str
    field: str = ""
    given: str = ""
    allowed: str = ""
    nearest: tuple[str, ...] = ()
    file: str = ""
    line: int = 0
    column: int = 0

    def __str__(self) -> str:
        """One paragraph: place, field, what is wrong, what was given, what is allowed, near names."""
        place = f"{self.file}:{self.line}:{self.column}" if self.line else self.file
        field = (
            "" if place.endswith(f" {self.field}") else self.field
        )  # a place may be that of the field itself
        text = ": ".join(part for part in (place, field, self.message) if part)
        if self.given:
            text += f"\n    given:   {self.given}"
        if self.allowed:
            text += f"\n    allowed: {self.allowed}"
        if self.nearest:
            text += f"\n    nearest: {', '.join(self.nearest)}"
        return text


class DescriptionError(ShedbimError):
    """Raised once for a whole description, with every fault that was found in it."""

    exit_code = 2

    def __init__(self, faults: Sequence[Fault]) -> None:
        self.faults = tuple(faults)
        super().__init__("\n".join(str(fault) for fault in self.faults))


class UnknownSection(ShedbimError):
    """Raised when a designation is not in the catalogue; carries the nearest ones and any reason."""

    exit_code = 2

    def __init__(self, designation: str, nearest: Sequence[str] = (), *, reason: str = "") -> None:
        self.designation = designation
        self.nearest = tuple(nearest)
        self.reason = reason
        why = f": {reason}" if reason else ""
        hint = f"; nearest: {', '.join(self.nearest)}" if self.nearest else ""
        super().__init__(f"no section {designation!r} in the catalogue{why}{hint}")


class ComparisonError(ShedbimError):
    """Raised when two states of a building cannot be compared; says which file, and why."""

    exit_code = 2


class OutputError(ShedbimError):
    """Raised when results cannot be written; what stood there before is untouched."""

    exit_code = 3


class RegisterError(ShedbimError):
    """Raised when a register cannot be relied on; carries what is wrong, line by line. Nothing is changed then."""

    exit_code = 5

    def __init__(self, faults: Sequence[Fault]) -> None:
        self.faults = tuple(faults)
        super().__init__("\n".join(str(fault) for fault in self.faults))


class ModelError(ShedbimError):
    """Raised when the expansion breaks its own promises: a fault of the program, not of the user."""

    exit_code = 70
