"""The table of modules that DEVELOPERS.md shows, from the first sentence of each; run it to renew the table."""

from __future__ import annotations

import ast
from pathlib import Path

from marked_text import ROOT, mark

DEVELOPERS = ROOT / "DEVELOPERS.md"


def sentence(path: Path) -> str:
    """The first line of a module's docstring, or of a script's opening comment."""
    text = path.read_text(encoding="utf-8")
    if path.suffix == ".py":
        lines = (ast.get_docstring(ast.parse(text)) or "").splitlines()
    else:
        lines = [line.removeprefix("//").strip() for line in text.splitlines() if line.startswith("//")]
    return next((line.replace("|", "or") for line in lines if line), "")


def modules() -> list[Path]:
    """Every module and script of the package, folder by folder."""
    package = ROOT / "shedbim"
    found = [*package.rglob("*.py"), *package.rglob("*.js")]
    return sorted(found, key=lambda path: (path.parent.parts, path.name))


def table() -> str:
    """One row for each module."""
    rows = [f"| `{path.relative_to(ROOT)}` | {sentence(path)} |" for path in modules()]
    return "| file | what it gives |\n| --- | --- |\n" + "\n".join(rows)


if __name__ == "__main__":
    mark(DEVELOPERS, "modules", table())
