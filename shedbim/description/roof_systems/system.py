"""What every roof system has."""

from __future__ import annotations

from shedbim.fields import Options

__all__ = ["RoofSystem"]


class RoofSystem(Options):
    """Base of the ways of carrying a roof over a span; each adds its field ``system`` and its options."""
