"""The version of the program, as every output states it. A test holds it against pyproject.toml."""

from __future__ import annotations

__all__ = ["__version__"]

__version__ = "0.1.0"
