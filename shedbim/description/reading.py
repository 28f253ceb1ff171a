"""A description from a file or a text, or all that is wrong with it."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path

from pydantic import ValidationError

from shedbim.description.faults import Source, capped, model_faults
from shedbim.description.models import Description
from shedbim.description.nodes import node_tree
from shedbim.description.partial import readable_part
from shedbim.description.paths import steps
from shedbim.description.rules import broken_rules
from shedbim.description.settings import with_settings
from shedbim.description.source import checked_text, printable, read_source
from shedbim.errors import DescriptionError

__all__ = ["placed", "read", "read_text"]


def read(path: str | Path, settings: Sequence[str] = ()) -> Description:
    """The description in a file, with fields set over it, each as ``building.roof.pitch=8 deg``.

    Raises DescriptionError with all faults, each with its place; nothing else for whatever the file holds.
    """
    return read_text(read_source(Path(path)), printable(str(path)), settings)


def read_text(text: str, file: str = "<text>", settings: Sequence[str] = ()) -> Description:
    """The description in a text, with fields set over it; ``file`` is the name that faults carry.

    Raises DescriptionError with all faults, each with its place; nothing else for whatever the text holds.
    """
    tree = with_settings(node_tree(checked_text(text, file), file), settings)
    source, faults = Source(tree.root, file), list(tree.faults)
    description: Description | None = None
    value = tree.root.value
    try:
        description = Description.model_validate(value)
        broken = broken_rules(description)
    except ValidationError as error:
        faults += model_faults(error, source)
        broken = broken_rules(readable_part(value), partly=True)
    for rule in broken:
        faults.append(source.fault(rule.message, steps(rule.field), given=rule.given, allowed=rule.allowed))
    if faults or description is None:
        raise DescriptionError(capped(faults, file))
    return description


def placed(
    error: DescriptionError, text: str, file: str = "<text>", settings: Sequence[str] = ()
) -> DescriptionError:
    """The same faults with the places of their fields in the text, for faults found after it was read."""
    source = Source(with_settings(node_tree(checked_text(text, file), file), settings).root, file)
    return DescriptionError(
        [
            source.fault(fault.message, steps(fault.field), given=fault.given, allowed=fault.allowed)
            for fault in error.faults
        ]
    )
