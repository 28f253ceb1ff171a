"""Clashes between the program's own pieces: what overlaps, touches or is too near, once for each configuration."""
