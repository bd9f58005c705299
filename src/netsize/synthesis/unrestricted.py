"""Unrestricted weighted least squares and its adequately powered subset.

The common-effect mean with a multiplicative instead of an additive spread, variance Q/((k-1)Σ1/v);
then the same over results with at least 80 % power for that mean, standard error at most
|mean|/2.80 (Stanley, Doucouliagos & Ioannidis 2017).
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from numpy.typing import ArrayLike
from scipy.special import ndtri

from netsize.numerics.arrays import Array, BoolArray
from netsize.synthesis.confidence import AGREE_BY_LUCK, symmetric, unusable
from netsize.synthesis.lines import squared_residuals
from netsize.synthesis.padding import guarded
from netsize.synthesis.records import Estimate

__all__ = [
    "Powered",
    "Unrestricted",
    "adequately_powered",
    "adequately_powered_many",
    "unrestricted",
    "unrestricted_many",
]

# 1.960 + 0.842: an effect this many standard errors from 0 is found with 80 % power at .05
_ADEQUATE = float(ndtri(0.975) + ndtri(0.8))


class Unrestricted(NamedTuple):
    """Means of many literatures, shape (...); nan for fewer than two results but for `mean`.

    scale : Q/(k-1), the multiplicative spread.
    """

    mean: Array
    se: Array
    df: Array
    scale: Array
    used: Array


class Powered(NamedTuple):
    """The adequately powered subset: its fit, which results it holds, and the mean it started at.

    Where fewer than two results are adequately powered the fit is that of all results.
    """

    fit: Unrestricted
    adequate: BoolArray
    number: Array


def unrestricted_many(
    estimates: ArrayLike, variances: ArrayLike, mask: ArrayLike | None = None
) -> Unrestricted:
    """UWLS of each literature of an array (..., k)."""
    y, v, present, k = guarded(estimates, variances, mask)
    with np.errstate(all="ignore"):
        w = present / v
        total = w.sum(axis=-1)
        mean = (w * y).sum(axis=-1) / total
        df = np.where(k >= 2, k - 1, np.nan)
        scale = squared_residuals(y - mean[..., None], y, w) / df
        se = np.sqrt(scale / total)
    return Unrestricted(mean, se, df, scale, k)


def adequately_powered_many(
    estimates: ArrayLike, variances: ArrayLike, mask: ArrayLike | None = None
) -> Powered:
    """UWLS over the results with adequate power for the UWLS mean of all."""
    y, v, present, _ = guarded(estimates, variances, mask)
    everything = unrestricted_many(y, v, present > 0)
    adequate = (present > 0) & (_ADEQUATE * np.sqrt(v) <= np.abs(everything.mean)[..., None])
    number = adequate.sum(axis=-1)
    chosen = np.where((number >= 2)[..., None], adequate, present > 0)
    return Powered(unrestricted_many(y, v, chosen), adequate, number)


def unrestricted(estimates: ArrayLike, variances: ArrayLike, *, level: float = 0.95) -> Estimate:
    """Unrestricted weighted least squares as one row; needs k ≥ 2."""
    return _row(
        "unrestricted",
        "Unrestricted least squares",
        unrestricted_many(estimates, variances),
        level,
        "",
    )


def adequately_powered(
    estimates: ArrayLike, variances: ArrayLike, *, level: float = 0.95
) -> Estimate:
    """The adequately powered subset as one row; falls back on all results, and says so."""
    key, label = "adequately-powered", "Adequately powered only"
    powered = adequately_powered_many(estimates, variances)
    number, total = int(powered.number), int(np.size(estimates))
    if number >= 2:
        return _row(key, label, powered.fit, level, f"{number} of {total} have 80% power")
    found = "no result has" if number == 0 else "only one result has"
    return unusable(
        key,
        label,
        level=level,
        used=number,
        reason=f"{found} 80% power for the unrestricted mean; the rule then uses that mean",
    )


def _row(key: str, label: str, fit: Unrestricted, level: float, reason: str) -> Estimate:
    if fit.used < 2:
        return unusable(
            key, label, level=level, used=int(fit.used), reason="the spread needs two results"
        )
    if 0 < fit.scale < 1:
        reason = "; ".join(part for part in (reason, AGREE_BY_LUCK) if part)
    return symmetric(
        key,
        label,
        estimate=float(fit.mean),
        se=float(fit.se),
        df=float(fit.df),
        level=level,
        used=int(fit.used),
        reason=reason,
    )
