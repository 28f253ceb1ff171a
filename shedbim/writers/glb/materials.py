"""One material for each role: the colour of the palette, dull, in the linear light of the standard."""

from __future__ import annotations

from collections.abc import Sequence

from shedbim.model.roles import Role
from shedbim.model.shed import Part
from shedbim.writers.glb.text import compact
from shedbim.writers.palette import PALETTE

__all__ = ["materials"]

#: Painted or galvanised steel that is not new: no mirror, and not black in a viewer that has no surroundings
#: to mirror.
_METALLIC, _ROUGHNESS = 0.0, 0.75


def materials(parts: Sequence[Part]) -> tuple[list[str], list[int]]:
    """Give the text of each material in the order of the roles, and the material of each part by its index."""
    present = {part.role for part in parts}
    roles = [role for role in Role if role in present]
    index = {role: number for number, role in enumerate(roles)}
    return [_material(role) for role in roles], [index[part.role] for part in parts]


def _material(role: Role) -> str:
    """The text of a role's material."""
    surface = {
        "baseColorFactor": [*(round(_linear(value / 255), 6) for value in PALETTE[role]), 1],
        "metallicFactor": _METALLIC,
        "roughnessFactor": _ROUGHNESS,
    }
    return compact({"name": role.word, "pbrMetallicRoughness": surface})


def _linear(value: float) -> float:
    """A channel of a screen colour, 0 to 1, as a share of linear light (IEC 61966-2-1, sRGB)."""
    return value / 12.92 if value <= 0.04045 else float(((value + 0.055) / 1.055) ** 2.4)
