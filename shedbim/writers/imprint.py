"""What every output states besides the shed: program, time stamp, schema, digest; and the cautions."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import UTC, datetime

from shedbim.version import __version__

__all__ = ["CAUTIONS", "UNDATED", "Imprint"]

#: The time stamp of outputs nobody dated: fixed, so that equal input gives equal bytes.
UNDATED = datetime(2000, 1, 1, tzinfo=UTC)

#: What a reader of any output must know before relying on it.
CAUTIONS = (
    "Sizes are the user's own choice. Nothing here is a structural design: every section, connection and "
    "foundation needs checking to the local code by a licensed engineer.",
    "Plates, bolts and welds are laid out by rule from the members that meet: no resistance is computed. "
    "Cladding and foundations are not included, in the model or in any mass; welds are lists, not masses.",
    "Lengths are saw lengths, long point to long point. Masses are computed from the outlines with fillets "
    "at 7850 kg/m³, without coating, waste or rolling tolerance. Surfaces are outer ones, without cut ends.",
)


@dataclass(frozen=True)
class Imprint:
    """Where an output comes from.

    Attributes:
        timestamp: when it was made, with its time zone.
        schema: the schema of the model file, for example ``IFC4``.
        digest: SHA-256 of the description's bytes as 64 hexadecimal digits, or empty when there was no file;
            each setting follows the bytes after a zero byte.
        version: of the program.
        level: the level of detail that the models show.
        settings: the fields set over those of the file for this run, each as ``path=value``.
    """

    timestamp: datetime = UNDATED
    schema: str = "IFC4"
    digest: str = ""
    version: str = __version__
    level: str = "coordination"
    settings: tuple[str, ...] = ()

    @property
    def stamp(self) -> str:
        """The time stamp in UTC as ISO 8601 to the second, for example ``2000-01-01T00:00:00Z``."""
        return self.timestamp.astimezone(UTC).strftime("%Y-%m-%dT%H:%M:%SZ")
