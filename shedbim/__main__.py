"""``python -m shedbim`` is the command line."""

from __future__ import annotations

from shedbim.cli import main

main()
