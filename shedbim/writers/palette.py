"""The colour of each role, the same in pictures and in the model file; colours of our own choice."""

from __future__ import annotations

from shedbim.model.roles import Role

__all__ = ["PALETTE", "RGB"]

#: Red, green and blue, 0 to 255 each (sRGB).
RGB = tuple[int, int, int]

#: Main frames cool, web members green, secondary steel warm, bracing red and violet: what carries what
#: can be told at a glance, and no two roles that meet share a colour.
PALETTE: dict[Role, RGB] = {
    Role.COLUMN: (92, 124, 164),
    Role.GABLE_POST: (128, 164, 196),
    Role.RAFTER: (112, 144, 190),
    Role.GABLE_RAFTER: (150, 176, 208),
    Role.TOP_CHORD: (84, 150, 168),
    Role.BOTTOM_CHORD: (70, 130, 150),
    Role.DIAGONAL: (134, 184, 144),
    Role.POST: (166, 196, 118),
    Role.PURLIN: (226, 182, 108),
    Role.SIDE_RAIL: (222, 158, 112),
    Role.GABLE_RAIL: (210, 140, 120),
    Role.EAVES_STRUT: (196, 150, 80),
    Role.VALLEY_STRUT: (176, 134, 88),
    Role.STRUT: (178, 140, 178),
    Role.ROOF_BRACE: (204, 92, 92),
    Role.WALL_BRACE: (186, 84, 122),
    Role.TIE: (144, 116, 180),
    Role.SAG_BAR: (140, 140, 136),
}
