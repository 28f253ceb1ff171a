"""The small services model that comes with the presets; run it to renew ``presets/services/seed-store-services.ifc``.

Ducts, pipes, sprinklers and a cable tray for the seed store, placed by the map from an origin of their own. The supply
air passes through the panels of the trusses, as the schedule of passages says. On purpose the extract air and the gas
pipe run through steel, and the sprinkler main and the cable tray hang too near to it.
"""

from __future__ import annotations

from marked_text import ROOT
from services_file import Bend, Run, Setting, services_text

FILE = ROOT / "presets" / "services" / "seed-store-services.ifc"

ELEMENTS: tuple[Run | Bend, ...] = (
    Run("IfcDuctSegment", "RIGIDSEGMENT", "Supply air 1", (0.5,), (3.925, 8.6, 9.113), (3.925, 51.0, 9.113)),
    Bend("IfcDuctFitting", "BEND", "Supply air 2", (0.5,), 0.5, (3.925, 51.0, 9.113), (0, 1, 0), (0, 0, -1)),
    Run("IfcDuctSegment", "RIGIDSEGMENT", "Supply air 3", (0.5,), (3.925, 51.5, 8.613), (3.925, 51.5, 3.2)),
    Run("IfcDuctSegment", "RIGIDSEGMENT", "Extract air 1", (0.8, 0.5), (9.45, 9.0, 9.85), (9.45, 40.0, 9.85)),
    Run(
        "IfcPipeSegment", "RIGIDSEGMENT", "Sprinkler main", (0.168,), (14.4, 1.0, 9.415), (14.4, 59.0, 9.415)
    ),
    *(
        Run(
            "IfcFireSuppressionTerminal",
            "SPRINKLER",
            f"Sprinkler {k + 1}",
            (0.04,),
            (14.4, 9.9 + 5.75 * k, 9.27),
            (14.4, 9.9 + 5.75 * k, 9.331),
        )
        for k in range(8)
    ),
    Run(
        "IfcCableCarrierSegment",
        "CABLETRAYSEGMENT",
        "Cable tray 1",
        (0.3, 0.06),
        (21.0, 8.0, 8.83),
        (21.0, 52.0, 8.83),
    ),
    Run("IfcPipeSegment", "RIGIDSEGMENT", "Gas supply", (0.06,), (-1.0, 3.5, 4.0), (1.0, 3.5, 4.0)),
)


def model_text() -> str:
    """The services model as the text of its file."""
    return services_text(ELEMENTS, Setting(), FILE.name)


if __name__ == "__main__":
    FILE.parent.mkdir(parents=True, exist_ok=True)
    FILE.write_text(model_text(), encoding="utf-8")
