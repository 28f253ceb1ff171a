"""Clashes with what is not the shed's own steel: elements of other trades, and reserved zones."""
