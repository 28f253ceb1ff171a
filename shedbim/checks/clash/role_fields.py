"""Which group of fields of the description places the pieces of a role."""

from __future__ import annotations

from shedbim.model.roles import Role, Sort

__all__ = ["field_of", "fields_of"]

_FIELDS: dict[Role, str] = {
    Role.COLUMN: "frames.columns",
    Role.GABLE_POST: "frames.gables",
    Role.RAFTER: "frames.roof",
    Role.GABLE_RAFTER: "frames.gables",
    Role.TOP_CHORD: "frames.roof",
    Role.BOTTOM_CHORD: "frames.roof",
    Role.DIAGONAL: "frames.roof",
    Role.POST: "frames.roof",
    Role.PURLIN: "purlins",
    Role.SAG_BAR: "purlins",
    Role.SIDE_RAIL: "rails",
    Role.GABLE_RAIL: "rails",
    Role.EAVES_STRUT: "bracing",
    Role.VALLEY_STRUT: "bracing",
    Role.STRUT: "bracing",
    Role.ROOF_BRACE: "bracing.roof",
    Role.WALL_BRACE: "bracing.walls",
    Role.TIE: "bracing",
}


def field_of(role: Role) -> str:
    """Give the group of fields that places a role: fittings and fasteners by their connections."""
    return _FIELDS[role] if role.sort is Sort.MEMBER else "connections"


def fields_of(*roles: Role) -> str:
    """Give the groups of fields of some roles as words: ``purlins or bracing.roof``."""
    return " or ".join(dict.fromkeys(field_of(role) for role in roles))
