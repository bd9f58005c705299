"""Cohen's f and w from unbiased estimates of their squares, which may be negative."""

from __future__ import annotations

import math
from collections.abc import Callable

import numpy as np
from numpy.polynomial.legendre import leggauss

from netsize.numerics import noncentral_chi2, noncentral_f
from netsize.numerics.arrays import Array

__all__ = ["signed_root", "variance_from_chi2", "variance_from_f"]

_NODES, _WEIGHTS = leggauss(160)
_SIZE_OF_PANEL = 400.0  # λ up to which one panel of nodes resolves the density


def signed_root(square: float) -> float:
    """The root of an estimate of f², with the sign of the estimate.

    Unbiased estimates of f² are negative where F is small; cutting them at 0 before pooling would
    bias a mean upward (Okada 2017), so they enter f as a negative root.
    """
    return math.copysign(math.sqrt(abs(square)), square)


def variance_from_f(ncp: float, *, df1: float, df2: float, scale: float) -> float:
    """Variance of the signed root of f̂² = λ̂/scale² where F(df1, df2) has noncentrality `ncp`.

    λ̂ is the unbiased estimate df₁F(df₂-2)/df₂ - df₁; df₂ > 4. By quadrature of the noncentral F
    density: the delta method diverges at f = 0, and normal theory misses by a factor up to two.
    """
    slope = df2 / (df1 * (df2 - 2))  # F = slope (λ̂ + df₁)
    return (
        _variance(
            lambda estimate: noncentral_f.log_density(slope * (estimate + df1), df1, df2, ncp),
            slope=slope,
            lowest=-df1,
            size=ncp + df1,
            reach=3 + 30 / (df2 - 2),
        )
        / scale**2
    )


def variance_from_chi2(ncp: float, *, df: float, scale: float) -> float:
    """The same for ŵ² = (χ² - df)/scale²."""
    return (
        _variance(
            lambda estimate: noncentral_chi2.log_density(estimate + df, df, ncp),
            slope=1.0,
            lowest=-df,
            size=ncp + df,
            reach=3.0,
        )
        / scale**2
    )


def _variance(
    log_density: Callable[[Array], Array],
    *,
    slope: float,
    lowest: float,
    size: float,
    reach: float,
) -> float:
    """Variance of s(λ̂), s the signed root, for a λ̂ above `lowest` < 0 of typical size `size`.

    Over w = s(λ̂), in which the root has no kink: below 0 in q with w = s(lowest) + q², which
    removes a singularity of the density at its lower end; above 0 in r with w = √size sinh r.
    """
    bottom = -math.sqrt(-lowest)
    q = math.sqrt(-bottom) / 2 * (1 + _NODES)
    panels = math.ceil(math.sqrt(size / _SIZE_OF_PANEL))
    width = reach / panels
    r = (width * (np.arange(panels)[:, None] + (1 + _NODES) / 2)).ravel()
    w = np.concatenate([bottom + q * q, math.sqrt(size) * np.sinh(r)])
    steps = np.concatenate(
        [
            math.sqrt(-bottom) / 2 * _WEIGHTS * 2 * q,
            width / 2 * np.tile(_WEIGHTS, panels) * math.sqrt(size) * np.cosh(r),
        ]
    )
    # λ̂ = w|w|; near the lower end λ̂ - lowest = -(w - bottom)(w + bottom) keeps its digits
    estimate = w * np.abs(w)
    estimate[: q.size] = lowest + q * q * (-2 * bottom - q * q)
    weights = steps * 2 * np.abs(w) * slope * np.exp(log_density(estimate))
    weights /= weights.sum()  # the rule's own error in the total, below 1e-6
    mean = float(weights @ w)
    return float(weights @ (w - mean) ** 2)
