"""Floor 2: the size of a new study for every design and goal; knows nothing of literature.

`solve` answers most questions. The functions below it work on a `Study` (a design with its
modifiers, made by `make_study`) and effects on the design's own scale, and broadcast.
"""

from __future__ import annotations

from netsize.sizing.chances import (
    Aftermath,
    after_significance,
    expected_power,
    expected_power_ceiling,
    power,
    power_assurance,
    smallest_detectable,
)
from netsize.sizing.designs import DESIGNS, Design, EffectMetric, design_named
from netsize.sizing.distributions import normal_effects
from netsize.sizing.records import Abilities, Cost, Goal, Sizing
from netsize.sizing.solving import solve
from netsize.sizing.study import Modifiers, Study, make_study

__all__ = [
    "DESIGNS",
    "Abilities",
    "Aftermath",
    "Cost",
    "Design",
    "EffectMetric",
    "Goal",
    "Modifiers",
    "Sizing",
    "Study",
    "after_significance",
    "design_named",
    "expected_power",
    "expected_power_ceiling",
    "make_study",
    "normal_effects",
    "power",
    "power_assurance",
    "smallest_detectable",
    "solve",
]
