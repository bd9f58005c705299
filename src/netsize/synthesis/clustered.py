"""Means and precision-effect lines over single results, with errors clustered by sample."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from scipy.special import stdtr

from netsize.synthesis.confidence import symmetric, unusable
from netsize.synthesis.dependence import clustered_line
from netsize.synthesis.heterogeneity import Heterogeneity
from netsize.synthesis.random_effects import Pooled, pool, quantile
from netsize.synthesis.records import Estimate
from netsize.synthesis.results import Results
from netsize.synthesis.small_study import RULE_LEVEL

__all__ = ["clustered_pet_peese", "clustered_pool", "clustered_precision_effect"]


def clustered_pool(results: Results, *, heterogeneity: Heterogeneity, level: float) -> Pooled:
    """The random-effects mean of all results with a clustered standard error; needs two samples."""
    base = pool(
        results.estimates,
        results.variances,
        heterogeneity=heterogeneity,
        interval="wald",
        level=level,
    )
    if results.means.size < 2:
        return replace(base, reason="one sample: errors cannot be clustered, the interval is plain")
    weights = 1 / (results.variances + (base.tau2 or 0.0))
    line = clustered_line([np.ones(weights.size)], results.estimates, weights, results.codes)
    se = float(line.se[0])
    half = float(quantile((1 + level) / 2, line.df)) * se
    return replace(
        base,
        method=f"random effects, {heterogeneity} τ², errors clustered by sample",
        se=se,
        df=line.df,
        low=base.mean - half,
        high=base.mean + half,
    )


def clustered_precision_effect(
    results: Results, key: str, label: str, *, power: int, level: float
) -> Estimate:
    """PET (`power` 1) or PEESE (`power` 2) with clustered errors; needs three samples."""
    used, samples = results.estimates.size, results.means.size
    if samples < 3:
        return unusable(
            key, label, level=level, used=used, reason="clustered errors need three samples"
        )
    v = results.null_variances
    if np.ptp(v) <= 1e-12 * v.max():
        return unusable(
            key,
            label,
            level=level,
            used=used,
            reason="all results are equally precise, so there is no trend to fit",
        )
    line = clustered_line(
        [np.ones(used), v ** (power / 2)], results.estimates, 1 / v, results.codes
    )
    return symmetric(
        key,
        label,
        estimate=float(line.coefficients[0]),
        se=float(line.se[0]),
        df=line.df,
        level=level,
        used=used,
        reason=f"errors clustered by {samples} samples",
    )


def clustered_pet_peese(results: Results, key: str, label: str, *, level: float) -> Estimate:
    """The conditional rule with clustered errors."""
    first = clustered_precision_effect(results, key, label, power=1, level=level)
    if first.estimate is None or not first.se:
        return first
    p = float(stdtr(results.means.size - 1, -first.estimate / first.se))
    if p >= RULE_LEVEL:
        return first
    return clustered_precision_effect(results, key, label, power=2, level=level)
