"""The summary of a shed as JSON, with the meaning of every key in ``KEYS``."""

from __future__ import annotations

import json
from collections.abc import Iterable
from typing import Any

import numpy as np

from shedbim.checks.finding import Finding
from shedbim.model.joints import JointKind, JointRun
from shedbim.model.shed import Shed
from shedbim.writers.finding_words import counts
from shedbim.writers.imprint import CAUTIONS, Imprint
from shedbim.writers.schedules.tables import by_role
from shedbim.writers.summary_keys import KEYS

__all__ = ["KEYS", "summary", "summary_text"]


def summary(shed: Shed, imprint: Imprint, findings: Iterable[Finding] | None = None) -> dict[str, Any]:
    """Give the summary as plain data with the keys of ``KEYS`` in their order; no findings where not checked."""
    project = shed.project
    return {
        "program": "shedbim",
        "version": imprint.version,
        "time_stamp": imprint.stamp,
        "schema": imprint.schema,
        "description_sha256": imprint.digest,
        "settings": list(imprint.settings),
        "project": {
            "id": project.id,
            "name": project.name,
            "number": project.number,
            "revision": project.revision,
        },
        "pieces": len(shed.pieces),
        "parts": len(shed.parts),
        "joints": sum(len(run.pieces) for run in shed.joints),
        "assemblies": len(shed.assemblies),
        "mass_kg": round(shed.mass, 3),
        "footprint_m2": round(shed.footprint, 3),
        "mass_per_m2_kg": round(shed.mass / shed.footprint, 3),
        "roles": _roles(shed),
        "joint_kinds": _joint_kinds(shed),
        "largest_node_eccentricity": _largest_eccentricity(shed),
        "findings": None if findings is None else counts(findings),
        "defaults": [{"field": field, "value": value} for field, value in shed.defaults],
        "notes": list(shed.notes),
        "cautions": list(CAUTIONS),
    }


def summary_text(shed: Shed, imprint: Imprint, findings: Iterable[Finding] | None = None) -> str:
    """Give the summary as JSON text that ends in a line feed; texts keep their own letters (UTF-8)."""
    return json.dumps(summary(shed, imprint, findings), ensure_ascii=False, indent=2, allow_nan=False) + "\n"


def _roles(shed: Shed) -> dict[str, dict[str, Any]]:
    table = by_role(shed)
    names = ("role", "parts", "pieces", "mass total")
    columns = [table.column(name) for name in names]
    return {
        str(role): {"pieces": pieces, "parts": parts, "mass_kg": round(float(mass), 3)}
        for role, parts, pieces, mass in zip(*columns, strict=True)
    }


def _joint_kinds(shed: Shed) -> dict[str, int]:
    counts = {kind: 0 for kind in JointKind}
    for run in shed.joints:
        counts[run.kind] += len(run.pieces)
    return {kind.word: count for kind, count in counts.items() if count}


def _largest_eccentricity(shed: Shed) -> dict[str, Any] | None:
    """The truss node whose axes miss one another most; the first of equals, None without truss nodes."""
    worst: tuple[float, JointRun, int] | None = None
    for run in shed.joints:
        if run.kind is not JointKind.NODE or not len(run.pieces):
            continue
        # Nodes that repeat differ by rounding noise only: compare to the micrometre, take the first.
        missed = np.round(run.eccentricity, 3)
        row = int(np.argmax(np.abs(missed)))
        if worst is None or abs(missed[row]) > abs(worst[0]):
            worst = (float(missed[row]), run, row)
    if worst is None:
        return None
    eccentricity, run, row = worst
    return {
        "mm": eccentricity,
        "pieces": [shed.pieces.keys[piece] for piece in run.pieces[row].tolist()],
        "point_mm": [round(float(value), 3) for value in run.points[row]],
    }
