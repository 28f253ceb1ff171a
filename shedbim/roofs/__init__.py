"""Roof forms: one module a form, one row each in the table below."""

from shedbim.fields import table
from shedbim.roofs.flat import Flat
from shedbim.roofs.form import RoofForm
from shedbim.roofs.gable import Gable
from shedbim.roofs.mono_pitch import MonoPitch
from shedbim.roofs.slope import Slope

__all__ = ["FORMS", "Flat", "Gable", "MonoPitch", "RoofForm", "Slope"]

#: Every roof form by its name: the list, the check and the switch.
FORMS = table("form", Gable, MonoPitch, Flat)
