"""From a value, its standard error and degrees of freedom to the common record."""

from __future__ import annotations

import math

import numpy as np
from scipy.special import ndtr, stdtr

from netsize.numerics.arrays import Array
from netsize.numerics.grid import GridDistribution
from netsize.synthesis.random_effects import quantile
from netsize.synthesis.records import Estimate, Status

__all__ = ["AGREE_BY_LUCK", "confidence_distribution", "symmetric", "unusable"]

AGREE_BY_LUCK = "the results agree better than by chance, so the interval is too narrow"

_POINTS = np.concatenate([-np.geomspace(60, 8.1, 20), np.linspace(-8, 8, 321)])
_POINTS = np.concatenate([_POINTS, np.geomspace(8.1, 60, 20)])


def confidence_distribution(centre: float, se: float, df: float) -> GridDistribution:
    """centre + se · T, T Student's t on `df` (normal for inf); what lies beyond 60 se escapes."""
    if se == 0:
        return GridDistribution.at(centre)
    law: Array = ndtr(_POINTS) if math.isinf(df) else stdtr(df, _POINTS)
    return GridDistribution.from_cdf(centre + se * _POINTS, law)


def symmetric(
    key: str,
    label: str,
    *,
    estimate: float,
    se: float,
    df: float,
    level: float,
    used: int,
    tau2: float | None = None,
    status: Status = "fine",
    reason: str = "",
) -> Estimate:
    """The record of an estimator with a t interval; a standard error of 0 is marked as such."""
    if se == 0 and status == "fine":
        status = "at a boundary"
        reason = _joined("the results agree exactly, so the standard error comes out as 0", reason)
    half = float(quantile((1 + level) / 2, df)) * se
    return Estimate(
        key=key,
        label=label,
        estimate=estimate,
        se=se,
        low=estimate - half,
        high=estimate + half,
        level=level,
        tau2=tau2,
        used=used,
        status=status,
        reason=reason,
        distribution=confidence_distribution(estimate, se, df),
    )


def unusable(
    key: str, label: str, *, level: float, used: int, reason: str, status: Status | None = None
) -> Estimate:
    """The record of an estimator that cannot say anything here."""
    return Estimate(
        key=key,
        label=label,
        estimate=None,
        level=level,
        used=used,
        status=status or "too few results",
        reason=reason,
    )


def _joined(*parts: str) -> str:
    return "; ".join(part for part in parts if part)
