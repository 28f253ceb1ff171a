"""Two buildings counted by hand: how many pieces of each role, and the lengths of some of them.

The arithmetic stands beside the numbers; mm unless said otherwise. Both have unequal bays, and unequal
slopes or spans.
"""

from __future__ import annotations

from collections import Counter

import cast
import pytest

from shedbim.model.roles import Role
from shedbim.tolerance import SAME_LENGTH


def counts(name: str) -> dict[Role, int]:
    shed = cast.members_of(name)
    return dict(Counter(shed.parts[i].role for i in shed.pieces.part.tolist()))


# "lopsided": span 19.3 m, bays 6.9, 5.2, 6.1 m, lines 1 to 4, slopes 7 and 12 degrees, eaves 5.8 m.
#
# Ridge: tan 7 = 0.122785, tan 12 = 0.212557; 19 300 x 0.212557 / 0.335342 = 12 233 from line A, 7 067 from B.
# Slopes: 12 233 / cos 7 = 12 325 and 7 067 / cos 12 = 7 225 long.
LOPSIDED = {
    Role.COLUMN: 2 * 4,
    # At most 5 200 apart: 12 233 / 5 200 = 2.35, 3 parts; 7 067 / 5 200 = 1.36, 2 parts: posts at 2 places on
    # the left slope, at the ridge, at 1 place on the right slope; in two gables.
    Role.GABLE_POST: 2 * (2 + 1 + 1),
    # The gables have rafters, one a slope; trusses stand on lines 2 and 3.
    Role.GABLE_RAFTER: 2 * 2,
    # A chord has two lengths; the truss is longer than 18 m, so one of them is divided.
    Role.TOP_CHORD: 2 * 3,
    Role.BOTTOM_CHORD: 2 * 3,
    # Pratt: nine panels, one diagonal in each, a post at each of ten panel points.
    Role.DIAGONAL: 2 * 9,
    Role.POST: 2 * 10,
    # (12 325 - 150 - 150) / 1 600 = 7.5, 8 steps, 9 lines; (7 225 - 300) / 1 600 = 4.3, 5 steps, 6 lines.
    Role.PURLIN: 3 * (9 + 6),
    # Rails: the roof steel is 70 / cos 12 + 1 500 + 70 / cos 7 = 1 642 high at line A, so the column's axis
    # ends at 7 442 and its lower corner at 7 442 - 145 tan 7 = 7 424; (7 424 - 250 - 300) / 1 700 = 4.04, 5 steps,
    # 6 rails; at line B 7 443 - 145 tan 12 = 7 412, (7 412 - 550) / 1 700 = 4.04, 6 rails.
    Role.SIDE_RAIL: 3 * (6 + 6),
    # Gable rails go on in the steps of line A, (7 174 - 300) / 5 = 1 375: 300, 1 675, 3 050, 4 425, 5 799,
    # 7 174, 8 549. The uprights stand at 0, 4 078, 8 156, 12 233, 15 767, 19 300. Rails of a stretch stay 250
    # under the roof at its lower end and 65, a rail's width, under its lower head: 7 192, 7 611, 8 112, 7 859,
    # 7 193. Six rails are below each of these.
    Role.GABLE_RAIL: 2 * 5 * 6,
    # Purlins: two rows asked for; between 9 lines, between 6, and over the ridge.
    # Side rails: by span, one row in each bay (5 to 8 m) between 6 rails on either side; the stretches of the
    # gables are shorter than 5 m: none.
    Role.SAG_BAR: 3 * 2 * (8 + 5 + 1) + 3 * 1 * (5 + 5),
    # One braced bay, crossed in each of 3 + 2 panels between posts.
    Role.ROOF_BRACE: 2 * (3 + 2),
    # Struts at the nodes between the column lines: the four places of the posts.
    Role.STRUT: 4,
    # Two column lines; (7 372 - 150) / 6 900 = 1.05, flatter than 55 degrees (1.43): one tier, crossed.
    Role.WALL_BRACE: 2 * 1 * 2,
    Role.EAVES_STRUT: 2 * 3,
    # Ties between the two trusses, at most 12 m apart over 18.9 m: one, in the bay between them.
    Role.TIE: 1,
}

# "lean": spans 11.2 and 8.7 m, bays 4.8, 5.5, 8.3, 5.1 m, one slope of 6.5 degrees, high on the left, eaves
# 4.4 m. tan 6.5 = 0.113936: line B is 991 higher than line C, line A 2 267.
LEAN = {
    Role.COLUMN: 3 * 5,
    # At most 3 900 apart: 11 200 / 3 900 = 2.9 and 8 700 / 3 900 = 2.2, 3 parts each.
    Role.GABLE_POST: 2 * (2 + 2),
    Role.RAFTER: 2 * 3,
    Role.GABLE_RAFTER: 2 * 2,
    # One plane over both spans: (19 900 / cos 6.5 - 70 - 70) / 1 400 = 19 889 / 1 400 = 14.2, 15 steps.
    Role.PURLIN: 16 * 4,
    # Steel of the roof upright: 330 / cos 6.5 = 332. Line C: 4 732 - 122 tan 6.5 - 250 - 500 = 3 968,
    # / 1 300 = 3.05, 4 steps; line A: 3 968 + 2 267 = 6 236, / 1 300 = 4.8, 5 steps.
    Role.SIDE_RAIL: (5 + 6) * 4,
    # In steps of 3 968 / 4 = 992 from 500: 500, 1 492, 2 484, 3 476, 4 468, 5 460, 6 452. Uprights at 0, 3 733,
    # 7 467, 11 200, 14 100, 17 000, 19 900; the roof there at 6 999, 6 574, 6 149, 5 723, 5 393, 5 063, 4 732,
    # the heads of posts 220 / cos 6.5 + 25 = 246 lower. Uppermost rails at 6 263 (head - 65), 5 837 (head - 65),
    # 5 473 (roof - 250), 5 082, 4 751 (heads), 4 482 (roof): 6, 6, 6, 5, 5, 5 rails.
    Role.GABLE_RAIL: 2 * (3 * 6 + 3 * 5),
    # By span: no row in 4.8 m, one in 5.5 m, two in 8.3 m, one in 5.1 m; none in the gables' short stretches.
    Role.SAG_BAR: (0 + 1 + 2 + 1) * (15 + 4 + 5),
    # Braced: bays 2 and 4. Single braces in 3 + 3 panels; struts at the posts' places, and in all bays one
    # along line B, where the slope runs on over the columns.
    Role.ROOF_BRACE: 2 * (3 + 3),
    Role.STRUT: 2 * (2 + 2) + 4,
    # Outer lines only, one tier (6 833 - 150 over 5 500 is 1.2), crossed tubes: one whole and two halves.
    Role.WALL_BRACE: 2 * 2 * 3,
    Role.EAVES_STRUT: 2 * 4,
}


@pytest.mark.parametrize(("name", "wanted"), [("lopsided", LOPSIDED), ("lean", LEAN)])
def test_pieces_of_each_role(name, wanted):
    assert counts(name) == wanted


@pytest.mark.parametrize(
    ("name", "key", "length"),
    [
        # Butted with a gap of 6: 5 200 - 6. In the end bays out to the gable rails' outer face: half the column
        # (150), lift 10, rail 175: 6 900 - 3 + 335 and 6 100 - 3 + 335.
        ("lopsided", "2-3/purlin/A-B/1/1", 5194.0),
        ("lopsided", "1-2/purlin/A-B/2/6", 7232.0),
        ("lopsided", "3-4/purlin/A-B/1/5", 6432.0),
        # Axis to the roof at 7 442.09, its higher corner 145 tan 7 = 17.80 above that; a base plate of 20 below it,
        # and a cap of 10, 10 / cos 7 = 10.08 measured upright.
        ("lopsided", "2/column/A", 7429.81),
        # To the corner of the columns in the end bay: 6 900 + 150 - 3.
        ("lopsided", "1-2/side rail/B/4", 7047.0),
        # The strut fits between the flanges of HEA 300, so it stops 10 off the web, 8.5 thick:
        # 5 200 - 2 (4.25 + 10), less two fins with two M20 each (40 + 70 + 40, 10 before the cap, a cap of 10).
        ("lopsided", "2-3/eaves strut/A", 4831.5),
        # From column face, bracket (45 + 20) and end plate (20) to the same at line B, along the slope:
        # (11 200 - 2 x 207.25) / cos 6.5 = 10 855.3; cut upright, 330 tan 6.5 = 37.6 more to the long points.
        ("lean", "2/rafter/A-B/1", 10892.88),
        ("lean", "3-4/purlin/A-C/1/7", 8292.0),
        # The tube from face to face: 8 300 - 2 (122.25 + 10), less two fins of 170 as before.
        ("lean", "3-4/strut/B", 7695.5),
    ],
)
def test_lengths(name, key, length):
    shed = cast.members_of(name)
    part = shed.parts[shed.pieces.part[shed.pieces.keys.index(key)]]
    # A part is as long as the shortest bar that it stands for.
    assert length - SAME_LENGTH - 0.05 <= part.bar.length <= length + 0.05


def test_labels_are_those_of_the_description():
    shed = cast.members_of("valley")
    assert shed.grid.letters == ("K", "L", "M")
    assert shed.grid.numbers == ("10", "20", "30")
    assert shed.grid.x == (0.0, 16400.0, 37400.0)
    assert shed.grid.y == (0.0, 5400.0, 12000.0)
    labels = {key.split("/")[0] for key in shed.pieces.keys}
    assert labels == {"10", "20", "30", "10-20", "20-30"}
