"""The findings of the checks as JSON: all that is known of each, with every place.

``findings[]`` has the id (the same in every output and after a change of dimension), code, severity, area, the
sentence, what to change, the figures of the worst place in ``unit``, the source of the limit, the reason where it is
waived (else null), and ``places[]``: the worst first, each with its point in building axes, where that is in words, the
value there, the pieces by key, mark and GlobalId, and the elements of other trades as their models name them.
"""

from __future__ import annotations

import json
from typing import Any

from shedbim.checks.figures import in_unit
from shedbim.checks.finding import Finding, Place
from shedbim.model.identity import piece_ids
from shedbim.writers.finding_words import counts, finding_ids, where
from shedbim.writers.handover import Handover
from shedbim.writers.imprint import CAUTIONS

__all__ = ["findings_data", "findings_text"]

#: Decimals of values in their units: nobody measures finer, and noise of the last digits stays out.
_DECIMALS = 6


def findings_data(handover: Handover) -> dict[str, Any]:
    """Give the findings as plain data; a handover without findings gives none."""
    findings, project, imprint = handover.findings or (), handover.shed.project, handover.imprint
    known = _Pieces(handover, findings)
    ids = finding_ids(project.id, findings)
    return {
        "program": "shedbim",
        "version": imprint.version,
        "time_stamp": imprint.stamp,
        "description_sha256": imprint.digest,
        "settings": list(imprint.settings),
        "project": {
            "id": project.id,
            "name": project.name,
            "number": project.number,
            "revision": project.revision,
        },
        "counts": counts(findings),
        "findings": [
            {"id": str(name), **_told(finding, known)} for name, finding in zip(ids, findings, strict=True)
        ],
        "cautions": list(CAUTIONS),
    }


def findings_text(handover: Handover) -> str:
    """Give the findings as JSON text that ends in a line feed; texts keep their own letters (UTF-8)."""
    return json.dumps(findings_data(handover), ensure_ascii=False, indent=2, allow_nan=False) + "\n"


class _Pieces:
    """Pieces that findings speak of, as they are told: key, mark and GlobalId."""

    def __init__(self, handover: Handover, findings: tuple[Finding, ...]) -> None:
        self.shed = handover.shed
        rows = sorted({piece for finding in findings for piece in finding.pieces})
        pieces = self.shed.pieces
        ids = piece_ids(self.shed.project.id, [pieces.names[row] for row in rows])
        self._told = {
            row: {
                "key": pieces.keys[row],
                "mark": self.shed.parts[int(pieces.part[row])].mark,
                "global_id": name,
            }
            for row, name in zip(rows, ids, strict=True)
        }

    def of(self, place: Place) -> list[dict[str, str]]:
        """Give the pieces of a place."""
        return [self._told[piece] for piece in place.pieces]


def _told(finding: Finding, known: _Pieces) -> dict[str, Any]:
    """One finding but for its id."""
    code = finding.code
    return {
        "code": code.name,
        "severity": code.severity.value,
        "area": code.area,
        "about": finding.about,
        "text": finding.says,
        "change": finding.change,
        "value": _number(finding.value, finding.unit),
        "limit": _number(finding.limit, finding.unit),
        "unit": finding.unit,
        "source": finding.source,
        "waived": finding.waived or None,
        "places": [
            {
                "point_mm": [round(value, 3) for value in place.point],
                "where": where(known.shed, place),
                "value": _number(place.value, finding.unit),
                "pieces": known.of(place),
                "others": [
                    {"global_id": each.guid, "class": each.kind, "name": each.name, "file": each.file}
                    for each in place.others
                ],
            }
            for place in finding.places
        ],
    }


def _number(value: float | None, unit: str) -> float | None:
    return None if value is None else round(in_unit(value, unit), _DECIMALS)
