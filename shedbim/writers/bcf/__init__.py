"""Findings for coordination: topics of the BIM Collaboration Format (buildingSMART BCF-XML 2.1 and 3.0)."""

from __future__ import annotations

from shedbim.writers.bcf.writer import VERSIONS, write, write_topics

__all__ = ["VERSIONS", "write", "write_topics"]
