"""Very precise results, whose curves are normal to the accuracy that matters.

One study of tens of thousands would force a grid of effects a hundred times finer on all others.
Its likelihood is normal in θ instead, with the centre and curvature of the exact one (error of
order 1/df), so its average over N(θ; μ, τ²) is known in closed form. A z statistic is exactly so.
"""

from __future__ import annotations

from collections.abc import Sequence
from math import atanh, isfinite, sqrt

import numpy as np
from scipy.special import ndtr

from netsize.effect_sizes.curves import log_likelihood
from netsize.effect_sizes.records import Evidence
from netsize.numerics.arrays import Array

__all__ = [
    "bump",
    "centre",
    "is_precise",
    "mixed_bumps",
    "mixed_tails",
    "nodes_around",
    "spread",
    "standard_error",
    "tail",
]

_SHARPEST = 5  # precise results around which nodes are added
_PRECISE = 4000  # degrees of freedom from which a curve counts as normal


def is_precise(e: Evidence) -> bool:
    """Whether the curves of a result are taken as normal."""
    return e.kernel == "z" or (e.kernel in ("t", "r") and e.df[0] >= _PRECISE)


def centre(e: Evidence) -> float:
    """Rough location of one result's likelihood on the metric."""
    ends = [x for x in (e.low, e.high) if isfinite(x)]
    x = 0.0 if e.two_sided or not ends else sum(ends) / len(ends)
    if e.kernel == "r":
        return atanh(min(max(x, -0.999999), 0.999999))
    if e.kernel in ("f", "chi2"):
        return sqrt(max(x * (e.df[0] if e.kernel == "f" else 1.0), 0.0)) / e.scale
    return x / e.scale


def standard_error(e: Evidence) -> float:
    """Standard error of one result near no effect, on the metric."""
    return 1 / sqrt(e.df[0]) if e.kernel == "r" else 1.0 / e.scale


def spread(e: Evidence) -> float:
    """About the standard error at the result's own effect, larger where that effect is."""
    if e.kernel in ("t", "f"):
        return standard_error(e) * sqrt(1 + (centre(e) * e.scale) ** 2 / (2 * e.df[-1]))
    return standard_error(e)


def bump(precise: Sequence[Evidence]) -> Array:
    """Centre, width and log area of the normal curve at each exact likelihood, (3, q)."""
    out = np.empty((3, len(precise)))
    for i, e in enumerate(precise):
        at, width = centre(e), spread(e)
        left, middle, right = log_likelihood([e], at + width * np.array([-1.0, 0.0, 1.0]))[0]
        bend, slope = 2 * middle - left - right, (right - left) / 2  # per width
        out[0, i] = at + width * slope / bend
        out[1, i] = width / np.sqrt(bend)
        out[2, i] = middle + slope**2 / (2 * bend) + np.log(out[1, i] * np.sqrt(2 * np.pi))
    return out


def tail(precise: Sequence[Evidence]) -> Array:
    """Edges and widths with P(X > cut_j | θ) = Φ((θ - edge)/width), (2, J-1, v)."""
    if not precise:
        return np.empty((2, 0, 0))
    cuts = np.array([e.cuts for e in precise]).T
    if any(e.kernel == "r" for e in precise):
        is_r = np.array([e.kernel == "r" for e in precise])
        cuts = np.where(is_r, np.arctanh(np.where(is_r, cuts, 0.0)), cuts)
    unit = np.array([standard_error(e) for e in precise])
    is_t = np.array([e.kernel == "t" for e in precise])
    df = np.array([e.df[0] if e.kernel == "t" else np.inf for e in precise])
    in_theta = np.array([1.0 if e.kernel == "r" else 1.0 / e.scale for e in precise])
    widen = np.where(is_t, np.sqrt(1 + cuts**2 / (2 * df)), 1.0)
    return np.stack([cuts * in_theta, unit * widen])


def nodes_around(bumps: Array, low: float, high: float, size: int) -> Array:
    """`size` evenly spaced values of μ, and more around bumps narrower than their spacing.

    There the likelihood of μ has a cusp: it rises until |μ - centre| is as small as the width.
    """
    even = np.linspace(low, high, size)
    step = even[1] - even[0]
    sharp = bumps[:, bumps[1] < step / 2]
    added = [even]
    for at, width, _ in sharp[:, np.argsort(sharp[1])[:_SHARPEST]].T:
        doublings = int(np.ceil(np.log2(step / width))) + 1
        reach = width * 2.0 ** np.arange(-1, doublings)
        added.append(at + np.concatenate([-reach, [0.0], reach]))
    nodes = np.unique(np.concatenate(added))
    return nodes[(nodes >= low) & (nodes <= high)]


def mixed_bumps(bumps: Array, mu: Array, tau: Array) -> Array:
    """log of each normal curve averaged over N(θ; μ, τ²), (q, T, M)."""
    at, width, log_area = (x[:, None, None] for x in bumps)
    variance = width**2 + tau[:, None] ** 2
    return np.asarray(log_area - 0.5 * ((mu - at) ** 2 / variance + np.log(2 * np.pi * variance)))


def mixed_tails(tails: Array, mu: Array, tau: Array) -> Array:
    """Probabilities of all bands averaged over N(θ; μ, τ²), (v, J, T, M)."""
    edge, width = (x.T[:, :, None, None] for x in tails)
    z = (mu - edge) / np.sqrt(width**2 + tau[:, None] ** 2)
    above = np.asarray(ndtr(z))
    nothing = np.zeros((above.shape[0], 1, *above.shape[2:]))
    return np.diff(np.concatenate([nothing, above, nothing + 1.0], axis=1), axis=1)
