"""Exact power of tests of proportions: the binomial probabilities of all outcomes that reject."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from scipy.special import gammaln, xlog1py, xlogy

from netsize.numerics.arrays import Array, BoolArray

__all__ = ["LARGEST_EXACT", "rejection_probability"]

LARGEST_EXACT = 20_000  # participants; beyond it the normal approximation has nothing to fear
_REACH = 9  # standard deviations of a count that are enumerated, and as many counts more


def rejection_probability(
    sizes: tuple[int, ...], chances: tuple[float, ...], rejects: Callable[..., BoolArray]
) -> float:
    """P(the test rejects) for independent counts Xᵢ ~ Bin(nᵢ, pᵢ), one or two of them.

    `rejects` gets the counts as broadcasting arrays. Counts more than nine standard deviations from
    their mean are left out (probability below 1e-15 but for tiny p, where they are few).
    """
    counts, weights = zip(*(_law(n, p) for n, p in zip(sizes, chances, strict=True)), strict=True)
    grids = np.meshgrid(*counts, indexing="ij", sparse=True)
    weight = weights[0] if len(weights) == 1 else weights[0][:, None] * weights[1]
    return float((weight * rejects(*grids)).sum())


def _law(n: int, p: float) -> tuple[Array, Array]:
    middle, reach = n * p, _REACH * np.sqrt(n * p * (1 - p)) + 2 * _REACH
    x = np.arange(max(0.0, np.floor(middle - reach)), min(n, np.ceil(middle + reach)) + 1)
    log_mass = gammaln(n + 1) - gammaln(x + 1) - gammaln(n - x + 1)
    return x, np.exp(log_mass + xlogy(x, p) + xlog1py(n - x, -p))
