"""The hypergeometric function ₂F₁(½, ½; c; x) of the distribution of the correlation."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike
from scipy.special import hyp2f1

from netsize.numerics.arrays import Array, broadcast

__all__ = ["half_half"]

_SERIES_FROM = 12.0  # third parameter from which the series is short even at x = 1


def half_half(c: ArrayLike, x: ArrayLike) -> Array:
    """₂F₁(½, ½; c; x), c ≥ 1.5, 0 ≤ x ≤ 1, broadcast.

    By its own series from c = 12 on: faster there, and the library returns nan for large c near
    x = 1.
    """
    c, x = broadcast(c, x)
    smallest = float(np.min(c, initial=np.inf, where=c >= _SERIES_FROM))
    factors: list[float] = []
    term = 1.0
    while term > 1e-17 and np.isfinite(smallest):
        k = len(factors)
        factors.append((k + 0.5) ** 2 / (k + 1))
        term *= factors[-1] / (smallest + k)
    total = np.ones_like(x)
    for k in reversed(range(len(factors))):
        total = 1 + factors[k] * x / (c + k) * total
    small = c < _SERIES_FROM
    if small.any():
        total = np.where(small, hyp2f1(0.5, 0.5, np.where(small, c, _SERIES_FROM), x), total)
    return total
