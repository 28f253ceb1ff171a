"""A register as lines of text, and the lines of a text: words between tabs, and a check word that shows damage.

Lines stand in a fixed order and each tells of one thing by its own name, so that version control merges two registers
line by line.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from hashlib import sha256
from zlib import crc32

from shedbim.errors import Fault

__all__ = ["FORMAT", "checked", "joined", "parted"]

#: The first word of a register, and the version of its form.
FORMAT = ("shedbim-register", "1")

_END = "end"
_ESCAPES = (("\\", "\\\\"), ("\t", "\\t"), ("\n", "\\n"), ("\r", "\\r"))


def joined(lines: Iterable[tuple[str, ...]]) -> str:
    """Give the text of lines of words: each with its check word, and at the end how many there are and their digest."""
    bodies = ["\t".join(map(_escaped, words)) for words in lines]
    bodies.append(f"{_END}\t{len(bodies)}\t{_digest(bodies)}")
    return "".join(f"{body}\t{_check(body)}\n" for body in bodies)


def checked(text: str, file: str) -> list[Fault]:
    """Give what is damaged in a text: each damaged line, and whether lines are missing or were put in."""
    faults, bodies = [], []
    for number, line in enumerate(text.splitlines(), 1):
        body, _, check = line.rpartition("\t")
        bodies.append(body)
        if check != _check(body):
            faults.append(Fault("this line is damaged", given=line[:80], file=file, line=number, column=1))
    words = bodies[-1].split("\t") if bodies else [""]
    if words[0] != _END:
        faults.append(Fault("the end is missing", file=file, line=max(len(bodies), 1), column=1))
    elif not faults and words[1:] != [str(len(bodies) - 1), _digest(bodies[:-1])]:
        faults.append(
            Fault(
                f"lines are missing or were put in: {len(bodies) - 1} of {words[1]}",
                file=file,
                line=len(bodies),
                column=1,
            )
        )
    return faults


def parted(text: str) -> Iterator[tuple[int, tuple[str, ...]]]:
    """Give the number and the words of each line that is whole, but for the last."""
    for number, line in enumerate(text.splitlines(), 1):
        body, _, check = line.rpartition("\t")
        if check == _check(body) and not body.startswith(f"{_END}\t"):
            yield number, tuple(map(_plain, body.split("\t")))


def _check(body: str) -> str:
    """The check word of a line."""
    return f"{crc32(body.encode('utf-8', 'surrogatepass')) & 0xFFFFFF:06x}"


def _digest(bodies: list[str]) -> str:
    return sha256("\n".join(bodies).encode("utf-8", "surrogatepass")).hexdigest()[:16]


def _escaped(word: str) -> str:
    for plain, escaped in _ESCAPES:
        word = word.replace(plain, escaped)
    return word


def _plain(word: str) -> str:
    """An escaped word as it was."""
    if "\\" not in word:
        return word
    signs = {escaped[1]: plain for plain, escaped in _ESCAPES}
    letters, result = iter(word), []
    for letter in letters:
        result.append(signs.get(next(letters, ""), "") if letter == "\\" else letter)
    return "".join(result)
