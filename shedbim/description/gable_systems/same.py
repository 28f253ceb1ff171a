"""End walls that stand on the same frames as the inner ones."""

from __future__ import annotations

from typing import Literal

from shedbim.description.gable_systems.system import GableSystem
from shedbim.fields import required

__all__ = ["SameGable"]


class SameGable(GableSystem):
    """End frames as the inner frames, with posts below them for the wall."""

    system: Literal["same"] = required("end frames as the inner frames, with posts for the wall")
