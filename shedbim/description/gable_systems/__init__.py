"""Ways of framing the end walls: one module a system, one row each in the table below."""

from shedbim.description.gable_systems.rafter import RafterGable
from shedbim.description.gable_systems.same import SameGable
from shedbim.description.gable_systems.system import GableSystem
from shedbim.fields import table

__all__ = ["GABLE_SYSTEMS", "GableSystem", "RafterGable", "SameGable"]

#: Every gable system by its name: the list, the check and the switch.
GABLE_SYSTEMS = table("system", SameGable, RafterGable)
