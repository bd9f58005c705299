"""Evidence curves: likelihood and p-band probabilities of many results over one grid of effects.

For result i and true effect θ, L_i(θ) is the density (or interval probability) of what was
printed and P_ij(θ) the probability that its p-value falls in band j.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
from scipy.special import ndtr

from netsize.effect_sizes.records import Evidence, Kernel
from netsize.numerics import correlation, noncentral_chi2, noncentral_f, noncentral_t
from netsize.numerics.arrays import Array

__all__ = ["band_probabilities", "log_likelihood"]


@dataclass(frozen=True, slots=True)
class _Law:
    """Distribution of a statistic given θ.

    The first three are functions of (x, *arguments); `arguments` makes those from the columns of
    degrees of freedom, the scale and θ, ready to broadcast.
    """

    log_density: Callable[..., Array]
    lower_tail: Callable[..., Array]
    upper_tail: Callable[..., Array]
    arguments: Callable[[Array, Array, Array], tuple[Any, ...]]


def _normal_log_density(x: Array, mean: Array) -> Array:
    return np.asarray(-0.5 * (x - mean) ** 2 - 0.5 * np.log(2 * np.pi))


def _normal_lower(x: Array, mean: Array) -> Array:
    return np.asarray(ndtr(x - mean))


def _normal_upper(x: Array, mean: Array) -> Array:
    return np.asarray(ndtr(mean - x))


_LAWS: dict[Kernel, _Law] = {
    "z": _Law(
        _normal_log_density,
        _normal_lower,
        _normal_upper,
        lambda df, scale, theta: (scale * theta,),
    ),
    "t": _Law(
        noncentral_t.log_density,
        noncentral_t.lower_tail,
        noncentral_t.upper_tail,
        lambda df, scale, theta: (df, scale * theta),
    ),
    "f": _Law(
        noncentral_f.log_density,
        noncentral_f.lower_tail,
        noncentral_f.upper_tail,
        lambda df, scale, theta: (df[:, :1], df[:, 1:], (scale * theta) ** 2),
    ),
    "chi2": _Law(
        noncentral_chi2.log_density,
        noncentral_chi2.lower_tail,
        noncentral_chi2.upper_tail,
        lambda df, scale, theta: (df, (scale * theta) ** 2),
    ),
    "r": _Law(
        correlation.log_density,
        correlation.lower_tail,
        correlation.upper_tail,
        lambda df, scale, theta: (np.tanh(theta), df + 2),
    ),
}


def log_likelihood(evidence: Sequence[Evidence], theta: Array) -> Array:
    """log L_i(θ), shape (k, G), for k results over effects `theta` (G,) on their metric.

    The density of an exact value in the units of its statistic, the probability of an inequality.
    """
    out = np.empty((len(evidence), theta.size))
    for law, members, df, scale in _by_law(evidence):
        low = np.array([[evidence[i].low] for i in members])
        high = np.array([[evidence[i].high] for i in members])
        mirrored = np.array([[evidence[i].two_sided] for i in members])
        exact = (low == high).ravel()
        rows = np.array(members)
        if exact.any():
            arguments = law.arguments(df[exact], scale[exact], theta)
            out[rows[exact]] = law.log_density(low[exact], *arguments)
        if not exact.all():
            part = ~exact
            arguments = law.arguments(df[part], scale[part], theta)
            chance = _between(law, low[part], high[part], arguments)
            if mirrored[part].any():
                other = _between(law, -high[part], -low[part], arguments)
                chance = chance + np.where(mirrored[part], other, 0.0)
            with np.errstate(divide="ignore"):
                out[rows[part]] = np.log(chance)
    return out


def band_probabilities(evidence: Sequence[Evidence], theta: Array) -> Array:
    """P_ij(θ), shape (k, J, G); the J bands of each result sum to 1 at every θ.

    All results have the same number of bands; each band is computed as a tail or, between two
    cuts, as the difference of the smaller tails, so that none loses its digits.
    """
    bands = len(evidence[0].cuts) + 1
    out = np.empty((len(evidence), bands, theta.size))
    for law, members, df, scale in _by_law(evidence):
        rows = np.array(members)
        arguments = law.arguments(df, scale, theta)
        cuts = np.array([evidence[i].cuts for i in members])
        out[rows, 0] = law.upper_tail(cuts[:, :1], *arguments)
        for j in range(1, bands - 1):
            out[rows, j] = _between(law, cuts[:, j : j + 1], cuts[:, j - 1 : j], arguments)
        out[rows, -1] = law.lower_tail(cuts[:, -1:], *arguments)
    return out


def _between(law: _Law, low: Array, high: Array, arguments: tuple[Any, ...]) -> Array:
    """P(low < X ≤ high) from the pair of tails that is smaller, at least 0."""
    above, below = law.upper_tail(low, *arguments), law.lower_tail(high, *arguments)
    chance = np.where(
        above < below,
        above - law.upper_tail(high, *arguments),
        below - law.lower_tail(low, *arguments),
    )
    return np.maximum(chance, 0.0)


def _by_law(evidence: Sequence[Evidence]) -> list[tuple[_Law, list[int], Array, Array]]:
    """The results of each kernel: their places, degrees of freedom (m, ·) and scales (m, 1)."""
    groups: dict[Kernel, list[int]] = {}
    for i, e in enumerate(evidence):
        groups.setdefault(e.kernel, []).append(i)
    return [
        (
            _LAWS[kernel],
            members,
            np.array([evidence[i].df for i in members], dtype=float).reshape(len(members), -1),
            np.array([[evidence[i].scale] for i in members]),
        )
        for kernel, members in groups.items()
    ]
