"""Revisions: what was issued, what a piece is called after a change, and what changed."""
