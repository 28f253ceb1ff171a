"""Pieces and assemblies as elements, and the tree that holds each of them once."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

import numpy as np
from numpy.typing import NDArray

from shedbim.model.identity import piece_ids
from shedbim.model.shed import Shed
from shedbim.writers.ifc.classes import assembly_class
from shedbim.writers.ifc.context import Contexts
from shedbim.writers.ifc.parts import Mapped, shape_representation
from shedbim.writers.ifc.placements import relative, write_placements
from shedbim.writers.ifc.properties import assembly_set, identifier, property_set, relate_set
from shedbim.writers.ifc.spatial import Storey
from shedbim.writers.ifc.stepfile import StepFile
from shedbim.writers.ifc.text import enum, label, listed, quoted

__all__ = ["ElementWriter"]
