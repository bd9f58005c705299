"""Roots of increasing functions, many at once."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy.typing import ArrayLike

from netsize.numerics.arrays import Array, broadcast

__all__ = ["increasing_root"]


def increasing_root(
    function: Callable[..., Array],
    low: ArrayLike,
    high: ArrayLike,
    *arguments: ArrayLike,
    steps: int = 200,
) -> Array:
    """The x in [low, high] where an increasing function crosses zero, elementwise.

    Parameters
    ----------
    function : called as function(x, *arguments) with arrays of one shape; increasing in x.
    low, high : ends of the bracket, finite, broadcast with the arguments.
    arguments : further parameters, broadcast; passed along so finished elements can be dropped.

    Returns
    -------
    Roots to about 4 units in the last place. An element whose function has one sign on the whole
    bracket gives -inf (positive throughout: the root lies below) or inf (negative throughout).
    nan in, nan out. Infinite values of the function are allowed.

    Notes
    -----
    Inverse quadratic steps where three points allow them, else bisection (Chandrupatla 1997,
    Advances in Engineering Software 28:145).
    """
    x_low, x_high, *rest = (np.array(a) for a in broadcast(low, high, *arguments))
    shape = x_low.shape
    x_low, x_high = x_low.ravel(), x_high.ravel()
    rest = [r.ravel() for r in rest]
    f_low, f_high = function(x_low, *rest), function(x_high, *rest)
    root = np.where(f_low > 0, -np.inf, np.where(f_high < 0, np.inf, np.nan))
    root = np.where(f_low == 0, x_low, np.where(f_high == 0, x_high, root))
    open_ = np.flatnonzero((f_low < 0) & (f_high > 0))
    rest = [r[open_] for r in rest]
    # a: newest point, b: the end across the root from it, c: the point before
    a, b, f_a, f_b = (v[open_] for v in (x_low, x_high, f_low, f_high))
    c, f_c, t = b, f_b, np.full(a.size, 0.5)
    for _ in range(steps):
        if not open_.size:
            break
        x = a + t * (b - a)
        f = function(x, *rest)
        same = (f > 0) == (f_a > 0)
        c, f_c = np.where(same, a, b), np.where(same, f_a, f_b)
        b, f_b = np.where(same, b, a), np.where(same, f_b, f_a)
        a, f_a = x, f
        best = np.where(np.abs(f_a) < np.abs(f_b), a, b)
        with np.errstate(all="ignore"):
            least = 2 * np.spacing(np.abs(best)) / np.abs(b - a)
            xi, phi = (a - b) / (c - b), (f_a - f_b) / (f_c - f_b)
            inverse = f_a / (f_b - f_a) * f_c / (f_b - f_c)
            inverse += (c - a) / (b - a) * f_a / (f_c - f_a) * f_b / (f_c - f_b)
            trusted = (phi**2 < xi) & ((1 - phi) ** 2 < 1 - xi) & np.isfinite(inverse)
        t = np.clip(
            np.where(trusted, inverse, 0.5), np.minimum(least, 0.5), 1 - np.minimum(least, 0.5)
        )
        done = ~(least < 0.5) | (f_a == 0) | (f_b == 0) | np.isnan(f)
        root[open_[done]] = np.where(np.isnan(f), np.nan, best)[done]
        keep = ~done
        open_, t = open_[keep], t[keep]
        a, b, c, f_a, f_b, f_c = (v[keep] for v in (a, b, c, f_a, f_b, f_c))
        rest = [r[keep] for r in rest]
    root[open_] = np.where(np.abs(f_a) < np.abs(f_b), a, b)
    return root.reshape(shape)
