"""Upper tails far out, integrated from the density because 1 - lower tail has no digits left."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy.polynomial.legendre import leggauss

from netsize.numerics.arrays import Array, BoolArray

__all__ = ["SMALL", "far_tail", "repaired"]

SMALL = 1e-4  # below it the complement of a tail has lost more than four digits
_NODES, _WEIGHTS = leggauss(64)
_DEPTH = 60.0  # exponents below the start at which the tail is cut
_BLOCK = 64  # elements at a time: 64 nodes each, and a sum at each node


def far_tail(log_height: Callable[..., Array], step: Array, *arguments: Array) -> Array:
    """∫₀^∞ exp h(t) dt for a decreasing, nearly log-concave exp h, elementwise.

    Parameters
    ----------
    log_height : called as log_height(t, *arguments) with broadcasting columns.
    step : small compared with the scale on which h changes; h is differenced over it.
    arguments : 1-d arrays of one length with `step`.

    Returns
    -------
    1-d array. The range is as long as the first slope needs to fall by 60 exponents; where slopes
    grow steeper, as those of a log-concave tail do, nothing beyond it counts.
    """
    total = np.empty(step.size)
    for start in range(0, step.size, _BLOCK):
        part = slice(start, start + _BLOCK)
        some = [a[part, None] for a in arguments]
        h = step[part, None]
        fall = log_height(np.zeros_like(h), *some) - log_height(h, *some)
        length = _DEPTH * h / np.maximum(fall, 1e-12)
        t = length / 2 * (1 + _NODES)
        total[part] = (length[:, 0] / 2) * (np.exp(log_height(t, *some)) @ _WEIGHTS)
    return total


def repaired(tail: Array, below_mean: BoolArray, valid: BoolArray) -> Array:
    """A library's lower tail, cut to [0, 1]; where it failed though `valid`, 0 or 1.

    Some releases of scipy return nan far out, where the probability is 0 or 1 to double precision.
    """
    far = np.where(below_mean, 0.0, 1.0)
    return np.where(valid, np.clip(np.where(np.isfinite(tail), tail, far), 0.0, 1.0), np.nan)
