"""The sum over a Poisson mixture in which noncentral chi-square and F differ from central ones."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from netsize.numerics.arrays import Array, broadcast
from netsize.numerics.gamma import stirling_remainder

__all__ = ["log_mixture"]

_FAR = 120.0  # mode from which 10 standard deviations, at most √mode each, stay above j = 0
_STEP = 0.6  # step in standard deviations; the rule's error is below 2 exp(-2π²/0.6²) < 1e-23
_REACH = 10.0  # standard deviations summed on each side
_BLOCK = 512  # elements at a time, of similar mode


def log_mixture(w: ArrayLike, b: ArrayLike, a: ArrayLike = np.inf) -> Array:
    """log Σ_{j≥0} Π_{i<j} (1 + i/a) · wʲ / ((b)ⱼ j!), the logarithm of ₀F₁(; b; w) for a = ∞.

    Parameters
    ----------
    w : ≥ 0, finite. b : > 0. a : ≥ b; finite a gives ₁F₁(a; b; w/a). All broadcast.

    Returns
    -------
    Broadcast shape; absolute error at most 1e-11 for a, b up to 10⁶ and sums up to e^5000; nan
    outside the ranges.

    Notes
    -----
    All terms are positive and log-concave in j. A mode below `_FAR` is summed from j = 0 through
    the ratios of successive terms. Further out the terms, as a function of real j, are close to a
    normal density and vanish at both ends, so a sum over steps of 0.6 standard deviations in the
    place of 1 is exact to double precision (Poisson's summation formula): the cost is bounded.
    """
    w, b, a = broadcast(w, b, a)
    shape = w.shape
    w, b, a = w.ravel(), b.ravel(), a.ravel()
    total = np.full(w.size, np.nan)
    usable = np.flatnonzero((w >= 0) & np.isfinite(w) & (b > 0) & np.isfinite(b) & (a >= b))
    # terms rise while (1 + j/a) w > (b + j) j
    slope = b[usable] - w[usable] / a[usable]
    root = np.sqrt(slope * slope + 4 * w[usable])
    with np.errstate(all="ignore"):
        mode = np.where(slope > 0, 2 * w[usable] / (slope + root), (root - slope) / 2)
    order = usable[np.argsort(mode)]
    mode = np.sort(mode)
    near = int(np.searchsorted(mode, _FAR))
    for start in range(0, near, _BLOCK):
        some = order[start : min(start + _BLOCK, near)]
        total[some] = _from_zero(w[some], b[some], a[some], float(mode[:near][start:][:_BLOCK][-1]))
    for start in range(near, order.size, _BLOCK):
        some = order[start : start + _BLOCK]
        total[some] = _around(w[some], b[some], a[some], mode[start : start + _BLOCK])
    return total.reshape(shape)


def _from_zero(w: Array, b: Array, a: Array, mode: float) -> Array:
    """The terms from j = 0 on; `mode` is the largest among the elements."""
    j = np.arange(int(mode + 10 * np.sqrt(mode) + 30))
    with np.errstate(divide="ignore"):
        steps = np.log(w[:, None] * (1 + j / a[:, None]) / ((b[:, None] + j) * (j + 1)))
    log_terms = np.cumsum(steps, axis=1)
    top = np.maximum(log_terms.max(axis=1), 0.0)
    total = np.exp(-top) + np.exp(log_terms - top[:, None]).sum(axis=1)
    return np.asarray(top + np.log(total))


def _around(w: Array, b: Array, a: Array, mode: Array) -> Array:
    """The terms as a function of real j, summed in steps around the mode."""
    with np.errstate(over="ignore"):
        width = 1 / np.sqrt(1 / mode + 1 / (b + mode) - 1 / (a + mode))
    count = int(np.ceil(_REACH / _STEP))
    j = mode[:, None] + width[:, None] * _STEP * np.arange(-count, count + 1)
    w, b, a = w[:, None], b[:, None], a[:, None]
    log_terms = (
        j * np.log(w / (b * j))
        + j
        - 0.5 * np.log(2 * np.pi * j)
        - stirling_remainder(j)
        - _excess(b, j)
        + np.where(np.isinf(a), 0.0, _excess(np.minimum(a, 1e300), j))
    )
    top = log_terms.max(axis=1)
    total = np.exp(log_terms - top[:, None]).sum(axis=1) * width * _STEP
    return np.asarray(top + np.log(total))


def _excess(x: Array, j: Array) -> Array:
    """log (x)ⱼ - j log x, for j comparable to x or smaller without loss."""
    ratio = np.log1p(j / x)
    return np.asarray((x + j - 0.5) * ratio - j + stirling_remainder(x + j) - stirling_remainder(x))
