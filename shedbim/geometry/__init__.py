"""Placements, outlines and bars: nothing here knows of sheds. Lengths in mm, angles in radians."""
