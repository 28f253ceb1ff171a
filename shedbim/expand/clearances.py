"""Distances that a detailer leaves between pieces, each with its reason. All mm.

Where no source is named the value is common practice and a value from memory: a sensible start that the
fabricator's own standards replace.
"""

from __future__ import annotations

__all__ = [
    "BASE_NODE",
    "BRACE_SET_BACK",
    "CROSSING_GAP",
    "GUSSET",
    "POST_HEAD_GAP",
    "STRUT_END_GAP",
    "WEB_TO_CHORD_END",
]

#: Toe of the first web to the sawn end of the chord: room for its weld (common practice).
WEB_TO_CHORD_END = 10.0
#: Thickness of the plate between two crossing angles (common practice: 8 to 12 mm).
GUSSET = 10.0
#: Corner of a brace to the column, rafter, chord or strut it runs up to (common practice: 10 to 20 mm).
BRACE_SET_BACK = 20.0
#: Half of a split tube to the side of the tube that passes (common practice).
CROSSING_GAP = 20.0
#: End of a strut or tie to the face it meets (common practice: 10 mm for a fin plate).
STRUT_END_GAP = 10.0
#: Head of a gable post to the underside of the steel above, so that the roof can deflect and the post
#: takes no roof load (common practice: 20 to 30 mm).
POST_HEAD_GAP = 25.0
#: Work point of a wall brace above the column base: clear of the base plate (common practice).
BASE_NODE = 150.0
