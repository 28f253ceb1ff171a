"""What ``shedbim compare`` does and prints: what became of the pieces of a building between two states."""

from __future__ import annotations

from collections.abc import Sequence
from datetime import UTC, datetime
from pathlib import Path
from textwrap import wrap

from shedbim.cli.changes_text import count_words, group_lines, quantity_rows
from shedbim.cli.speech import complain, say, show_json
from shedbim.cli.tables import show_table
from shedbim.comparison import CHANGES_FILES, compared, write_comparison
from shedbim.revisions.changes import Changes
from shedbim.revisions.rolling import Roll, rolled
from shedbim.writers.changes import changes_data
from shedbim.writers.comparison import Comparison
from shedbim.writers.imprint import Imprint

__all__ = ["run"]

_WIDTH = 100  # characters of a line of the report
_MOST_GROUPS = 25
_MOST_ROLLS = 12


def run(
    old: Path,
    new: Path | None,
    settings: Sequence[str],
    out: Path | None,
    moment: datetime | None,
    *,
    as_json: bool,
) -> None:
    """Compare two states and print what changed.

    Args:
        old: the earlier state.
        new: the later one; see ``comparison.compared`` for one file alone.
        settings: fields set over those of the file, each as ``path=value``.
        out: folder of the files of changes; none are written where not given.
        moment: the time stamp of the files; now where not given.

    Raises:
        ShedbimError: as ``comparison.compared`` and ``comparison.write_comparison``.
    """
    comparison = compared(old, new, settings, Imprint(moment or datetime.now(UTC)))
    written = write_comparison(comparison, out) if out is not None else []
    if as_json:
        data = changes_data(comparison)
        show_json({**data, "files": [str(path) for path in written]})
        return
    _report(comparison)
    if written:
        say()
        say(f"Written to {out}:")
        for path in written:
            say(f"  {path.name:<15}{path.stat().st_size / 1000:>10,.1f} kB  {CHANGES_FILES[path.name]}")
    for note in comparison.notes:
        complain(f"Note: {note}")


def _report(comparison: Comparison) -> None:
    changes = comparison.changes
    for word, state, name in zip(
        ("before", "after"), (changes.before, changes.after), comparison.names, strict=True
    ):
        revision = f", revision {state.revision}" if state.revision else ""
        say(f"{word:<8}{name}{revision}: {len(state):,} pieces")
    say(f"changed {len(changes.changed):,} of {len(changes):,} pieces: {count_words(changes)}")
    if not len(changes.changed):
        return
    say()
    show_table(("quantity", "before", "after", "difference"), quantity_rows(changes), numbers=(1, 2, 3))
    for by in ("frame", "bay", "mark"):
        _show_rolls(changes, by)
    say("What changed:")
    for line in group_lines(comparison.groups, _MOST_GROUPS):
        for part in wrap(line, _WIDTH, initial_indent="  ", subsequent_indent="    "):
            say(part)


def _show_rolls(changes: Changes, by: str) -> None:
    """The names under which most changed, in their order."""
    rolls = rolled(changes, by)
    if not rolls:
        return
    most = sorted(rolls, key=lambda roll: -roll.changed)[:_MOST_ROLLS]
    chosen = [roll for roll in rolls if roll in most]
    show_table(
        (by, "changed", "kg before", "kg after", "how"), [_row(roll) for roll in chosen], numbers=(1, 2, 3)
    )
    if left := len(rolls) - len(chosen):
        say(f"and {left:,} more, with fewer changed pieces")
        say()


def _row(roll: Roll) -> tuple[str, str, str, str, str]:
    how = ", ".join(f"{count:,} {kind.word}" for kind, count in roll.counts.items())
    before, after = roll.mass
    return roll.name, f"{roll.changed:,}", f"{before:,.0f}", f"{after:,.0f}", how
