"""The state of a building from a model file, ours or anybody's, to be compared with another."""

from __future__ import annotations

import json
import sys
from pathlib import Path
from tempfile import TemporaryDirectory
from typing import Any

import numpy as np

from shedbim.errors import ComparisonError
from shedbim.readers.other_models import file_fault
from shedbim.readers.supervising import PATIENCE, heard
from shedbim.revisions.model_states import ModelState
from shedbim.revisions.states import Thing

__all__ = ["read_model_state"]

#: As in ``supervising``: it imports nothing from the folder that the user is in.
_COMMAND = (sys.executable, "-P", "-m", "shedbim.readers.model_listing")


def read_model_state(path: Path) -> ModelState:
    """Give the state that a model file tells, of any schema that the library reads: IFC2X3, IFC4, IFC4X3.

    Raises:
        ComparisonError: when the file cannot be read.
    """
    fault = file_fault(path)
    if not fault:
        with TemporaryDirectory() as folder:
            fault = _list(path, Path(folder))
            if not fault:
                data = json.loads((Path(folder) / "state.json").read_text(encoding="utf-8"))
                placement = np.load(Path(folder) / "placement.npy", allow_pickle=False)
                return _state(path, data, placement)
    raise ComparisonError(f"{path}: {fault}")


def _list(path: Path, folder: Path) -> str:
    """Have the file listed into a folder; gives what went wrong, empty for nothing."""
    said: dict[str, str] = {}
    with heard([*_COMMAND, str(path.resolve()), str(folder)]) as hear:
        while (line := hear(PATIENCE[0])) is not None:
            word, _, text = line.partition(" ")
            said[word] = text
    if "fault" in said:
        return f"the library that reads model files says: {said['fault']}"
    return "" if "end" in said else "the library that reads model files ended over it, or did not end"


def _state(path: Path, data: dict[str, Any], placement: Any) -> ModelState:
    things = [Thing(*(*each[:8], 0, each[9])) for each in data["things"]]
    doubled = data["doubled"]
    remarks = (
        [f"{path}: {doubled:,} elements have a GlobalId that another one has, and were left out"]
        if doubled
        else []
    )
    return ModelState(
        project=data["project"],
        project_id=data["project_id"],
        revision="",
        ids=tuple(data["ids"]),
        keys=tuple(data["keys"]),
        things=tuple(things),
        properties=tuple(each[8] for each in data["things"]),
        thing=np.array(data["thing"], np.int64),
        placement=placement,
        joints=np.array([int(each, 16) for each in data["joints"]], np.uint64),
        assembly=tuple(data["assembly"]),
        remarks=tuple(remarks),
    )
