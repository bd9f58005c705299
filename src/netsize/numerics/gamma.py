"""Ratios of gamma functions that keep their digits at large arguments."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike
from scipy.special import gammaln

from netsize.numerics.arrays import Array

__all__ = ["log_half_step", "stirling_remainder"]

# log Γ(x+½) - log Γ(x) - ½ log x in odd powers of 1/x: (1 - 2^{-2k}) B₂ₖ / (k (2k-1)) with the
# Bernoulli numbers B₂ₖ, negated (Tricomi & Erdélyi 1951)
_SERIES = (-1 / 8, 1 / 192, -1 / 640, 17 / 14336, -31 / 18432)


def log_half_step(x: ArrayLike) -> Array:
    """log Γ(x+½) - log Γ(x) for x > 0, any shape; absolute error below 1e-14.

    The difference of two log-gammas loses seven digits at x = 10⁶; from x = 15 on a series in 1/x
    replaces it.
    """
    x = np.asarray(x, dtype=float)
    with np.errstate(all="ignore"):
        w = 1 / (x * x)
        series = np.zeros_like(x)
        for coefficient in reversed(_SERIES):
            series = coefficient + w * series
        large = 0.5 * np.log(x) + series / x
        return np.where(x > 0, np.where(x < 15, gammaln(x + 0.5) - gammaln(x), large), np.nan)


def stirling_remainder(z: ArrayLike) -> Array:
    """log Γ(z) - [(z - ½) log z - z + ½ log 2π], z > 0, any shape.

    The large terms of Stirling's formula cancel algebraically in most ratios of gamma functions;
    this is what remains of each.
    """
    z = np.asarray(z, dtype=float)
    direct = gammaln(z) - ((z - 0.5) * np.log(z) - z + 0.5 * np.log(2 * np.pi))
    w = 1 / (z * z)
    series = (1 / 12 - w * (1 / 360 - w * (1 / 1260 - w * (1 / 1680 - w / 1188)))) / z
    return np.asarray(np.where(z < 10, direct, series))
