"""Ways of carrying the roof over a span: one module a system, one row each in the table below."""

from shedbim.description.roof_systems.angle_truss import AngleTrussRoof
from shedbim.description.roof_systems.rafter import RafterRoof
from shedbim.description.roof_systems.system import RoofSystem
from shedbim.description.roof_systems.truss import TrussRoof
from shedbim.description.roof_systems.trussed import TrussedRoof
from shedbim.fields import table

__all__ = ["ROOF_SYSTEMS", "AngleTrussRoof", "RafterRoof", "RoofSystem", "TrussRoof", "TrussedRoof"]

#: Every roof system by its name: the list, the check and the switch.
ROOF_SYSTEMS = table("system", RafterRoof, TrussRoof, AngleTrussRoof)
