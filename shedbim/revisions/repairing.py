"""What is whole of a damaged register, and what of it is lost."""

from __future__ import annotations

from collections.abc import Sequence

from shedbim.errors import Fault, RegisterError, ShedbimError
from shedbim.revisions.register import Register
from shedbim.revisions.register_lines import FORMAT, checked, parted
from shedbim.revisions.register_text import Words, register_from

__all__ = ["repaired"]

#: How many words name a thing in a line of each kind.
_NAME = {"line": 2}

_LEFT_OUT = 30  # losses that are told one by one


def repaired(text: str, file: str) -> tuple[Register, tuple[str, ...]]:
    """Give the register of all lines that are whole, and what is lost, in sentences; none where nothing is.

    A piece whose part or turn is lost goes too: it gets its id from its key again, and its mark is made anew. Of two
    lines that tell of one thing, as after a merge, the last holds.

    Raises:
        RegisterError: when so much is lost that nothing can be made of the rest.
    """
    kept: dict[str, dict[Words, Words]] = {}
    for _, (word, *rest) in parted(text):
        kept.setdefault(word, {})[tuple(rest[: _NAME.get(word, 1)])] = tuple(rest)
    losses = [f"line {fault.line}: {fault.message}" for fault in checked(text, file)]
    if FORMAT[0] not in kept or not kept.get("issue") or not kept.get("line"):
        raise RegisterError([Fault("its first lines are lost: nothing can be made of the rest", file=file)])
    losses += _without_what_is_lost(kept)
    try:
        register = register_from({word: list(lines.values()) for word, lines in kept.items()})
    except (ValueError, KeyError, IndexError, ShedbimError) as fault:
        raise RegisterError([Fault(f"nothing can be made of what is whole: {fault}", file=file)]) from fault
    return register, _few(losses)


def _without_what_is_lost(kept: dict[str, dict[Words, Words]]) -> list[str]:
    """Take out the lines that name what is lost, and fill in what follows from others; tell of each."""
    losses = []
    for kind in ("mark", "part", "turn", "assembly", "piece"):
        kept.setdefault(kind, {})
    last = list(kept["issue"].values())[-1][0]
    for name in [name for name in kept["part"] if name not in kept["mark"]]:
        kept["mark"][name] = (*name, "live", last, "0")
        losses.append(f"mark {name[0]}: its revision and quantity are lost; {last} is taken")
    while orphans := [
        name for name, words in kept["assembly"].items() if words[3] and words[3:4] not in kept["assembly"]
    ]:
        for name in orphans:
            del kept["assembly"][name]
            losses.append(f"assembly {name[0]}: what it belongs to is lost")
    for name, words in list(kept["piece"].items()):
        if words[3:4] not in kept["part"] or words[5:6] not in kept["turn"]:
            del kept["piece"][name]
            losses.append(f"piece {name[0]}: its part or its turn is lost")
        elif words[4] and words[4:5] not in kept["assembly"]:
            kept["piece"][name] = (*words[:4], "", *words[5:])
            losses.append(f"piece {name[0]}: the assembly it belongs to is lost")
    return losses


def _few(losses: Sequence[str]) -> tuple[str, ...]:
    """The losses, of very many only the first and how many more there are."""
    more = len(losses) - _LEFT_OUT
    return (*losses[:_LEFT_OUT], *((f"and {more:,} more",) if more > 0 else ()))
