"""The colour of each role, the same in pictures and in the model file; colours of our own choice."""

from __future__ import annotations

from shedbim.model.roles import Role

__all__ = ["PALETTE", "RGB"]

#: Red, green and blue, 0 to 255 each (sRGB).
RGB = tuple[int, int, int]

#: Main frames cool, web members green, secondary steel warm, bracing red and violet: what carries what
#: can be told at a glance, and no two roles that meet share a colour. Fittings are of a deep green darker
#: than any member, fasteners of a strong magenta, so that a joint stands out on white and on dark paper.
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
    Role.BASE_PLATE: (12, 107, 77),
    Role.PACK: (53, 146, 83),
    Role.SHEAR_KEY: (46, 96, 81),
    Role.CAP_PLATE: (0, 123, 100),
    Role.END_PLATE: (11, 116, 58),
    Role.FIN_PLATE: (17, 134, 89),
    Role.HAUNCH: (47, 141, 57),
    Role.STIFFENER: (36, 94, 44),
    Role.SEAT: (75, 111, 57),
    Role.GUSSET: (48, 128, 41),
    Role.CLEAT: (28, 114, 104),
    Role.SPLICE_PLATE: (62, 111, 84),
    Role.SLEEVE: (72, 138, 101),
    Role.STAY: (78, 148, 50),
    Role.BOLTS: (210, 39, 176),
    Role.ANCHORS: (160, 48, 191),
    Role.NUTS: (228, 92, 190),
}
