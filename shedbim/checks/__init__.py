"""Checks: a Shed and its criteria in, findings out. They never ask how the shed was made: a second opinion."""
