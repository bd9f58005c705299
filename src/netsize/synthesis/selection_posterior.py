"""The posterior of the exact selection model by deterministic quadrature.

Two components share the prior: with probability π the effect is negligible (μ = τ = 0), otherwise
μ ~ N(0, s²) (half-normal where θ ≥ 0) and τ ~ half-normal(s_τ); each ω_j is log-uniform. All three
axes are integrated on windows that a few coarse rounds draw around the posterior, so a literature
of one result and one of five hundred are resolved alike.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cache
from itertools import product
from typing import TypeAlias

import numpy as np
from numpy.polynomial.legendre import leggauss

from netsize.numerics.arrays import Array
from netsize.synthesis.precise import nodes_around
from netsize.synthesis.selection import Literature, Priors, surface

__all__ = ["Lattice", "Posterior", "integrate", "negligible", "total_evidence"]

_KEEP = 16.0  # log units below the maximum at which a window is cut
_COARSE = (33, 7)  # points of μ and τ while the windows are drawn
_FINE = (65, 12)  # and for the answer, before any refinement
# points of each ω, by how many there are, drawing windows and for the answer
_OMEGA = {0: (1, 1), 1: (5, 9), 2: (4, 7), 3: (3, 5)}
_ROUNDS = 4
_NULL_NODES = 40

Window: TypeAlias = tuple[float, float]


@dataclass(frozen=True, slots=True, eq=False)
class Lattice:
    """Nodes of μ (M,) with trapezoid weights, of τ (T,) and each log ω with the cell edges that
    their quadrature weights imply, and the (W, J) log weights of every combination of ω."""

    mu: Array
    mu_weights: Array
    tau: Array
    tau_edges: Array
    log_omega: tuple[Array, ...]
    omega_edges: tuple[Array, ...]
    log_weights: Array


@dataclass(frozen=True, slots=True, eq=False)
class Posterior:
    """The posterior of one literature, effect component only.

    joint : (T, M, W) probabilities, sum 1. log_evidence : of the effect component.
    log_null : evidence of the negligible component.
    """

    lattice: Lattice
    joint: Array
    log_evidence: float
    log_null: float


def integrate(
    literature: Literature, priors: Priors, level: float, *, selection: bool = True
) -> Posterior:
    """The posterior at a refinement `level` (1 the coarsest); without selection every ω_j is 1."""
    floor = np.log(priors.printing_floor)
    axes = literature.bands - 1 if selection else 0
    whole: list[Window] = [
        literature.mu_range,
        (0.0, 4 * priors.heterogeneity_scale),
        *[(floor, 0.0)] * axes,
    ]
    windows = whole
    for _ in range(_ROUNDS):
        sizes: tuple[int, ...] = (*_COARSE, _OMEGA[axes][0])
        lattice, log_joint = _evaluate(literature, priors, windows, sizes)
        drawn = _windows(lattice, log_joint, windows, whole)
        shrunk = max((w[1] - w[0]) / (v[1] - v[0]) for w, v in zip(drawn, windows, strict=True))
        windows = drawn
        if shrunk > 0.6:
            break
    sizes = tuple(int(np.ceil(n * level)) for n in (*_FINE, _OMEGA[axes][1]))
    lattice, log_joint = _evaluate(literature, priors, windows, sizes)
    total = _log_sum(log_joint)
    null_axes = [_legendre((floor, 0.0), _NULL_NODES if axes == 1 else 12)] * axes
    log_null = surface(
        literature,
        mu=np.array([0.0]),
        tau=np.array([0.0]),
        log_weights=_combinations([a[0] for a in null_axes], literature.bands),
    )
    null_weights = _products([np.log(a[1] / -floor) for a in null_axes])
    return Posterior(
        lattice=lattice,
        joint=np.exp(log_joint - total),
        log_evidence=total,
        log_null=_log_sum(log_null[0, 0] + null_weights),
    )


def total_evidence(posterior: Posterior, priors: Priors) -> float:
    """log of the prior-averaged likelihood, both components."""
    with np.errstate(divide="ignore"):
        shares = np.log([1 - priors.negligible, priors.negligible])
    return _log_sum(np.add(shares, [posterior.log_evidence, posterior.log_null]))


def negligible(posterior: Posterior, priors: Priors) -> float:
    """Posterior probability of the negligible component."""
    odds = np.exp(np.clip(posterior.log_evidence - posterior.log_null, -700, 700))
    return float(priors.negligible / (priors.negligible + (1 - priors.negligible) * odds))


def _log_sum(values: Array) -> float:
    top = float(values.max())
    return top + float(np.log(np.exp(values - top).sum()))


def _evaluate(
    literature: Literature,
    priors: Priors,
    windows: Sequence[Window],
    sizes: tuple[int, ...],
) -> tuple[Lattice, Array]:
    """Log-likelihood plus log prior plus log quadrature weight at every lattice point."""
    n_mu, n_tau, n_omega = sizes
    mu = nodes_around(literature.bumps, *windows[0], n_mu)
    trapezoid = np.diff(mu, prepend=mu[0], append=mu[-1])
    trapezoid = (trapezoid[1:] + trapezoid[:-1]) / 2
    tau, tau_weights, tau_edges = _legendre(windows[1], n_tau)
    omega = [_legendre(w, n_omega) for w in windows[2:]]
    log_weights = _combinations([o[0] for o in omega], literature.bands)
    s, s_tau = priors.effect_scale, priors.heterogeneity_scale
    sides = 2.0 if literature.half_line else 1.0
    log_prior_mu = np.log(sides / (s * np.sqrt(2 * np.pi))) - 0.5 * (mu / s) ** 2
    log_prior_tau = np.log(2 / (s_tau * np.sqrt(2 * np.pi))) - 0.5 * (tau / s_tau) ** 2
    floor = np.log(priors.printing_floor)
    log_omega_weights = _products([np.log(o[1] / -floor) for o in omega])
    log_joint = surface(literature, mu=mu, tau=tau, log_weights=log_weights)
    log_joint += (log_prior_tau + np.log(tau_weights))[:, None, None]
    log_joint += (log_prior_mu + np.log(trapezoid))[:, None]
    log_joint += log_omega_weights
    lattice = Lattice(
        mu=mu,
        mu_weights=trapezoid,
        tau=tau,
        tau_edges=tau_edges,
        log_omega=tuple(o[0] for o in omega),
        omega_edges=tuple(o[2] for o in omega),
        log_weights=log_weights,
    )
    return lattice, log_joint


def _windows(
    lattice: Lattice, log_joint: Array, windows: Sequence[Window], whole: Sequence[Window]
) -> list[Window]:
    """Where each axis still matters, one lattice step wider on either side."""
    shape = (*log_joint.shape[:2], *(o.size for o in lattice.log_omega))
    cube = log_joint.reshape(shape)
    axes = [(1, lattice.mu), (0, lattice.tau)]
    axes += [(2 + j, nodes) for j, nodes in enumerate(lattice.log_omega)]
    out = []
    for (axis, nodes), current, limits in zip(axes, windows, whole, strict=True):
        others = tuple(a for a in range(cube.ndim) if a != axis)
        profile = cube.max(axis=others)
        kept = np.flatnonzero(profile > profile.max() - _KEEP)
        padded = np.concatenate([[current[0]], nodes, [current[1]]])
        low = padded[max(kept[0] - (axis == 1), 0)]
        high = padded[min(kept[-1] + 2 + (axis == 1), padded.size - 1)]
        out.append((max(float(low), limits[0]), min(float(high), limits[1])))
    return out


def _legendre(window: Window, size: int) -> tuple[Array, Array, Array]:
    """Gauss–Legendre nodes, weights and the cell edges that the weights imply."""
    nodes, weights = _rule(size)
    half = (window[1] - window[0]) / 2
    edges = window[0] + half * np.concatenate([[0.0], np.cumsum(weights)])
    return window[0] + half * (nodes + 1), half * weights, edges


@cache
def _rule(size: int) -> tuple[Array, Array]:
    return leggauss(size)


def _combinations(log_omega: Sequence[Array], bands: int) -> Array:
    """(W, J) log weights of every combination of the ω axes, zero for the first band."""
    if not log_omega:
        return np.zeros((1, bands))
    return np.array([(0.0, *combination) for combination in product(*log_omega)])


def _products(log_weights: Sequence[Array]) -> Array:
    """Log quadrature weight of every combination, in the order of `_combinations`."""
    total = np.zeros(1)
    for axis in log_weights:
        total = (total[:, None] + axis).ravel()
    return total
