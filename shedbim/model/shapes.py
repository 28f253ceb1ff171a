"""The shapes of parts. Each has ``volume``, ``mass``, ``surface`` and ``box`` of its own; solids are in ``solids``."""

from __future__ import annotations

from shedbim.model.bars import Bar
from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.plates import Plate

__all__ = ["Shape"]

Shape = Bar | Plate | BoltGroup
