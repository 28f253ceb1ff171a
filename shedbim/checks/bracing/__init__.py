"""Checks of bracing by rule: where it is, how it hangs together, and what it holds; no forces are worked out."""
