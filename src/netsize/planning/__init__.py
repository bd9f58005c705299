"""Floor 3: from evidence to planning distribution to plan."""

from netsize.planning.plan import Plan, plan
from netsize.planning.sensitivity import Variation, leave_one_out, sensitivity
from netsize.planning.settings import PlanSettings

__all__ = ["Plan", "PlanSettings", "Variation", "leave_one_out", "plan", "sensitivity"]
