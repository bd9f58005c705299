"""The random-effects mean with its interval, heterogeneity measures and prediction interval."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any, Literal, NamedTuple, TypeAlias, get_args

import numpy as np
from numpy.typing import ArrayLike
from scipy.special import ndtri, stdtrit

from netsize.errors import SettingError
from netsize.numerics.arrays import Array, BoolArray
from netsize.synthesis.heterogeneity import Heterogeneity, q_profile, tau_squared
from netsize.synthesis.padding import guarded
from netsize.synthesis.records import plain

__all__ = ["INTERVALS", "IntervalRule", "Pooled", "PooledMany", "pool", "pool_many", "quantile"]

IntervalRule: TypeAlias = Literal["hartung-knapp", "wald"]
INTERVALS: tuple[str, ...] = get_args(IntervalRule)


class PooledMany(NamedTuple):
    """`Pooled` of many literatures: every field an array (...); nan where undefined.

    df : degrees of freedom of the interval, inf for a normal one.
    """

    mean: Array
    se: Array
    df: Array
    low: Array
    high: Array
    tau2: Array
    q: Array
    i2: Array
    h2: Array
    prediction_low: Array
    prediction_high: Array
    used: Array
    converged: BoolArray


@dataclass(frozen=True, slots=True, kw_only=True)
class Pooled:
    """One literature pooled under random effects, on the pooling metric.

    Attributes
    ----------
    method : heterogeneity estimator and interval rule in words.
    mean, se, low, high, level : mean effect, standard error behind the interval, the interval.
    df : degrees of freedom of the interval (inf: normal).
    tau2, tau2_low, tau2_high : between-study variance and its Q-profile interval; None for k < 2.
    q, i2, h2 : Cochran's Q on used - 1 degrees of freedom; H² = max(1, Q/df) and I² = 1 - 1/H²
        (Higgins & Thompson 2002); None for k < 2.
    prediction_low, prediction_high : where the effect of a new study is expected, t on k - 2
        degrees of freedom (Higgins, Thompson & Spiegelhalter 2009); None for k < 3.
    used : number of estimates pooled. converged : whether the τ² search ended at its tolerance.
    reason : what is missing and why, in words; empty when nothing is.
    """

    method: str
    mean: float
    se: float
    df: float
    low: float
    high: float
    level: float
    tau2: float | None
    tau2_low: float | None
    tau2_high: float | None
    q: float | None
    i2: float | None
    h2: float | None
    prediction_low: float | None
    prediction_high: float | None
    used: int
    converged: bool
    reason: str = ""

    def to_dict(self) -> dict[str, Any]:
        """Plain JSON types."""
        return {
            "method": self.method,
            "mean": self.mean,
            "se": self.se,
            "low": self.low,
            "high": self.high,
            "tau2": self.tau2,
            "q": self.q,
            "i2": self.i2,
            "prediction_low": self.prediction_low,
            "prediction_high": self.prediction_high,
        }


def quantile(probability: float, df: ArrayLike) -> Array:
    """Quantile of Student's t on `df` > 0 degrees of freedom, of the normal where df is inf."""
    df = np.asarray(df, dtype=float)
    finite = np.isfinite(df)
    return np.asarray(
        np.where(finite, stdtrit(np.where(finite, df, 1.0), probability), ndtri(probability))
    )


def pool_many(
    estimates: ArrayLike,
    variances: ArrayLike,
    mask: ArrayLike | None = None,
    *,
    heterogeneity: Heterogeneity = "restricted-likelihood",
    interval: IntervalRule = "hartung-knapp",
    level: float = 0.95,
) -> PooledMany:
    """Pool each literature of an array (..., k); see `pool` for the methods.

    One result is its own mean with a normal interval; an empty literature gives nan.
    """
    check(interval, level)
    y, v, present, k = guarded(estimates, variances, mask)
    tau2, converged = tau_squared(y, v, present > 0, method=heterogeneity)
    with np.errstate(all="ignore"):
        w = present / (v + np.nan_to_num(tau2)[..., None])
        total = w.sum(axis=-1)
        mean = (w * y).sum(axis=-1) / total
        wald = 1 / total
        common = present / v
        centre = (common * y).sum(axis=-1) / common.sum(axis=-1)
        q = np.where(k >= 2, (common * (y - centre[..., None]) ** 2).sum(axis=-1), np.nan)
        variance, df = wald, np.full(k.shape, np.inf)
        if interval == "hartung-knapp":
            residual = (w * (y - mean[..., None]) ** 2).sum(axis=-1) / (k - 1)
            adjusted = np.maximum(residual * wald, 1 / common.sum(axis=-1))
            variance = np.where(k >= 2, adjusted, wald)
            df = np.where(k >= 2, np.maximum(k - 1, 1), np.inf)
        se = np.sqrt(variance)
        half = quantile((1 + level) / 2, df) * se
        enough = k >= 3
        reach = quantile((1 + level) / 2, np.where(enough, k - 2, 1.0)) * np.sqrt(tau2 + wald)
        reach = np.where(enough, reach, np.nan)
        h2 = np.maximum(1.0, q / (k - 1))
        i2 = 1 - 1 / h2
    return PooledMany(
        mean, se, df, mean - half, mean + half, tau2, q, i2, h2, mean - reach, mean + reach, k,
        converged,
    )  # fmt: skip


def pool(
    estimates: ArrayLike,
    variances: ArrayLike,
    *,
    heterogeneity: Heterogeneity = "restricted-likelihood",
    interval: IntervalRule = "hartung-knapp",
    level: float = 0.95,
) -> Pooled:
    """Pool k independent estimates under random effects.

    Parameters
    ----------
    estimates, variances : y_i and v_i > 0 on the metric, shape (k,), k ≥ 1.
    heterogeneity : estimator of τ², see `tau_squared`.
    interval : "hartung-knapp", t on k - 1 degrees of freedom (Hartung & Knapp 2001; Sidik &
        Jonkman 2002), or "wald", normal.
    level : confidence level, in (0, 1).

    Notes
    -----
    The Hartung-Knapp variance Σw(y-m)²/((k-1)Σw) can fall to nothing when results agree by luck.
    Here it is never below the common-effect variance 1/Σ(1/v), a departure from the published
    formula that shows only in such cases. The prediction interval uses the plain variance 1/Σw, as
    published.
    """
    y = np.atleast_1d(np.asarray(estimates, dtype=float))
    many = pool_many(y, variances, heterogeneity=heterogeneity, interval=interval, level=level)
    low, high = q_profile(y, variances, level=level)
    used = int(many.used)
    rule = interval if used > 1 else "wald"
    return Pooled(
        method=f"random effects, {heterogeneity} τ², {rule} interval",
        mean=float(many.mean),
        se=float(many.se),
        df=float(many.df),
        low=float(many.low),
        high=float(many.high),
        level=level,
        tau2=plain(float(many.tau2)),
        tau2_low=plain(float(low)),
        tau2_high=plain(float(high)),
        q=plain(float(many.q)),
        i2=plain(float(many.i2)),
        h2=plain(float(many.h2)),
        prediction_low=plain(float(many.prediction_low)),
        prediction_high=plain(float(many.prediction_high)),
        used=used,
        converged=bool(many.converged),
        reason=_reason(used, bool(many.converged)),
    )


def check(interval: str, level: float) -> None:
    """Raise SettingError for an unknown interval rule or a level outside (0, 1)."""
    if interval not in INTERVALS:
        raise SettingError(
            "--interval", f"{interval!r} is not one of {', '.join(INTERVALS)}; choose one"
        )
    if not 0 < level < 1:
        raise SettingError("--level", f"{level:g} is not between 0 and 1; try 0.95")


def _reason(used: int, converged: bool) -> str:
    if not converged:
        return "the search for τ² did not converge; choose another heterogeneity estimator"
    if used == 1:
        return "one result: heterogeneity cannot be seen, the interval is that result's own"
    if used == 2:
        return "two results: τ² is a guess, and a prediction interval needs three"
    return ""
