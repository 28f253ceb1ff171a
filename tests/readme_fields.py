"""The table of fields that README.md shows, made from the list of fields; run it to renew the table."""

from __future__ import annotations

from itertools import groupby

from marked_text import ROOT, mark

from shedbim.description.listing import FieldRow, all_fields

README = ROOT / "README.md"


def _cell(text: str) -> str:
    return text.replace("|", "or").replace("  ", " ")


def _row(row: FieldRow, group: str) -> str:
    name = row.path.removeprefix(f"{group}.")
    meaning = row.explanation + (f" (only with `{row.condition}`)" if row.condition else "")
    standing = row.default or "**needed**"
    return f"| `{name}` | {_cell(meaning)} | {_cell(row.allowed)} | {_cell(standing)} |"


def table() -> str:
    """One table for each group of fields."""
    parts = []
    for group, rows in groupby(all_fields(), key=lambda row: row.path.split(".")[0]):
        lines = [_row(row, group) for row in rows if row.path != group]
        parts.append(f"**{group}**\n\n| field | meaning | allowed | default |\n| --- | --- | --- | --- |\n")
        parts[-1] += "\n".join(lines)
    return "\n\n".join(parts)


if __name__ == "__main__":
    mark(README, "fields", table())
