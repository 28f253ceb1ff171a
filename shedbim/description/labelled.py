"""A description whose grid lines have the labels they were issued with."""

from __future__ import annotations

from shedbim.description.models import Description

__all__ = ["labelled"]


def labelled(
    description: Description, letters: tuple[str, ...] | None, numbers: tuple[str, ...] | None
) -> Description:
    """Give the description with labels for the lines that its user left to the rule.

    Args:
        description: as read.
        letters: of the column lines, left to right; None leaves them as they are.
        numbers: of the frames, front to back; None leaves them as they are.
    """
    building = description.building
    given = {
        "letters": letters if building.letters is None else building.letters,
        "numbers": numbers if building.numbers is None else building.numbers,
    }
    return description.model_copy(update={"building": building.model_copy(update=given)})
