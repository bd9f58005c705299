"""The noncentral chi-square distribution: both tails and its noncentrality limits.

X = Σ (Zᵢ + δᵢ)² over df terms with λ = Σ δᵢ² (Johnson, Kotz & Balakrishnan 1995, ch. 29).
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike
from scipy.special import chndtr

from netsize.numerics.arrays import Array, broadcast

__all__ = ["lower_tail", "upper_tail"]


def lower_tail(x: ArrayLike, df: ArrayLike, ncp: ArrayLike) -> Array:
    """P(X ≤ x); x ≥ 0 (0 below), df > 0, λ ≥ 0, broadcast."""
    x, df, ncp = broadcast(x, df, ncp)
    return np.asarray(chndtr(np.maximum(x, 0.0), df, ncp))


def upper_tail(x: ArrayLike, df: ArrayLike, ncp: ArrayLike) -> Array:
    """P(X > x), arguments as in `lower_tail`."""
    return 1.0 - lower_tail(x, df, ncp)
