"""Floor 1: reported result → effect size and evidence curve, a short module a family."""

from netsize.effect_sizes.metrics import METRICS, Metric
from netsize.effect_sizes.records import EffectSize, EffectTable, Evidence
from netsize.effect_sizes.table import effects

__all__ = ["METRICS", "EffectSize", "EffectTable", "Evidence", "Metric", "effects"]
