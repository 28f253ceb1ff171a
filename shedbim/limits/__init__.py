"""What checks hold a shed against: limits with their sources, codes of findings, and what a user set or waived."""

from shedbim.limits.codes import CODES, Code, Severity
from shedbim.limits.criteria import Criteria, Waiver, criteria
from shedbim.limits.limit import LIMITS, REGIONS, Limit

__all__ = ["CODES", "LIMITS", "REGIONS", "Code", "Criteria", "Limit", "Severity", "Waiver", "criteria"]
