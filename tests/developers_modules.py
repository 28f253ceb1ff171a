"""The table of modules that DEVELOPERS.md shows, from the first sentence of each; run it to renew the table."""

from __future__ import annotations

import ast
import re
from pathlib import Path

ROOT = Path(__file__).parent.parent
DEVELOPERS = ROOT / "DEVELOPERS.md"
_START, _END = "<!-- modules -->", "<!-- end of modules -->"


def sentence(path: Path) -> str:
    """The first line of a module's docstring."""
    docstring = ast.get_docstring(ast.parse(path.read_text(encoding="utf-8"))) or ""
    return docstring.splitlines()[0].replace("|", "or") if docstring else ""


def modules() -> list[Path]:
    """Every module of the package, folder by folder."""
    found = (ROOT / "shedbim").rglob("*.py")
    return sorted(found, key=lambda path: (path.parent.parts, path.name))


def table() -> str:
    """One row for each module."""
    rows = [f"| `{path.relative_to(ROOT)}` | {sentence(path)} |" for path in modules()]
    return "| file | what it gives |\n| --- | --- |\n" + "\n".join(rows)


def shown() -> str:
    """What stands in DEVELOPERS.md."""
    text = DEVELOPERS.read_text(encoding="utf-8")
    return text[text.index(_START) + len(_START) : text.index(_END)].strip()


def main() -> None:
    """Write the table into DEVELOPERS.md."""
    text = DEVELOPERS.read_text(encoding="utf-8")
    pattern = re.compile(re.escape(_START) + ".*?" + re.escape(_END), re.DOTALL)
    DEVELOPERS.write_text(pattern.sub(lambda _: f"{_START}\n{table()}\n{_END}", text), encoding="utf-8")


if __name__ == "__main__":
    main()
