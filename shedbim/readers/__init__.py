"""Readers: files of others in, values of the model out. They never raise for what a file holds."""

from shedbim.readers.other_models import read_other

__all__ = ["read_other"]
