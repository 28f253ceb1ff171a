"""The keys of the summary and what each means; data alone, so that the command line can show it at once."""

from __future__ import annotations

__all__ = ["KEYS"]

#: Key and meaning, in the order of the file. Dots lead into objects, ``[]`` into the entries of a list, and
#: ``<...>`` stands for names that depend on the shed.
KEYS: tuple[tuple[str, str], ...] = (
    ("program", "always shedbim"),
    ("version", "version of the program"),
    ("time_stamp", "when the outputs were made, UTC, ISO 8601"),
    ("schema", "schema of the model file: IFC4, IFC4X3_ADD2 or IFC2X3"),
    (
        "description_sha256",
        "SHA-256 of the bytes of the description, then of a zero byte and each setting; 64 hexadecimal digits, "
        "empty without a file",
    ),
    ("settings[]", "a field set for this run over that of the file, as path=value; none as a rule"),
    ("project.id", "the project's id, the scope of every GlobalId"),
    ("project.name", "its name"),
    ("project.number", "its number"),
    ("project.revision", "its revision"),
    ("pieces", "number of pieces in the building"),
    ("parts", "number of different parts"),
    ("joints", "number of places where pieces meet, free ends included"),
    ("assemblies", "number of assemblies, put together in the shop or on site"),
    ("mass_kg", "mass of all pieces, kg"),
    ("footprint_m2", "plan area between the outer grid lines, m²"),
    ("mass_per_m2_kg", "mass_kg divided by footprint_m2, kg/m²"),
    ("roles.<role>.pieces", "pieces of that role, such as column or purlin"),
    ("roles.<role>.parts", "parts of that role"),
    ("roles.<role>.mass_kg", "mass of the pieces of that role, kg"),
    ("joint_kinds.<kind>", "number of joints of that kind"),
    ("largest_node_eccentricity", "the truss node whose axes miss one another most; null without trusses"),
    ("largest_node_eccentricity.mm", "by how much they miss, mm"),
    ("largest_node_eccentricity.pieces", "keys of the pieces that meet there"),
    ("largest_node_eccentricity.point_mm", "the work point x, y, z in building axes, mm"),
    ("findings", "what the checks found; null where the shed was not checked"),
    ("findings.error", "open findings that are severe: the shed is not sound to hand over"),
    ("findings.warning", "open findings to be looked at and answered"),
    ("findings.note", "open findings worth knowing"),
    ("findings.waived", "findings of any severity that the description accepts with a reason"),
    ("defaults[].field", "a field that the description left open"),
    ("defaults[].value", "the value it was given"),
    ("notes[]", "what was assumed or simplified in this shed"),
    ("cautions[]", "what holds for every output of the program"),
)
