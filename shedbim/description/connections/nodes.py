"""The welds of truss nodes that a user describes."""

from __future__ import annotations

from typing import Annotated

from shedbim import units
from shedbim.fields import Options, Quantity, left_out

__all__ = ["NodeOptions"]


class NodeOptions(Options):
    """The nodes of trusses."""

    throat: Annotated[float, Quantity(units.LENGTH, "3 mm", "20 mm")] | None = left_out(
        "full strength of the thinner wall", "throat of the fillet welds of webs on chords"
    )
