"""What the last sheet of the workbook says: what this is, what it is not, and what was assumed."""

from __future__ import annotations

from shedbim.model.shed import Shed
from shedbim.writers.imprint import CAUTIONS, Imprint

__all__ = ["about_lines"]


def about_lines(shed: Shed, imprint: Imprint) -> tuple[tuple[str, str], ...]:
    """Give pairs of a name and a text, in the order they are to be read."""
    project = shed.project
    joints = sum(len(run.pieces) for run in shed.joints)
    lines = [
        ("Project", project.name),
        ("Number", project.number),
        ("Revision", project.revision),
        ("Project id", project.id),
        ("Made by", f"shedbim {imprint.version}"),
        ("Time stamp", imprint.stamp),
        ("Description, SHA-256", imprint.digest),
        ("Schema of the model", imprint.schema),
        ("Pieces, parts, joints", f"{len(shed.pieces)}, {len(shed.parts)}, {joints}"),
        ("Steel", f"{shed.mass / 1000:.3f} t, {shed.mass / shed.footprint:.2f} kg/m²"),
        ("Footprint", f"{shed.footprint:.1f} m² between the outer grid lines"),
    ]
    lines += [("Caution", text) for text in CAUTIONS]
    lines += [("Note", text) for text in shed.notes]
    lines += [(f"Default: {field}", value) for field, value in shed.defaults]
    return tuple(lines)
