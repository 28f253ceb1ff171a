"""The table of fields that README.md shows, made from the list of fields; run it to renew the table."""

from __future__ import annotations

import re
from itertools import groupby
from pathlib import Path

from shedbim.description.listing import FieldRow, all_fields

README = Path(__file__).parent.parent / "README.md"
_START, _END = "<!-- fields -->", "<!-- end of fields -->"


def _cell(text: str) -> str:
    return text.replace("|", "or").replace("  ", " ")


def _row(row: FieldRow, group: str) -> str:
    name = row.path.removeprefix(f"{group}.")
    meaning = row.explanation + (f" (only with `{row.condition}`)" if row.condition else "")
    standing = f"{row.default}" if row.default else "**needed**"
    return f"| `{name}` | {_cell(meaning)} | {_cell(row.allowed)} | {_cell(standing)} |"


def table() -> str:
    """One table for each group of fields."""
    parts = []
    for group, rows in groupby(all_fields(), key=lambda row: row.path.split(".")[0]):
        lines = [_row(row, group) for row in rows if row.path != group]
        parts.append(f"**{group}**\n\n| field | meaning | allowed | default |\n| --- | --- | --- | --- |\n")
        parts[-1] += "\n".join(lines)
    return "\n\n".join(parts)


def shown() -> str:
    """What stands in README.md."""
    text = README.read_text(encoding="utf-8")
    return text[text.index(_START) + len(_START) : text.index(_END)].strip()


def main() -> None:
    """Write the table into README.md."""
    text = README.read_text(encoding="utf-8")
    pattern = re.compile(re.escape(_START) + ".*?" + re.escape(_END), re.DOTALL)
    README.write_text(pattern.sub(lambda _: f"{_START}\n{table()}\n{_END}", text), encoding="utf-8")


if __name__ == "__main__":
    main()
