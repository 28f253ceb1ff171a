"""The presets that come with the program: commented descriptions to begin a new one with."""

from __future__ import annotations

import re
from pathlib import Path
from uuid import UUID

from shedbim.errors import DescriptionError, Fault
from shedbim.fields import nearest

__all__ = ["new_description", "preset_names", "preset_text"]

#: Beside the modules where the package is installed, beside the package in a checkout.
_PACKAGE = Path(__file__).parents[1]
_FOLDERS = (_PACKAGE / "presets", _PACKAGE.parent / "presets")

_ID_LINE = re.compile(r"(?m)^(\s*id:\s*)[0-9a-f-]{36}")


def preset_names() -> tuple[str, ...]:
    """The names of the presets, sorted."""
    return tuple(sorted(_files()))


def preset_text(name: str) -> str:
    """The text of a preset; raises DescriptionError with the nearest names where there is none."""
    files = _files()
    if name not in files:
        names = preset_names()
        fault = Fault(
            f"there is no preset {name[:40]!r}", allowed=" | ".join(names), nearest=nearest(name, names)
        )
        raise DescriptionError([fault])
    return files[name].read_text(encoding="utf-8")


def new_description(preset: str, project_id: str) -> str:
    """The commented text of a preset with the id (a UUID) of a new project in place of its own.

    Raises DescriptionError for an unknown preset, ValueError for an id that is no UUID.
    """
    text, count = _ID_LINE.subn(rf"\g<1>{UUID(project_id)}", preset_text(preset))
    if count != 1:
        raise ValueError(f"the preset {preset} has {count} lines with an id")
    return text


def _files() -> dict[str, Path]:
    """The files of the presets by their names."""
    folder = next((folder for folder in _FOLDERS if folder.is_dir()), _FOLDERS[0])
    return {path.stem: path for path in folder.glob("*.yaml")}
