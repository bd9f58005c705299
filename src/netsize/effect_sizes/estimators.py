"""Unbiased estimators of effects and of their variances: pure formulas over arrays."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike
from scipy.special import ellipkm1

from netsize.numerics.arrays import Array, broadcast
from netsize.numerics.gamma import log_half_step
from netsize.numerics.hypergeometric import half_half

__all__ = [
    "epsilon_squared",
    "eta_squared",
    "large_sample_variance",
    "omega_squared",
    "small_sample_factor",
    "unbiased_correlation",
    "unbiased_noncentrality",
    "unbiased_noncentrality_variance",
    "unbiased_variance",
]


def small_sample_factor(m: ArrayLike) -> Array:
    """J(m) = Γ(m/2) / (√(m/2) Γ((m-1)/2)), the factor that makes d unbiased.

    Parameters
    ----------
    m : error degrees of freedom, m > 1, any shape; nan elsewhere (at m = 1 the mean of d is
        infinite and no factor serves).

    References
    ----------
    Hedges (1981), eq. 6e.
    """
    m = np.asarray(m, dtype=float)
    with np.errstate(all="ignore"):
        return np.where(m > 1, np.exp(log_half_step((m - 1) / 2)) / np.sqrt(m / 2), np.nan)


def unbiased_variance(g: ArrayLike, m: ArrayLike, null_variance: ArrayLike) -> Array:
    """Unbiased estimate of the variance of g = J(m) d: v₀ + g² (1 - (m-2)/(m J²)).

    Parameters
    ----------
    g : unbiased standardized mean difference. m : error degrees of freedom, m > 1.
    null_variance : v₀, the variance of d where the effect is 0 and σ is known: 1/n₁ + 1/n₂ for
        independent groups, 1/n for differences. All broadcast.

    Notes
    -----
    d² (m-2)/m - v₀ is unbiased for the squared effect, and Var g = E g² - θ² (Hedges 1983). At
    m = 2 the true variance is infinite, and so is the mean of this estimate.
    """
    g, m, null_variance = broadcast(g, m, null_variance)
    return np.asarray(null_variance + g**2 * (1 - (m - 2) / (m * small_sample_factor(m) ** 2)))


def large_sample_variance(d: ArrayLike, n: ArrayLike, null_variance: ArrayLike) -> Array:
    """Large-sample variance of a standardized mean difference, v₀ + d²/(2n).

    `n` is the total number of participants; `d` may be d or g, `null_variance` as in
    `unbiased_variance` (Hedges & Olkin 1985, ch. 5, eq. 8).
    """
    d, n, null_variance = broadcast(d, n, null_variance)
    return np.asarray(null_variance + d**2 / (2 * n))


def unbiased_correlation(r: ArrayLike, n: ArrayLike) -> Array:
    """The unbiased estimate of ρ, r ₂F₁(½, ½; (n-2)/2; 1-r²) (Olkin & Pratt 1958, eq. 2.3).

    Parameters
    ----------
    r : correlation, |r| ≤ 1. n : number of pairs, n ≥ 3, means estimated; df + 2 for a partial
        correlation. Broadcast; nan outside.

    Notes
    -----
    Olkin and Pratt write (n-1)/2 with n the degrees of freedom of the covariance matrix, one less
    than the pairs counted here. At n = 3 the estimate is the sign of r, at n = 4 (2/π) r K(1-r²)
    with the complete elliptic integral K, at n = 5 r arccos|r|/√(1-r²).
    """
    r, n = broadcast(r, n)
    valid = (np.abs(r) <= 1) & (n >= 3)
    size = np.abs(r)
    with np.errstate(all="ignore"):
        # with 4 and 5 pairs 1 - r² has lost the digits of a small r; these forms have not
        few = np.where(
            n == 4,
            2 / np.pi * r * ellipkm1(r * r),
            r * np.arccos(size) / np.sqrt((1 - size) * (1 + size)),
        )
        few = np.where(size == 1, r, np.where(r == 0, 0.0, few))
        many = r * half_half((np.where(valid & (n > 5), n, 6.0) - 2) / 2, (1 - size) * (1 + size))
    value = np.where(n == 3, np.sign(r), np.where((n == 4) | (n == 5), few, many))
    return np.where(valid, value, np.nan)


def unbiased_noncentrality(f: ArrayLike, df1: ArrayLike, df2: ArrayLike) -> Array:
    """The unbiased estimate of λ from F, df₁F(df₂-2)/df₂ - df₁; negative where F < its mean.

    `f` ≥ 0, `df1` > 0, `df2` > 2 (nan below: the mean of F is infinite); broadcast. Inverts
    E F = df₂(df₁+λ)/(df₁(df₂-2)) (Johnson, Kotz & Balakrishnan 1995, eq. 30.3a).
    """
    f, df1, df2 = broadcast(f, df1, df2)
    with np.errstate(all="ignore"):
        return np.where(df2 > 2, df1 * f * (df2 - 2) / df2 - df1, np.nan)


def unbiased_noncentrality_variance(ncp: ArrayLike, df1: ArrayLike, df2: ArrayLike) -> Array:
    """Variance of `unbiased_noncentrality` at the noncentrality λ ≥ 0; `df2` > 4 (nan below).

    2((df₁+λ)² + (df₁+2λ)(df₂-2))/(df₂-4), from the variance of F (Johnson, Kotz & Balakrishnan
    1995, eq. 30.3b).
    """
    ncp, df1, df2 = broadcast(ncp, df1, df2)
    with np.errstate(all="ignore"):
        value = 2 * ((df1 + ncp) ** 2 + (df1 + 2 * ncp) * (df2 - 2)) / (df2 - 4)
        return np.where(df2 > 4, value, np.nan)


def eta_squared(f: ArrayLike, df1: ArrayLike, df2: ArrayLike, *, others: ArrayLike = 0.0) -> Array:
    """Share of variance in the sample, df₁F/(df₁F + df₂ + others).

    `others` is the sum of df·F over the other effects of the same design: 0 gives partial η²,
    the full sum η² of the total variance. All broadcast.
    """
    f, df1, df2, others = broadcast(f, df1, df2, others)
    return np.asarray(df1 * f / (df1 * f + df2 + others))


def epsilon_squared(
    f: ArrayLike, df1: ArrayLike, df2: ArrayLike, *, others: ArrayLike = 0.0
) -> Array:
    """Kelley's (1935) nearly unbiased share, df₁(F-1)/(df₁F + df₂ + others).

    Negative where F < 1 and kept so: truncation at 0 biases a mean upward (Okada 2017).
    """
    f, df1, df2, others = broadcast(f, df1, df2, others)
    return np.asarray(df1 * (f - 1) / (df1 * f + df2 + others))


def omega_squared(
    f: ArrayLike,
    df1: ArrayLike,
    df2: ArrayLike,
    *,
    n: ArrayLike | None = None,
    others: ArrayLike = 0.0,
) -> Array:
    """Hays's (1963) share, between participants; negative values kept.

    Partial (`others` = 0): df₁(F-1)/(df₁(F-1) + n) with n the participants of the whole design,
    df₁+df₂+1 (one-way) unless given. With `others`, the sum of df·F over the other effects, of the
    total variance: df₁(F-1)/(df₁F + df₂ + others + 1).
    """
    f, df1, df2, others = broadcast(f, df1, df2, others)
    total = df1 + df2 + 1 if n is None else np.asarray(n, dtype=float)
    explained = df1 * (f - 1)
    whole = np.where(others > 0, df1 * f + df2 + others + 1, explained + total)
    return np.asarray(explained / whole)
