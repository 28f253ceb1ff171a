"""Kinds of joint, one module each: the members that meet go in; plates, bolts, welds and cuts come out."""

from __future__ import annotations
