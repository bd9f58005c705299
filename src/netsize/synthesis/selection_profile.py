"""The profile reading of the exact selection model: a confidence distribution for the mean effect.

At each μ the likelihood is maximised over τ and the ω_j; with ℓ(μ) that profile and μ̂ its peak,
C(μ) = Φ(sign(μ-μ̂) √(2(ℓ(μ̂)-ℓ(μ)))) is the signed-root confidence distribution (Barndorff-Nielsen
& Cox 1994, ch. 3). Where ℓ levels off below the peak C does not reach 0: no finite lower limit.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from itertools import product

import numpy as np
from scipy.interpolate import Akima1DInterpolator, CubicSpline
from scipy.special import ndtr

from netsize.effect_sizes.metrics import Metric
from netsize.effect_sizes.records import Evidence
from netsize.numerics.arrays import Array
from netsize.numerics.grid import GridDistribution
from netsize.synthesis.mixing import normal_cdf
from netsize.synthesis.precise import nodes_around
from netsize.synthesis.selection import Literature, Priors, literatures, range_of_means, surface

__all__ = ["ProfileFit", "fit_profile"]

_KEEP = 12.0  # log units below the peak at which the window of μ is cut; Φ(-√24) < 1e-6
_COARSE = (49, 9, 9)  # points of μ, τ, ω while the windows are drawn
_FINE = (81, 17, 13)
_ROUNDS = 6
_CLIFF = 12.0  # log units below a peak that no longer shape it
_SPREAD = 8  # finer points splined per lattice point


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class ProfileFit:
    """What the profile reading concludes, on the pooling metric.

    Attributes
    ----------
    estimate : μ̂, or -inf where the likelihood keeps rising towards the low end of the grid.
    heterogeneity, printing : τ̂ and the ω̂_j that go with it.
    mean : confidence distribution of μ. new_study : of θ ~ N(μ, τ̂(μ)²).
    log_likelihood : at the peak, up to a constant shared by all fits of the same results.
    """

    estimate: float
    heterogeneity: float
    printing: tuple[float, ...]
    mean: GridDistribution
    new_study: GridDistribution
    log_likelihood: float


def fit_profile(
    evidence: Sequence[Evidence],
    *,
    weights: Array,
    metric: Metric,
    priors: Priors | None = None,
    fineness: float = 6.0,
) -> ProfileFit:
    """Fit one literature; of the priors only the ranges of τ, up to 4 s_τ, and of ω serve."""
    priors = priors or Priors.default(metric)
    half_line = not metric.signed
    whole = range_of_means(evidence, half_line=half_line, prior_scale=None)
    literature = literatures(
        [evidence],
        [weights],
        mu_range=whole,
        margin=3 * priors.heterogeneity_scale,
        half_line=half_line,
        fineness=fineness,
    )[0]
    floor = float(np.log(priors.printing_floor))
    mu_window, tau_top, omega_window = whole, 4 * priors.heterogeneity_scale, (floor, 0.0)
    for _ in range(_ROUNDS):
        ridge = _ridge(literature, mu_window, tau_top, omega_window, _COARSE)
        near = ridge.height > ridge.height.max() - _KEEP
        kept = np.flatnonzero(near)
        step = (mu_window[1] - mu_window[0]) / (_COARSE[0] - 1)
        drawn = (
            max(float(ridge.mu[kept[0]] - step), whole[0]),
            min(float(ridge.mu[kept[-1]] + step), whole[1]),
        )
        tau_top = min(tau_top, 1.5 * float(ridge.tau[near].max()) + tau_top / _COARSE[1])
        step = (omega_window[1] - omega_window[0]) / (_COARSE[2] - 1)
        omega_window = (
            max(float(ridge.log_omega[near].min()) - step, floor),
            min(float(ridge.log_omega[near].max()) + step, 0.0),
        )
        shrunk = (drawn[1] - drawn[0]) / (mu_window[1] - mu_window[0])
        mu_window = drawn
        if shrunk > 0.6:
            break
    ridge = _ridge(literature, mu_window, tau_top, omega_window, _FINE)
    return _conclude(ridge, whole, half_line)


@dataclass(frozen=True, slots=True, eq=False)
class _Ridge:
    """Profile over μ: its height, and τ̂ and ω̂ along it."""

    mu: Array
    height: Array
    tau: Array
    log_omega: Array


def _ridge(
    literature: Literature,
    mu_window: tuple[float, float],
    tau_top: float,
    omega_window: tuple[float, float],
    sizes: tuple[int, int, int],
) -> _Ridge:
    mu = nodes_around(literature.bumps, *mu_window, sizes[0])
    tau = np.linspace(0.0, tau_top, sizes[1])
    axes = literature.bands - 1
    points = sizes[2] if axes == 1 else max(5, sizes[2] // 2)
    omega = np.linspace(*omega_window, points)
    combinations = np.array([(0.0, *c) for c in product(*[omega] * axes)])
    height = surface(literature, mu=mu, tau=tau, log_weights=combinations)  # (T, M, W)
    if axes == 1:
        height, best_omega = _peak(height, omega)
        best_omega = best_omega[:, :, None]
    else:
        best_omega = combinations[height.argmax(axis=2), 1:]
        height = height.max(axis=2)
    height, best_tau = _peak(height.T, tau)
    nearest = np.abs(tau[None, :] - best_tau[:, None]).argmin(axis=1)
    return _Ridge(mu, height, best_tau, best_omega[nearest, np.arange(mu.size)])


def _peak(values: Array, nodes: Array) -> tuple[Array, Array]:
    """Maximum along the last axis and where, on a cubic spline around the best node.

    Values far below the best node are levelled first, and the gain over it is held to an eighth of
    its lead over the lower neighbour, which no parabola exceeds: a spline overshoots cliffs.
    """
    best = values.argmax(axis=-1)[..., None]
    top = np.take_along_axis(values, best, axis=-1)
    values = np.maximum(values, top - _CLIFF)
    last = nodes.size - 1
    beside = [np.clip(best + step, 0, last) for step in (-1, 1)]
    lower = np.minimum(*(np.take_along_axis(values, b, axis=-1) for b in beside))
    fine = np.linspace(nodes[0], nodes[-1], last * _SPREAD + 1)
    splined = CubicSpline(nodes, values, axis=-1)(fine)
    near = np.abs(np.arange(fine.size) - best * _SPREAD) <= _SPREAD
    splined = np.where(near, np.minimum(splined, top + (top - lower) / 8), -np.inf)
    return splined.max(axis=-1), fine[splined.argmax(axis=-1)]


def _conclude(ridge: _Ridge, whole: tuple[float, float], half_line: bool) -> ProfileFit:
    even = np.linspace(ridge.mu[0], ridge.mu[-1], _FINE[0] * _SPREAD)
    mu = np.union1d(even, ridge.mu)
    height = Akima1DInterpolator(ridge.mu, ridge.height, method="makima")(mu)
    top = int(height.argmax())
    root = np.sqrt(2 * np.maximum(height[top] - height, 0.0))
    cdf = ndtr(np.sign(mu - mu[top]) * root)
    if half_line and mu[0] == 0.0:
        # what a signed parameter would put below 0 sits at 0: the effect has no other side
        mean = GridDistribution.from_cdf(np.concatenate([[0.0], mu]), np.append(0.0, cdf))
    else:
        mean = GridDistribution.from_cdf(mu, cdf)
    runs_away = top == 0 and not half_line and mu[0] == whole[0]
    where = int(np.abs(ridge.mu - mu[top]).argmin())
    return ProfileFit(
        estimate=-np.inf if runs_away else float(mu[top]),
        heterogeneity=float(ridge.tau[where]),
        printing=tuple(float(w) for w in np.exp(ridge.log_omega[where])),
        mean=mean,
        new_study=_new_study(mean, ridge, half_line),
        log_likelihood=float(height[top]),
    )


def _new_study(mean: GridDistribution, ridge: _Ridge, half_line: bool) -> GridDistribution:
    """θ ~ N(μ, τ̂(μ)²) with μ from its confidence distribution; what escapes keeps escaping."""
    reach = 4 * float(ridge.tau.max())
    low = max(ridge.mu[0] - reach, 0.0) if half_line else ridge.mu[0] - reach
    edges = np.linspace(low, ridge.mu[-1] + reach, 241)
    tau = np.maximum(np.interp(mean.points, ridge.mu, ridge.tau), 1e-6)
    cdf = mean.mass @ normal_cdf(edges, mean.points, tau[:, None], half_line=half_line)
    return GridDistribution.from_cdf(edges, mean.below + cdf)
