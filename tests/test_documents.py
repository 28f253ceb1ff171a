"""The documents say what is there."""

from __future__ import annotations

import re
from pathlib import Path

import developers_modules
import readme_fields
from marked_text import marked

ROOT = Path(__file__).parent.parent


def test_developers_page_lists_every_module_by_its_first_sentence() -> None:
    assert marked(developers_modules.DEVELOPERS, "modules") == developers_modules.table()


def test_every_module_has_a_first_sentence() -> None:
    assert [path for path in developers_modules.modules() if not developers_modules.sentence(path)] == []


def test_developers_page_names_only_files_that_exist() -> None:
    text = developers_modules.DEVELOPERS.read_text(encoding="utf-8")
    named = set(re.findall(r"`((?:[a-z_]+/)+[a-z_]+\.py)`", text))
    missing = [name for name in named if not any((base / name).exists() for base in (ROOT, ROOT / "shedbim"))]
    assert missing == []


def test_readme_lists_every_field() -> None:
    assert marked(readme_fields.README, "fields") == readme_fields.table()


def test_readme_commands_name_presets_that_exist() -> None:
    text = readme_fields.README.read_text(encoding="utf-8")
    assert set(re.findall(r"presets/[\w.-]+", text)) == {
        "presets/seed-store.yaml",
        "presets/seed-store.png",
        "presets/services",
    }
    assert (ROOT / "presets" / "seed-store.yaml").exists()
    assert (ROOT / "presets" / "seed-store.png").exists()


def test_top_level_holds_what_was_agreed() -> None:
    agreed = {"README.md", "DEVELOPERS.md", "pyproject.toml", "shedbim", "tests", "presets", "outputs"}
    made = {path.name for path in ROOT.iterdir() if not path.name.startswith(".")}
    assert {name for name in made if not name.endswith(".egg-info") and name != "build"} == agreed
