"""Rules that bind fields together: one small function a rule, in the tables of the modules listed here.

A rule reads what it needs from the description, plainly. It is also asked about the readable part of a faulty
description, in which other fields are absent; there it ends where it first misses one.
"""

from contextlib import suppress

from shedbim.description.models import Description
from shedbim.description.rules import layout, reserved, secondary, trusses
from shedbim.description.rules.broken import Broken, Rule

__all__ = ["RULES", "Broken", "Rule", "broken_rules"]

#: Every rule, in the order of the description.
RULES: tuple[Rule, ...] = (*layout.RULES, *trusses.RULES, *secondary.RULES, *reserved.RULES)


def broken_rules(description: Description, *, partly: bool = False) -> list[Broken]:
    """What breaks the rules; ``partly`` says that fields of the description may be absent."""
    found: list[Broken] = []
    for rule in RULES:
        if partly:
            with suppress(AttributeError):
                found.extend(rule(description))
        else:
            found.extend(rule(description))
    return found
