"""Tests for a lopsided funnel: regression on the standard error and rank correlation."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from numpy.typing import ArrayLike
from scipy.special import ndtr, stdtr

from netsize.numerics.arrays import Array
from netsize.synthesis.padding import guarded
from netsize.synthesis.records import Diagnostic, number_of_results
from netsize.synthesis.small_study import precision_line

__all__ = [
    "RankTest",
    "RegressionTest",
    "rank_test",
    "rank_test_many",
    "regression_test",
    "regression_test_many",
]

_EXACT_RANKS = 33  # without ties the permutation law is counted out up to here


class RegressionTest(NamedTuple):
    """Slope on the standard error with its t, degrees of freedom and two-sided p, shape (...)."""

    slope: Array
    t: Array
    df: Array
    p: Array


class RankTest(NamedTuple):
    """Kendall's tau-b with its two-sided p, shape (...)."""

    tau: Array
    p: Array


def regression_test_many(
    estimates: ArrayLike, null_variances: ArrayLike, mask: ArrayLike | None = None
) -> RegressionTest:
    """Regression test of asymmetry (Egger, Davey Smith, Schneider & Minder 1997).

    Their intercept of y/σ on 1/σ is this slope of y on σ with weights 1/σ². σ is the effect-free
    standard error (Pustejovsky & Rodgers 2019). nan for k < 3 or equal σ.
    """
    line = precision_line(estimates, null_variances, mask, power=1)
    with np.errstate(all="ignore"):
        t = line.slope / line.slope_se
        p = np.where(np.isnan(t), np.nan, 2 * stdtr(line.df, -np.abs(t)))
    return RegressionTest(line.slope, t, line.df, p)


def rank_test_many(
    estimates: ArrayLike, variances: ArrayLike, mask: ArrayLike | None = None
) -> RankTest:
    """Rank test of asymmetry (Begg & Mazumdar 1994), ties included.

    Kendall's tau-b of (y - m)/√(v - 1/W) with v, m the common-effect mean and W = Σ1/v.
    Effect-free variances avoid the correlation of an estimate with its own variance. Without ties
    and with at most 33 results p comes from the exact permutation law, otherwise from the normal
    with the variance corrected for ties (Kendall 1970, ch. 4).
    """
    y, v, present, k = guarded(estimates, variances, mask)
    with np.errstate(all="ignore"):
        w = present / v
        total = w.sum(axis=-1, keepdims=True)
        rest = v - 1 / total
        z = (y - (w * y).sum(axis=-1, keepdims=True) / total) / np.sqrt(rest)
        # deviations that differ by rounding alone are ties
        scale = np.abs(np.where(present > 0, np.nan_to_num(z), 0)).max(axis=-1, keepdims=True)
        z = np.round(np.where(scale > 1e-9, np.nan_to_num(z) / scale, 0.0), 10)
        both = present[..., :, None] * present[..., None, :]
        sign_z = both * np.sign(z[..., :, None] - z[..., None, :])
        sign_v = both * np.sign(v[..., :, None] - v[..., None, :])
        score = (sign_z * sign_v).sum(axis=(-2, -1)) / 2
        pairs = k * (k - 1) / 2
        untied_z = np.abs(sign_z).sum(axis=(-2, -1)) / 2
        untied_v = np.abs(sign_v).sum(axis=(-2, -1)) / 2
        tau = score / np.sqrt(untied_z * untied_v)
        variance = _tied_variance(k, _tie_sizes(sign_z, both), _tie_sizes(sign_v, both))
        p = 2 * ndtr(-np.abs(score) / np.sqrt(variance))
    exact = (untied_z == pairs) & (untied_v == pairs) & (k <= _EXACT_RANKS) & (k >= 2)
    if exact.any():
        p = np.where(exact, _exact_p(score, k), p)
    return RankTest(tau, np.where(np.isfinite(tau), p, np.nan))


def regression_test(estimates: ArrayLike, null_variances: ArrayLike) -> Diagnostic:
    """The regression test as one record."""
    key, label, used = "regression-asymmetry", "Regression test of asymmetry", np.size(estimates)
    fit = regression_test_many(estimates, null_variances)
    if not np.isfinite(fit.t):
        enough = used >= 3
        return Diagnostic(
            key=key,
            label=label,
            used=used,
            status="at a boundary" if enough else "too few results",
            reason="all results are equally precise, or lie on a line"
            if enough
            else "a line needs at least three results",
            limits=_limits(used),
        )
    return Diagnostic(
        key=key,
        label=label,
        used=used,
        statistic=float(fit.t),
        symbol="t",
        p=float(fit.p),
        finding=_finding(float(fit.slope), float(fit.p)),
        limits=_limits(used),
    )


def rank_test(estimates: ArrayLike, null_variances: ArrayLike) -> Diagnostic:
    """The rank test as one record."""
    key, label, used = "rank-asymmetry", "Rank test of asymmetry", np.size(estimates)
    fit = rank_test_many(estimates, null_variances)
    if used < 3 or not np.isfinite(fit.tau):
        return Diagnostic(
            key=key,
            label=label,
            used=used,
            status="too few results" if used < 3 else "at a boundary",
            reason="ranks need at least three results"
            if used < 3
            else "all results are equally precise, or agree exactly",
            limits=_limits(used),
        )
    return Diagnostic(
        key=key,
        label=label,
        used=used,
        statistic=float(fit.tau),
        symbol="tau",
        p=float(fit.p),
        finding=_finding(float(fit.tau), float(fit.p)),
        limits=_limits(used),
    )


def _finding(direction: float, p: float) -> str:
    if p >= 0.1:
        return "no clear trend of effects with precision"
    if direction > 0:
        return "less precise results show larger effects, as selective printing would make them"
    return "less precise results show smaller effects, the opposite of selective printing"


def _limits(used: int) -> str:
    """From the published operating characteristics (Sterne, Gavaghan & Egger 2000, 2011)."""
    if used < 10:
        return (
            f"With {number_of_results(used)}, fewer than the ten usually asked for, it misses "
            "strong selection more often than not; no trend is no all-clear."
        )
    if used < 20:
        return (
            f"With {used} results it finds severe selection about half the time; a trend can also "
            "come from small studies that differ in kind."
        )
    return "A trend can also come from small studies that differ in kind, and chance makes some."


def _tie_sizes(signs: Array, both: Array) -> Array:
    """For each result, how many results (itself included) share its value; 0 for padding."""
    return np.asarray((both - np.abs(signs)).sum(axis=-1))


def _tied_variance(k: Array, ties_x: Array, ties_y: Array) -> Array:
    """Variance of Kendall's S with ties (Kendall 1970, eq. 4.4); sums over groups of ties.

    A group of t results contributes t times, so each term is divided by t.
    """

    def over_groups(ties: Array, term: Array) -> Array:
        return np.asarray(np.where(ties > 0, term / np.maximum(ties, 1), 0.0).sum(axis=-1))

    def pairs(t: Array) -> Array:
        return over_groups(t, t * (t - 1))

    def triples(t: Array) -> Array:
        return over_groups(t, t * (t - 1) * (t - 2))

    def fives(t: Array) -> Array:
        return over_groups(t, t * (t - 1) * (2 * t + 5))

    base = k * (k - 1) * (2 * k + 5) - fives(ties_x) - fives(ties_y)
    second = triples(ties_x) * triples(ties_y) / (9 * k * (k - 1) * np.maximum(k - 2, 1))
    third = pairs(ties_x) * pairs(ties_y) / (2 * k * (k - 1))
    return np.asarray(base / 18 + second + third)


def _exact_p(score: Array, k: Array) -> Array:
    """Two-sided p of S = concordant - discordant from the number of inversions."""
    out = np.full(np.shape(score), np.nan)
    for size in np.unique(k[(k >= 2) & (k <= _EXACT_RANKS)]).astype(int):
        law = np.ones(1)
        for n in range(2, size + 1):  # the n-th entry adds 0..n-1 inversions, equally likely
            law = np.convolve(law, np.full(n, 1 / n))
        most = size * (size - 1) // 2
        rows = k == size
        fewer = np.minimum((most - np.abs(score[rows])) / 2, most).astype(int)
        out[rows] = np.minimum(1.0, 2 * np.cumsum(law)[fewer])
    return out
