"""Bolts, anchors, nuts, holes, welds, plate stock and vents: published data and the rules that go with it."""

from __future__ import annotations
