"""What is handed to a writer of changes: two states and what became of each piece, under the names of their files."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

from shedbim.model.levels import at_level
from shedbim.model.shed import Shed
from shedbim.revisions.change_groups import ChangeGroup, change_groups
from shedbim.revisions.changes import Changes
from shedbim.writers.imprint import Imprint

__all__ = ["Comparison"]

_PLAIN = Imprint()


@dataclass(frozen=True, eq=False)
class Comparison:
    """Everything that outputs of changes are written from.

    Attributes:
        changes: between the two states.
        names: what the states are called: files, and the settings of the later one.
        project: name of the project.
        project_guid: GlobalId of the project in the later model file.
        model: name of the later model file.
        shed: the later state as a building; None where it was read from another's model.
        notes: sentences a reader must know.
        imprint: what the outputs state besides.
    """

    changes: Changes
    names: tuple[str, str]
    project: str = ""
    project_guid: str = ""
    model: str = "model.ifc"
    shed: Shed | None = None
    notes: tuple[str, ...] = ()
    imprint: Imprint = _PLAIN

    @cached_property
    def groups(self) -> tuple[ChangeGroup, ...]:
        """The changes in few sentences."""
        return change_groups(self.changes)

    @cached_property
    def drawn(self) -> Shed | None:
        """The later state as models show it."""
        return None if self.shed is None else at_level(self.shed, self.imprint.level)
