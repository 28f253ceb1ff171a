"""The code is clean by the tools that pyproject.toml sets up."""

from __future__ import annotations

import re
import subprocess
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).parent.parent


@pytest.mark.parametrize(
    "command",
    [["ruff", "check", "shedbim", "tests"], ["ruff", "format", "--check", "shedbim", "tests"], ["mypy"]],
    ids=["ruff check", "ruff format", "mypy"],
)
def test_tool_finds_nothing(command: list[str]) -> None:
    found = subprocess.run(
        [sys.executable, "-m", *command], cwd=ROOT, capture_output=True, text=True, check=False
    )
    assert found.returncode == 0, found.stdout + found.stderr


def test_layers_import_only_from_lower_ones() -> None:
    # From low to high; a module may import from its own layer and those before it.
    layers = [
        {"errors", "tolerance", "version", "units"},
        {"geometry"},
        {"sections"},
        {"fasteners"},
        {"webs"},
        {"limits"},
        {"fields", "roofs", "description"},
        {"model"},
        {"expand"},
        {"checks"},
        {"revisions"},
        {"readers", "writers"},
        {"outputs", "saving", "pipeline", "portfolio", "comparison", "watching"},
        {"cli"},
    ]
    level = {name: number for number, names in enumerate(layers) for name in names}
    wrong = []
    for path in (ROOT / "shedbim").rglob("*.py"):
        own = path.relative_to(ROOT / "shedbim").parts[0].removesuffix(".py")
        if own in ("__init__", "__main__"):
            continue
        for name in re.findall(r"^\s*from shedbim\.(\w+)", path.read_text(encoding="utf-8"), re.MULTILINE):
            if level[name] > level[own]:
                wrong.append((str(path), name))
            # A model, what checks it and what is written from it know no description and no expansion.
            if own in ("model", "checks", "revisions", "readers", "writers") and name in (
                "description",
                "fields",
                "roofs",
                "expand",
            ):
                wrong.append((str(path), name))
    assert wrong == []
