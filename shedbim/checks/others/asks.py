"""How far the elements of other trades ask steel to keep from them, by their class."""

from __future__ import annotations

from dataclasses import dataclass

from shedbim.limits import Criteria
from shedbim.model.other_trades import OtherElement

__all__ = ["Ask", "ask_of"]

#: The first words of a class, the limit all round, and the limit of the free height above; the first row that fits.
_BY_CLASS: tuple[tuple[tuple[str, ...], str, str], ...] = (
    (("IfcDuct", "IfcAirTerminal", "IfcDamper"), "clear_of_ducts", ""),
    (("IfcPipe", "IfcValve"), "clear_of_pipes", ""),
    (("IfcCableCarrier",), "clear_of_cables", "clear_above_cables"),
    (("IfcCable",), "clear_of_cables", ""),
    (("IfcFireSuppression",), "clear_of_sprinklers", ""),
    (("IfcTransport",), "clear_of_cranes", ""),
    (("IfcDoor",), "clear_of_doors", ""),
)
_OTHER_SERVICES = "clear_of_equipment"


@dataclass(frozen=True)
class Ask:
    """What one element asks for: distances in mm, 0 for none, and the sources of both."""

    around: float
    above: float
    source: str
    source_above: str


def ask_of(element: OtherElement, criteria: Criteria) -> Ask:
    """Give what an element asks for; elements of other trades than the services may touch steel unless they say so."""
    around, above = next(
        (row[1:] for row in _BY_CLASS if element.kind.startswith(row[0])),
        (_OTHER_SERVICES if element.is_service else "", ""),
    )
    value, source = criteria.limit(around) if around else (0.0, "")
    height, source_above = criteria.limit(above) if above else (0.0, "")
    return Ask(value, height, source, source_above)
