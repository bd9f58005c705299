"""Evidence curves: likelihood and p-band probabilities of many results over one grid of effects.

For result i and true effect θ, L_i(θ) is the density (or
interval probability) of what was printed and P_ij(θ) the probability that its p-value falls in
band j.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np
from scipy.special import ndtr

from netsize.effect_sizes.records import Evidence, Kernel
from netsize.numerics import noncentral_t
from netsize.numerics.arrays import Array

__all__ = ["band_probabilities", "log_likelihood"]


@dataclass(frozen=True, slots=True)
class _Law:
    """Distribution of a statistic given θ, as functions of (x, parameters (m, p), θ)."""

    log_density: Callable[[Array, Array, Array], Array]
    upper_tail: Callable[[Array, Array, Array], Array]


def _t_log_density(x: Array, parameters: Array, theta: Array) -> Array:
    return noncentral_t.log_density(x, parameters[:, :1], parameters[:, -1:] * theta)


def _t_upper(x: Array, parameters: Array, theta: Array) -> Array:
    return noncentral_t.upper_tail(x, parameters[:, :1], parameters[:, -1:] * theta)


def _z_log_density(x: Array, parameters: Array, theta: Array) -> Array:
    return np.asarray(-0.5 * (x - parameters[:, -1:] * theta) ** 2 - 0.5 * np.log(2 * np.pi))


def _z_upper(x: Array, parameters: Array, theta: Array) -> Array:
    return np.asarray(ndtr(parameters[:, -1:] * theta - x))


_LAWS: dict[Kernel, _Law] = {
    "t": _Law(_t_log_density, _t_upper),
    "z": _Law(_z_log_density, _z_upper),
}


def log_likelihood(evidence: Sequence[Evidence], theta: Array) -> Array:
    """log L_i(θ), shape (k, G), for k results over effects `theta` (G,) on their metric."""
    out = np.empty((len(evidence), theta.size))
    for law, members, parameters in _by_law(evidence):
        low = np.array([[evidence[i].low] for i in members])
        high = np.array([[evidence[i].high] for i in members])
        exact = (low == high).ravel()
        rows = np.array(members)
        if exact.any():
            out[rows[exact]] = law.log_density(low[exact], parameters[exact], theta)
        if not exact.all():
            part = ~exact
            chance = law.upper_tail(low[part], parameters[part], theta) - law.upper_tail(
                high[part], parameters[part], theta
            )
            mirrored = np.array([[evidence[i].two_sided] for i in members])[part]
            if mirrored.any():
                other = law.upper_tail(-high[part], parameters[part], theta) - law.upper_tail(
                    -low[part], parameters[part], theta
                )
                chance = chance + np.where(mirrored, other, 0.0)
            with np.errstate(divide="ignore"):
                out[rows[part]] = np.log(np.maximum(chance, 0.0))
    return out


def band_probabilities(evidence: Sequence[Evidence], theta: Array) -> Array:
    """P_ij(θ), shape (k, J, G); the J bands of each result sum to 1 at every θ."""
    bands = len(evidence[0].cuts) + 1
    above = np.ones((len(evidence), bands + 1, theta.size))  # P(X > lower edge of band j)
    above[:, 0] = 0.0
    for law, members, parameters in _by_law(evidence):
        for j in range(bands - 1):
            cut = np.array([[evidence[i].cuts[j]] for i in members])
            above[np.array(members), j + 1] = law.upper_tail(cut, parameters, theta)
    return np.diff(above, axis=1)


def _by_law(evidence: Sequence[Evidence]) -> list[tuple[_Law, list[int], Array]]:
    """The results of each kernel with their parameters (m, p): df..., scale."""
    groups: dict[Kernel, list[int]] = {}
    for i, e in enumerate(evidence):
        groups.setdefault(e.kernel, []).append(i)
    return [
        (_LAWS[kernel], members, np.array([[*evidence[i].df, evidence[i].scale] for i in members]))
        for kernel, members in groups.items()
    ]
