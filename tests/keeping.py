"""What a test session makes once and keeps: by what it is of, however the arguments are given."""

from __future__ import annotations

from collections.abc import Callable
from functools import cache, wraps
from inspect import signature
from typing import Any

__all__ = ["kept"]


def kept(make: Callable[..., Any]) -> Callable[..., Any]:
    """Give the function with its results kept; ``cache_clear()`` lets go of them.

    To the standard cache a default left out and the same value given are two things, made twice.
    """
    said = signature(make)
    made = cache(lambda arguments: make(**dict(arguments)))

    @wraps(make)
    def given(*placed: object, **named: object) -> Any:
        bound = said.bind(*placed, **named)
        bound.apply_defaults()
        return made(tuple(bound.arguments.items()))

    given.cache_clear = made.cache_clear  # type: ignore[attr-defined]
    return given
