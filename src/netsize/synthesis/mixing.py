"""Averages of curves over a normal distribution of effects: ∫ C(θ) N(θ; μ, τ²) dθ.

Curves come as splines of their logarithms. Two rules share the work. Where τ is wide against
the grid, the trapezoid rule over the grid converges geometrically (the integrand is smooth and dies
out at both ends). Where τ is narrow, Gauss–Legendre over μ ± 6τ takes
over and turns into C(μ) itself as τ → 0. On a half line (θ ≥ 0) the normal is truncated at 0
and renormalised.
"""

from __future__ import annotations

import numpy as np
from numpy.polynomial.legendre import leggauss
from numpy.typing import ArrayLike
from scipy.interpolate import PPoly
from scipy.special import log_ndtr, ndtr

from netsize.numerics.arrays import Array

__all__ = ["LOG_FLOOR", "mix", "normal_cdf"]

# Relative likelihoods and normal weights below e^-300 are levelled there: "impossible" either way,
# and their products stay clear of the subnormal numbers, on which processors are slow.
LOG_FLOOR = -300.0

_REACH = 6.0  # standard deviations of N(μ, τ²) covered by the narrow rule
_NODES, _WEIGHTS = leggauss(20)
# τ below this many grid steps goes by the narrow rule; a half line needs more because the
# trapezoid rule feels the cut at 0, corrected only to second order.
_NARROW_LINE, _NARROW_HALF_LINE = 1.5, 3.0


def mix(
    curves: PPoly, values: Array, theta: Array, mu: Array, tau: Array, *, half_line: bool
) -> Array:
    """log ∫ e^{c(θ)} N(θ; μ, τ²) dθ for every curve c, every τ and μ.

    Parameters
    ----------
    curves : m logarithms of curves as one spline, curves(θ) of shape (*θ.shape, m).
    values : curves(theta), (G, m).
    theta : (G,) uniform grid fine enough for the curves; starts at 0 when `half_line`.
    mu : (M,), inside the grid. tau : (T,), at least 0.

    Returns
    -------
    (m, T, M). The normal is renormalised to the grid's range, so a curve of ones gives 0.
    """
    step = theta[1] - theta[0]
    narrow = tau < step * (_NARROW_HALF_LINE if half_line else _NARROW_LINE)
    top = values.max(axis=0)
    values = np.exp(np.maximum(values - top, LOG_FLOOR))
    averaged = np.empty((tau.size, mu.size, top.size))
    for j, width in enumerate(tau):
        if narrow[j]:
            low = np.maximum(mu - _REACH * width, theta[0])
            high = np.minimum(mu + _REACH * width, theta[-1])
            points = (low + high)[:, None] / 2 + (high - low)[:, None] / 2 * _NODES
            offset = (points - mu[:, None]) / width if width > 0 else np.zeros_like(points)
            weights = np.exp(-0.5 * offset**2) * _WEIGHTS
            weights /= weights.sum(axis=1, keepdims=True)
            inside = np.exp(np.maximum(curves(points) - top, LOG_FLOOR))  # (M, nodes, m)
            averaged[j] = (weights[:, None, :] @ inside)[:, 0]
        else:
            weights = (theta - mu[:, None]) * (np.sqrt(0.5) / width)
            weights *= -weights
            np.exp(np.maximum(weights, LOG_FLOOR, out=weights), out=weights)
            if half_line:
                # Euler–Maclaurin at 0, where the curves are flat: ½ of the end point, then
                # + h²/12 of the slope of the normal
                weights[:, 0] *= 0.5 + step * mu / (12 * width**2)
            averaged[j] = (weights @ values) / weights.sum(axis=1, keepdims=True)
    return np.moveaxis(np.log(averaged) + top, 2, 0)


def normal_cdf(x: Array, mu: Array, tau: ArrayLike, *, half_line: bool) -> Array:
    """P(θ ≤ x) for θ ~ N(μ, τ²), shape (M, X); given θ ≥ 0 on a half line.

    x : (X,). mu : (M,). tau : above 0, a number or (M, 1).
    """
    width = np.asarray(tau, dtype=float)
    cdf = np.asarray(ndtr((x - mu[:, None]) / width))
    if not half_line:
        return cdf
    # given θ ≥ 0: 1 - Φ((μ-x)/τ)/Φ(μ/τ), as tails, for μ may lie many τ below x
    tail = np.exp(log_ndtr((mu[:, None] - x) / width) - log_ndtr(mu[:, None] / width))
    return np.where(x > 0, 1.0 - tail, 0.0)
