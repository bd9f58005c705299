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
    Roots to about 4 units in the last place of the bracket's ends, by bisection with false-position
    steps (Illinois rule). An element whose function has one sign on the whole bracket gives -inf
    (positive throughout: the root lies below) or inf (negative throughout). nan in, nan out.
    """
    x_low, x_high, *rest = (np.array(a) for a in broadcast(low, high, *arguments))
    shape = x_low.shape
    x_low, x_high = x_low.ravel(), x_high.ravel()
    rest = [a.ravel() for a in rest]
    f_low, f_high = function(x_low, *rest), function(x_high, *rest)
    root = np.where(f_low > 0, -np.inf, np.where(f_high < 0, np.inf, np.nan))
    root = np.where(f_low == 0, x_low, np.where(f_high == 0, x_high, root))
    open_ = np.flatnonzero((f_low < 0) & (f_high > 0))
    x_low, x_high, f_low, f_high = x_low[open_], x_high[open_], f_low[open_], f_high[open_]
    rest = [a[open_] for a in rest]
    for step in range(steps):
        if not open_.size:
            break
        middle = (x_low + x_high) / 2
        if step % 3:  # every third step bisects, so the bracket shrinks whatever the shape
            with np.errstate(all="ignore"):
                secant = x_high - f_high * (x_high - x_low) / (f_high - f_low)
            inside = (secant > x_low) & (secant < x_high)
            middle = np.where(inside, secant, middle)
        f = function(middle, *rest)
        above = f > 0
        # Illinois: halve the value kept at the end that did not move
        f_low, f_high = np.where(above, f_low / 2, f), np.where(above, f, f_high / 2)
        x_low, x_high = np.where(above, x_low, middle), np.where(above, middle, x_high)
        width = x_high - x_low
        done = (width <= 4 * np.spacing(np.maximum(np.abs(x_low), np.abs(x_high)))) | (f == 0)
        done |= np.isnan(f)
        root[open_[done]] = np.where(np.isnan(f), np.nan, middle)[done]
        keep = ~done
        open_, x_low, x_high = open_[keep], x_low[keep], x_high[keep]
        f_low, f_high = f_low[keep], f_high[keep]
        rest = [a[keep] for a in rest]
    root[open_] = (x_low + x_high) / 2
    return root.reshape(shape)
