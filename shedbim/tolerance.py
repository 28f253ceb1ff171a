"""Every tolerance of the program, each with its reason. Lengths in mm."""

from __future__ import annotations

__all__ = ["NOISE", "SAME_LENGTH", "SAME_PLACE", "SHARED_VOLUME", "SOLID_CHORD_ERROR"]

#: Bars that differ by less than this anywhere are one part: half of the millimetre a shop saws to
#: (common practice; EN 1090-2 class 1 allows ±(L/5000 + 2) mm, value from memory).
SAME_LENGTH = 0.5

#: Pieces of two assemblies that lie within this of one another make one assembly type: the width of a
#: marking-out line (common practice).
SAME_PLACE = 1.0

#: What is nearer than this is equal but for floating-point error: a thousand times the error of a
#: length of 1 km, a thousandth of what any shop can measure.
NOISE = 1e-6

#: Arcs of solids are cut into chords that leave them by at most this: keeps the volume of a
#: thin-walled tube within 0.05 %.
SOLID_CHORD_ERROR = 0.02

#: Two pieces may share this much, mm³ (1 cm³): below what a grinder takes off.
SHARED_VOLUME = 1000.0
