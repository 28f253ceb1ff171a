"""The view: one page that shows a shed in three dimensions, opened from disk with no network."""

from shedbim.writers.view.page import write
from shedbim.writers.view.shown import ShownChange, ShownFinding

__all__ = ["ShownChange", "ShownFinding", "write"]
