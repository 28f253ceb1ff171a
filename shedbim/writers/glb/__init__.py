"""The mesh model: glTF 2.0 (ISO/IEC 12113) as one binary file, a mesh for each part placed many times."""

from __future__ import annotations

from shedbim.writers.glb.writer import write

__all__ = ["write"]
