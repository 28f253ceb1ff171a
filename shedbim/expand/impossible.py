"""Descriptions that read well and still cannot be built: the same plain error as any other fault."""

from __future__ import annotations

from shedbim.errors import DescriptionError, Fault

__all__ = ["impossible"]


def impossible(field: str, message: str, *, given: str = "", allowed: str = "") -> DescriptionError:
    """Give the error that names the field to change, what cannot be made, and what would be possible."""
    return DescriptionError([Fault(message, field=field, given=given, allowed=allowed)])
