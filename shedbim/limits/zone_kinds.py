"""The kinds of reserved zones, each with the limit that says how far steel keeps from it."""

from __future__ import annotations

__all__ = ["ZONE_KINDS"]

#: Name of the limit by kind of zone.
ZONE_KINDS: dict[str, str] = {
    "door": "clear_of_doors",
    "crane-hook-path": "clear_of_cranes",
    "sprinkler": "clear_of_sprinklers",
    "walkway": "clear_of_walkways",
    "free": "clear_of_free_zones",
}
