"""Limit meta-analysis (Rücker, Schwarzer, Carpenter, Binder & Schumacher 2011).

The random-effects model with a small-study term, y_i = β + √(v_i+τ²) (α + ε_i), ε_i ~ N(0, 1).
A study of infinite precision has v_i = 0, so the bias-corrected mean is β + ατ; with τ = 0 it is
the intercept of a regression on the standard error.
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from numpy.typing import ArrayLike

from netsize.numerics.arrays import Array
from netsize.synthesis.confidence import symmetric, unusable
from netsize.synthesis.heterogeneity import Heterogeneity, tau_squared
from netsize.synthesis.lines import weighted_line
from netsize.synthesis.padding import guarded
from netsize.synthesis.records import Estimate, number_of_results
from netsize.synthesis.small_study import FEW

__all__ = ["Limit", "limit", "limit_many"]


class Limit(NamedTuple):
    """Limit means β + ατ of many literatures with their standard errors and τ², shape (...)."""

    estimate: Array
    se: Array
    alpha: Array
    tau2: Array


def limit_many(
    estimates: ArrayLike,
    variances: ArrayLike,
    mask: ArrayLike | None = None,
    *,
    null_variances: ArrayLike | None = None,
    heterogeneity: Heterogeneity = "restricted-likelihood",
) -> Limit:
    """Fit α and β by maximum likelihood at the τ² of the model without α.

    The line in √(v+τ²) has known weights 1/(v+τ²); its covariance is not rescaled. nan where k < 3
    or all results are equally precise.

    Notes
    -----
    `null_variances` (v by default, as published) replace v in the line: where v contains the
    estimate, the line would find a slope that selection has not made.
    """
    y, v, present, _ = guarded(estimates, variances, mask)
    tau2 = tau_squared(y, v, present > 0, method=heterogeneity).value
    null = v if null_variances is None else guarded(estimates, null_variances, mask).variances
    total = null + np.nan_to_num(tau2)[..., None]
    line = weighted_line(np.sqrt(total), y, present / total)
    tau = np.sqrt(tau2)
    variance = line.intercept_unit + 2 * tau * line.covariance_unit + tau2 * line.slope_unit
    return Limit(line.intercept + tau * line.slope, np.sqrt(variance), line.slope, tau2)


def limit(
    estimates: ArrayLike,
    variances: ArrayLike,
    *,
    null_variances: ArrayLike | None = None,
    heterogeneity: Heterogeneity = "restricted-likelihood",
    level: float = 0.95,
) -> Estimate:
    """Limit meta-analysis as one row; needs k ≥ 3."""
    key, label, used = "limit", "Limit meta-analysis", int(np.size(estimates))
    if used < 3:
        return unusable(
            key, label, level=level, used=used, reason="a line needs at least three results"
        )
    fit = limit_many(
        estimates, variances, null_variances=null_variances, heterogeneity=heterogeneity
    )
    if not np.isfinite(fit.estimate):
        return unusable(
            key,
            label,
            level=level,
            used=used,
            reason="all results are equally precise, so there is no trend to fit",
        )
    return symmetric(
        key,
        label,
        estimate=float(fit.estimate),
        se=float(fit.se),
        df=float("inf"),
        level=level,
        used=used,
        tau2=float(fit.tau2),
        reason=f"unreliable with {number_of_results(used)}" if used < FEW else "",
    )
