"""What is handed to a writer: the shed, what it is drawn as, the imprint, and the findings of the checks."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING

from shedbim.checks.finding import Finding
from shedbim.limits import Criteria
from shedbim.model.levels import at_level
from shedbim.model.shed import Shed
from shedbim.revisions.change_groups import ChangeGroup, change_groups
from shedbim.revisions.changes import Changes
from shedbim.writers.imprint import Imprint

if TYPE_CHECKING:
    from shedbim.writers.bcf.topics import Topic

__all__ = ["Handover"]

_PLAIN = Imprint()


@dataclass(frozen=True, eq=False)
class Handover:
    """Everything that outputs are written from; what several of them need is made once.

    Attributes:
        shed: the building, whole.
        imprint: what every output states besides.
        findings: of the checks, in their order; None where the shed was not checked.
        changes: since the last issue; None where nothing was issued.
        criteria: what the shed is held against; None for the limits of the tables.
    """

    shed: Shed
    imprint: Imprint = _PLAIN
    findings: tuple[Finding, ...] | None = None
    changes: Changes | None = None
    criteria: Criteria | None = None

    @cached_property
    def drawn(self) -> Shed:
        """The shed as models show it at the level of detail of the imprint."""
        return at_level(self.shed, self.imprint.level)

    @cached_property
    def change_groups(self) -> tuple[ChangeGroup, ...]:
        """The changes in few sentences; none where nothing was issued."""
        return () if self.changes is None else change_groups(self.changes)

    @cached_property
    def topics(self) -> tuple[Topic, ...]:
        """The findings as topics with their snapshots; none where the shed was not checked."""
        from shedbim.writers.bcf.topics import topics_of  # noqa: PLC0415 - pictures are drawn by few outputs

        return topics_of(self.shed, self.imprint, self.findings or ())
