"""The text of a description file, or the fault why there is none: size, encoding and letters are checked."""

from __future__ import annotations

import re
from pathlib import Path
from stat import S_ISDIR, S_ISREG

from shedbim.errors import DescriptionError, Fault

__all__ = ["MOST_BYTES", "checked_text", "read_source"]

#: A description of the largest building is a few kilobytes; a larger file is a mistake or an attack.
MOST_BYTES = 256 * 1024

#: Letters that YAML 1.2 does not allow in a text (section 5.1, c-printable), and lone surrogates.
_UNPRINTABLE = re.compile(r"[^\t\n\r\x20-\x7e\x85\xa0-\ud7ff\ue000-\ufffd\U00010000-\U0010ffff]")

_ALLOWED = f"a text file in UTF-8 of at most {MOST_BYTES // 1024} KiB"


def read_source(path: Path) -> str:
    """The text of the file; raises DescriptionError for what is no plain, short UTF-8 text."""
    file = printable(str(path))
    try:
        status = path.stat()
        if S_ISDIR(status.st_mode):
            raise _refusal("this is a folder, not a file", file)
        if not S_ISREG(status.st_mode):
            raise _refusal("this is a device or a pipe, not a file", file)
        if status.st_size > MOST_BYTES:
            raise _refusal(f"the file has {status.st_size} bytes", file)
        with path.open("rb") as stream:
            content = stream.read(MOST_BYTES + 1)
    except FileNotFoundError:
        raise _refusal("there is no such file", file) from None
    except (OSError, ValueError) as error:
        reason = error.strerror if isinstance(error, OSError) and error.strerror else str(error)
        raise _refusal(f"the file cannot be read: {reason}", file) from None
    if len(content) > MOST_BYTES:
        raise _refusal(f"the file has more than {MOST_BYTES} bytes", file)
    return _decoded(content, file)


def checked_text(text: str, file: str) -> str:
    """The text without a byte order mark; raises DescriptionError where it is too long or not printable."""
    if len(text) > MOST_BYTES or len(text.encode(errors="surrogatepass")) > MOST_BYTES:
        raise _refusal(f"the text has more than {MOST_BYTES} bytes", file)
    text = text.removeprefix("\ufeff")
    if found := _UNPRINTABLE.search(text):
        line, column = place(text, found.start())
        letter = f"U+{ord(found[0]):04X}"
        fault = Fault("a control character or a letter that no text may have", given=letter, allowed=_ALLOWED)
        raise DescriptionError([_placed(fault, file, line, column)])
    return text


def place(text: str, index: int) -> tuple[int, int]:
    """Line and column, both from 1, of the letter at an index."""
    before = text[:index].replace("\r\n", "\n").replace("\r", "\n")
    return before.count("\n") + 1, len(before) - (before.rfind("\n") + 1) + 1


def printable(text: str, longest: int = 200) -> str:
    """The text on one line, without control characters, cut where it is long; for messages."""
    shown = "".join(letter if letter.isprintable() else f"\\u{ord(letter):04x}" for letter in text[:longest])
    return shown + ("..." if len(text) > longest else "")


def _decoded(content: bytes, file: str) -> str:
    """The text of the bytes."""
    try:
        return content.decode("utf-8")
    except UnicodeDecodeError as error:
        line, column = place(content[: error.start].decode("utf-8", errors="replace"), error.start)
        fault = Fault(
            "the file is not UTF-8 here", given=f"byte 0x{content[error.start]:02X}", allowed=_ALLOWED
        )
        raise DescriptionError([_placed(fault, file, line, column)]) from None


def _placed(fault: Fault, file: str, line: int, column: int) -> Fault:
    return Fault(fault.message, given=fault.given, allowed=fault.allowed, file=file, line=line, column=column)


def _refusal(message: str, file: str) -> DescriptionError:
    return DescriptionError([Fault(message, allowed=_ALLOWED, file=file)])
