"""Names of frames and bays that pieces belong to, as a reader says them."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from itertools import pairwise

from shedbim.checks.subject import Subject

__all__ = ["a_or_an", "frames_of", "listed", "ranges"]


def frames_of(subject: Subject, pieces: Iterable[int]) -> str:
    """Give the frames that pieces stand in, or the bays that they span where they are of none.

    As ``frames 2 to 9``, ``frame 3``, ``bay 3-4``; empty where keys name neither.
    """
    first = {subject.shed.pieces.keys[piece].split("/", 1)[0] for piece in pieces}
    lines = subject.shed.grid.numbers
    bays = [f"{a}-{b}" for a, b in pairwise(lines)]
    for word, labels in (("frame", lines), ("bay", bays)):
        rows = [row for row, label in enumerate(labels) if label in first]
        if rows:
            return f"{word}{'s' if len(rows) > 1 else ''} {ranges(rows, labels)}"
    return ""


def ranges(rows: Sequence[int], labels: Sequence[str]) -> str:
    """Give ascending rows as their labels, what runs on as a range: ``2 to 4, 7 and 9``."""
    runs: list[list[int]] = []
    for row in rows:
        if runs and row == runs[-1][-1] + 1:
            runs[-1].append(row)
        else:
            runs.append([row])
    texts: list[str] = []
    for run in runs:
        ends = [labels[run[0]], labels[run[-1]]]
        texts += [" to ".join(ends)] if len(run) > 2 else [labels[row] for row in run]
    return listed(texts)


def listed(words: Sequence[str]) -> str:
    """Give words as a list that is read out: ``a, b and c``."""
    return words[0] if len(words) == 1 else f"{', '.join(words[:-1])} and {words[-1]}" if words else ""


def a_or_an(word: str) -> str:
    """Give a word with its article, as a sentence begins: ``An eaves strut``."""
    return f"A{'n' if word[0] in 'aeiou' else ''} {word}"
