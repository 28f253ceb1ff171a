"""Checks of making and moving: what is bought, drilled, dipped, carried and lifted; and figures out of the usual."""
