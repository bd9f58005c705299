"""The noncentral F distribution: both tails and its noncentrality limits.

F = (X/df₁)/(V/df₂), X noncentral chi-square on df₁ with noncentrality λ and V chi-square on df₂
(Johnson, Kotz & Balakrishnan 1995, ch. 30).
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike
from scipy.special import ncfdtr

from netsize.numerics.arrays import Array, broadcast

__all__ = ["lower_tail", "upper_tail"]


def lower_tail(f: ArrayLike, df1: ArrayLike, df2: ArrayLike, ncp: ArrayLike) -> Array:
    """P(F ≤ f); f ≥ 0 (0 below), df₁, df₂ > 0, λ ≥ 0, broadcast."""
    f, df1, df2, ncp = broadcast(f, df1, df2, ncp)
    return np.asarray(ncfdtr(df1, df2, ncp, np.maximum(f, 0.0)))


def upper_tail(f: ArrayLike, df1: ArrayLike, df2: ArrayLike, ncp: ArrayLike) -> Array:
    """P(F > f), arguments as in `lower_tail`."""
    return 1.0 - lower_tail(f, df1, df2, ncp)
