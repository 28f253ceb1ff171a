"""What the library has against a model file, with its rules compiled once a session and not once a file.

The library reads, rewrites and compiles all rules of a schema anew for every file, which takes longer than
checking a small one.
"""

from __future__ import annotations

import builtins
from collections.abc import Iterator
from contextlib import contextmanager
from types import CodeType
from unittest.mock import patch

import ifcopenshell
import ifcopenshell.express.rule_executor
import ifcopenshell.validate
from _pytest.assertion import rewrite

__all__ = ["findings"]

_COMPILED: dict[str, CodeType] = {}


def findings(file: ifcopenshell.file, *, rules: bool = True) -> list[object]:
    """Give the statements of the validation, with or without the rules that the schema states in EXPRESS."""
    logger = ifcopenshell.validate.json_logger()
    with _compiled_once(f"{file.schema_identifier}.py"):
        ifcopenshell.validate.validate(file, logger, express_rules=rules)
    return list(logger.statements)


@contextmanager
def _compiled_once(name: str) -> Iterator[None]:
    """Keep the code of a schema's rules, under the name the library gives it."""
    rewritten = rewrite.rewrite_asserts

    def rewrite_asserts(*args: object, **named: object) -> None:
        if name not in _COMPILED:
            rewritten(*args, **named)

    def compiled(tree: object, called: str, mode: str) -> CodeType:
        if called not in _COMPILED:
            _COMPILED[called] = builtins.compile(tree, called, mode)
        return _COMPILED[called]

    with (
        patch.object(rewrite, "rewrite_asserts", rewrite_asserts),
        patch.object(ifcopenshell.express.rule_executor, "compile", compiled, create=True),
    ):
        yield
