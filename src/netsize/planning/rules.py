"""The planning distribution, by rule: what is believed about the effect of the new study.

All on the metric; the plan turns it to the shown scale afterwards.
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from scipy.special import stdtr

from netsize.effect_sizes.curves import band_probabilities
from netsize.effect_sizes.metrics import Metric
from netsize.effect_sizes.records import EffectSize
from netsize.errors import EvidenceError
from netsize.numerics.grid import GridDistribution
from netsize.planning.evidence import Literature
from netsize.planning.settings import PlanSettings
from netsize.synthesis.precise import centre, spread
from netsize.synthesis.selection_averaged import AveragedFit
from netsize.synthesis.selection_profile import ProfileFit
from netsize.synthesis.selection_single import conditional_bound

__all__ = ["exact_confidence", "of_reading", "planning_distribution"]

_CELLS = 2401


def planning_distribution(
    literature: Literature, settings: PlanSettings
) -> tuple[GridDistribution, str]:
    """The distribution on the metric, and where it comes from in words.

    "averaged" (default) and "profile" are the two readings of the exact selection model; their
    target is the new study's effect or the mean. The other rules know the mean only:
    "pooled-limit", the t distribution of the pooled mean (Perugini, Gallucci & Costantini 2014);
    "single-study", the bound of the largest significant study conditional on its significance
    (Taylor & Muller 1996; Anderson, Kelley & Maxwell 2017); "fixed", the effect given.
    """
    metric = literature.table.metric
    if settings.rule == "fixed":
        value = metric.pooled(np.array([settings.planning_effect]))[0]
        return GridDistribution.at(float(value)), "the effect given with --planning-effect"
    if settings.rule == "pooled-limit":
        return _of_pooled(literature), "the pooled mean, without correction"
    if settings.rule == "single-study":
        row = _largest_significant(literature)
        return _of_single(row, metric), f"{row.label} alone, given that it is significant"
    if settings.rule == "averaged":
        return of_reading(literature.averaged, settings)
    return of_reading(literature.profile, settings)


def of_reading(
    fit: AveragedFit | ProfileFit, settings: PlanSettings
) -> tuple[GridDistribution, str]:
    """The distribution of the target under one reading of the selection model."""
    reading = f"the exact selection model, {settings.rule} reading"
    if settings.target == "mean":
        return fit.mean, f"the mean effect under {reading}"
    return fit.new_study, f"a new study's effect under {reading}"


def _of_pooled(literature: Literature) -> GridDistribution:
    """Confidence distribution of the pooled mean; the exact one of the result where it is alone."""
    pooled = literature.pooled
    if pooled is None:
        raise EvidenceError(
            "the rule pooled-limit needs results with a point estimate; inequalities have none"
        )
    first = literature.rows[0]
    if len(literature.rows) == 1 and first.printed is not None:
        return exact_confidence(first)
    reach = 12 * pooled.se
    points = np.linspace(pooled.mean - reach, pooled.mean + reach, _CELLS)
    df = pooled.df if np.isfinite(pooled.df) else 1e9
    return GridDistribution.from_cdf(points, stdtr(df, (points - pooled.mean) / pooled.se))


def exact_confidence(row: EffectSize) -> GridDistribution:
    """The exact confidence distribution of one result with a value, C(θ) = P(X > x | θ)."""
    e = row.evidence
    reach = 12 * spread(e)
    low = centre(e) - reach if row.metric.signed else 0.0
    points = np.linspace(low, centre(e) + reach, _CELLS)
    beyond = replace(e, cuts=(e.low,))
    return GridDistribution.from_cdf(points, band_probabilities([beyond], points)[0, 0])


def _largest_significant(literature: Literature) -> EffectSize:
    usable = [
        row
        for row in literature.rows
        if row.evidence.band == 0 and row.evidence.low == row.evidence.high
    ]
    if not usable:
        raise EvidenceError(
            "the rule single-study needs a significant result with its statistic; "
            "use the rule averaged, which takes every result"
        )
    return max(usable, key=lambda row: row.n)


def _of_single(row: EffectSize, metric: Metric) -> GridDistribution:
    """The bound as a confidence distribution: its quantile at 1-a is the bound at assurance a.

    Bounds stop at 0, so what lies below is known only as "no positive effect" and escapes.
    """
    confidence = np.linspace(0.001, 0.999, 333)
    bounds = np.array([conditional_bound(row.evidence, assurance=1 - c) for c in confidence])
    positive = bounds > 0
    if positive.sum() < 2:
        return GridDistribution.at(0.0)
    return GridDistribution.from_cdf(bounds[positive], confidence[positive])
