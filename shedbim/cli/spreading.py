"""The files that a command is given, with patterns such as ``*.yaml`` spread where no shell did it."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path

__all__ = ["spread"]


def spread(paths: Sequence[Path]) -> tuple[Path, ...]:
    """Give the files, those that a pattern stands for sorted by name; what matches nothing stays as it is."""
    found: list[Path] = []
    for path in paths:
        is_pattern = any(sign in path.name for sign in "*?[") and not path.exists()
        found += (sorted(path.parent.glob(path.name)) if is_pattern else []) or [path]
    return tuple(found)
