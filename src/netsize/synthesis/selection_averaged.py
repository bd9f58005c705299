"""The averaged reading of the exact selection model: a posterior by deterministic quadrature.

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

import numpy as np
from numpy.polynomial.legendre import leggauss
from scipy.interpolate import CubicSpline
from scipy.special import logsumexp

from netsize.effect_sizes.metrics import Metric
from netsize.effect_sizes.records import Evidence
from netsize.numerics.arrays import Array
from netsize.numerics.grid import GridDistribution
from netsize.synthesis.mixing import normal_cdf
from netsize.synthesis.selection import (
    Literature,
    Priors,
    effect_grid,
    literatures,
    mixed,
    surface,
)

__all__ = ["AveragedFit", "fit_averaged", "fit_averaged_many", "log_evidence"]

_KEEP = 16.0  # log units below the maximum at which a window is cut
_COARSE = (33, 7, 5)  # points of μ, τ, each ω while the windows are drawn
_FINE = (65, 12, 9)  # and for the answer, before any refinement
_ROUNDS = 4
_LEVELS = (1.0, 1.5, 2.25, 3.5)  # refinements tried until the answer rests
_CELLS = 80  # points, evenly spaced, at which a new study's distribution is summed, and
_SPREAD = 4  # finer cells splined between them
_NEGLIGIBLE = 1e-8  # lattice points below this share of the posterior are not summed
_NULL_NODES = 40
_WATCHED = (0.05, 0.2, 0.5)  # quantiles that must rest

Window = tuple[float, float]


@dataclass(frozen=True, slots=True, eq=False)
class Posterior:
    """The posterior of one literature on a lattice, effect component only.

    joint : (T, M, W) probabilities, sum 1. log_evidence : of the effect component.
    log_null : evidence of the negligible component.
    """

    mu: Array
    tau: Array
    tau_edges: Array
    log_omega: tuple[Array, ...]
    omega_edges: tuple[Array, ...]
    log_weights: Array
    joint: Array
    log_evidence: float
    log_null: float


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class AveragedFit:
    """What the averaged reading concludes, on the pooling metric.

    Attributes
    ----------
    mean : of μ given that there is an effect. new_study : of θ ~ N(μ, τ²) for the new study, given
        an effect. heterogeneity : of τ. printing : of each ω_j, given an effect.
    probability_negligible : posterior probability of μ = τ = 0.
    log_bayes_factor : natural logarithm of the evidence for an effect over that for none.
    log_evidence : of the whole model, both components averaged over their priors.
    unprinted : of the share of conducted results that never got printed, given an effect.
    shrunken : for each result the distribution of its own true effect; None where an inequality
        straddles p-bands.
    error : how far the watched numbers moved in the last refinement of the grids.
    rested : whether that is within the tolerance asked.
    """

    priors: Priors
    mean: GridDistribution
    new_study: GridDistribution
    heterogeneity: GridDistribution
    printing: tuple[GridDistribution, ...]
    probability_negligible: float
    log_bayes_factor: float
    log_evidence: float
    unprinted: GridDistribution
    shrunken: tuple[GridDistribution | None, ...]
    error: float
    rested: bool


def fit_averaged(
    evidence: Sequence[Evidence],
    *,
    weights: Array,
    metric: Metric,
    priors: Priors | None = None,
    tolerance: float = 0.002,
) -> AveragedFit:
    """Fit one literature, refining the grids until its answers move by no more than `tolerance`.

    `weights` are the dependence weights c_i, shape (k,). Watched are the 5th, 20th and 50th
    percentiles of μ and of the new study's effect, and the probability of a negligible effect.
    """
    priors = priors or Priors.default(metric)
    previous = None
    error, rested = np.inf, False
    for level in _LEVELS:
        literature = _literature([evidence], [weights], metric, priors, level)[0]
        posterior = _posterior(literature, priors, level)
        mean, new = _mean(posterior), _new_study(posterior, literature)
        negligible = _negligible(posterior, priors)
        quantiles = [mean.quantile(_WATCHED), new.quantile(_WATCHED)]
        watched = np.concatenate([*quantiles, [negligible]])
        if previous is not None:
            error = float(np.max(np.abs(watched - previous)))
            rested = error <= tolerance
            if rested:
                break
        previous = watched
    return AveragedFit(
        priors=priors,
        mean=mean,
        new_study=new,
        heterogeneity=_along(posterior.joint.sum(axis=(1, 2)), posterior.tau_edges),
        printing=_printing(posterior),
        probability_negligible=negligible,
        log_bayes_factor=posterior.log_evidence - posterior.log_null,
        log_evidence=_total_evidence(posterior, priors),
        unprinted=_unprinted(posterior, literature),
        shrunken=_shrunken(posterior, literature, new.edges),
        error=error,
        rested=rested,
    )


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class BriefFit:
    """The parts of `AveragedFit` that simulations need."""

    mean: GridDistribution
    new_study: GridDistribution
    probability_negligible: float


def fit_averaged_many(
    groups: Sequence[Sequence[Evidence]],
    *,
    weights: Sequence[Array],
    metric: Metric,
    priors: Priors | None = None,
) -> list[BriefFit]:
    """Fit many literatures at the first grid level, sharing one grid of effects and its curves."""
    priors = priors or Priors.default(metric)
    out = []
    for literature in _literature(groups, weights, metric, priors, _LEVELS[0]):
        posterior = _posterior(literature, priors, _LEVELS[0])
        out.append(
            BriefFit(
                mean=_mean(posterior),
                new_study=_new_study(posterior, literature),
                probability_negligible=_negligible(posterior, priors),
            )
        )
    return out


def log_evidence(
    evidence: Sequence[Evidence],
    *,
    weights: Array,
    metric: Metric,
    priors: Priors | None = None,
    selection: bool = True,
) -> float:
    """log of the prior-averaged likelihood, both components; without selection every ω_j is 1."""
    priors = priors or Priors.default(metric)
    literature = _literature([evidence], [weights], metric, priors, _LEVELS[0])[0]
    return _total_evidence(_posterior(literature, priors, _LEVELS[0], selection=selection), priors)


def _total_evidence(posterior: Posterior, priors: Priors) -> float:
    with np.errstate(divide="ignore"):
        shares = np.log([1 - priors.negligible, priors.negligible])
    return float(logsumexp(np.add(shares, [posterior.log_evidence, posterior.log_null])))


def _literature(
    groups: Sequence[Sequence[Evidence]],
    weights: Sequence[Array],
    metric: Metric,
    priors: Priors,
    level: float,
) -> list[Literature]:
    half_line = not metric.signed
    everything = [e for group in groups for e in group]
    theta = effect_grid(everything, priors, half_line=half_line, fineness=4.0 * level)
    return literatures(groups, weights, theta=theta, half_line=half_line)


def _posterior(
    literature: Literature, priors: Priors, level: float, *, selection: bool = True
) -> Posterior:
    floor = np.log(priors.printing_floor)
    margin = 3 * priors.heterogeneity_scale
    low = 0.0 if literature.half_line else float(literature.theta[0]) + margin
    axes = literature.bands - 1 if selection else 0
    whole: list[Window] = [
        (low, float(literature.theta[-1]) - margin),
        (0.0, 4 * priors.heterogeneity_scale),
        *[(floor, 0.0)] * axes,
    ]
    windows = whole
    for _ in range(_ROUNDS):
        lattice, log_joint = _evaluate(literature, priors, windows, _COARSE)
        drawn = _windows(lattice, log_joint, windows, whole)
        shrunk = max((w[1] - w[0]) / (v[1] - v[0]) for w, v in zip(drawn, windows, strict=True))
        windows = drawn
        if shrunk > 0.6:
            break
    sizes = tuple(int(np.ceil(n * level)) for n in _FINE)
    lattice, log_joint = _evaluate(literature, priors, windows, sizes)
    total = float(logsumexp(log_joint))
    null_axes = [_legendre((floor, 0.0), _NULL_NODES if axes == 1 else 12)] * axes
    log_null = surface(
        literature,
        mu=np.array([0.0]),
        tau=np.array([0.0]),
        log_weights=_combinations([a[0] for a in null_axes], literature.bands),
    )
    null_weights = _products([np.log(a[1] / -floor) for a in null_axes])
    return Posterior(
        mu=lattice.mu,
        tau=lattice.tau,
        tau_edges=lattice.tau_edges,
        log_omega=lattice.log_omega,
        omega_edges=lattice.omega_edges,
        log_weights=lattice.log_weights,
        joint=np.exp(log_joint - total),
        log_evidence=total,
        log_null=float(logsumexp(log_null[0, 0] + null_weights)),
    )


@dataclass(frozen=True, slots=True, eq=False)
class _Lattice:
    mu: Array
    tau: Array
    tau_edges: Array
    log_omega: tuple[Array, ...]
    omega_edges: tuple[Array, ...]
    log_weights: Array


def _evaluate(
    literature: Literature,
    priors: Priors,
    windows: Sequence[Window],
    sizes: tuple[int, ...],
) -> tuple[_Lattice, Array]:
    """Log-likelihood plus log prior plus log quadrature weight at every lattice point."""
    n_mu, n_tau, n_omega = sizes
    mu = np.linspace(*windows[0], n_mu)
    trapezoid = np.full(n_mu, mu[1] - mu[0])
    trapezoid[[0, -1]] /= 2
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
    lattice = _Lattice(
        mu=mu,
        tau=tau,
        tau_edges=tau_edges,
        log_omega=tuple(o[0] for o in omega),
        omega_edges=tuple(o[2] for o in omega),
        log_weights=log_weights,
    )
    return lattice, log_joint


def _windows(
    lattice: _Lattice, log_joint: Array, windows: Sequence[Window], whole: Sequence[Window]
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


def _along(mass: Array, edges: Array) -> GridDistribution:
    return GridDistribution(edges=edges, mass=mass / mass.sum())


def _mean(posterior: Posterior) -> GridDistribution:
    """Distribution of μ, its density splined between lattice points."""
    density = posterior.joint.sum(axis=(0, 2))
    density[[0, -1]] *= 2  # undo the trapezoid weights of the ends
    edges = np.linspace(posterior.mu[0], posterior.mu[-1], _CELLS * _SPREAD + 1)
    fine = CubicSpline(posterior.mu, density)((edges[1:] + edges[:-1]) / 2)
    return _along(np.maximum(fine, 0.0), edges)


def _new_study(posterior: Posterior, literature: Literature) -> GridDistribution:
    """Distribution of θ ~ N(μ, τ²), truncated at 0 on a half line."""
    share = posterior.joint.sum(axis=2)
    widest = posterior.tau[np.flatnonzero(share.sum(axis=1) > 1e-6)[-1]]
    low = max(float(posterior.mu[0] - 4 * widest), float(literature.theta[0]))
    high = min(float(posterior.mu[-1] + 4 * widest), float(literature.theta[-1]))
    points = np.linspace(low, high, _CELLS + 1)
    cdf = np.zeros(points.size)
    for tau, part in zip(posterior.tau, share, strict=True):
        felt = part > _NEGLIGIBLE
        if felt.any():
            half_line = literature.half_line
            cdf += part[felt] @ normal_cdf(points, posterior.mu[felt], tau, half_line=half_line)
    cdf = (cdf - cdf[0]) / (cdf[-1] - cdf[0])
    edges = np.linspace(low, high, _CELLS * _SPREAD + 1)
    return GridDistribution.from_cdf(edges, CubicSpline(points, cdf)(edges))


def _printing(posterior: Posterior) -> tuple[GridDistribution, ...]:
    shape = tuple(o.size for o in posterior.log_omega)
    cube = posterior.joint.sum(axis=(0, 1)).reshape(shape)
    out = []
    for j, edges in enumerate(posterior.omega_edges):
        others = tuple(a for a in range(cube.ndim) if a != j)
        out.append(_along(cube.sum(axis=others), edges).mapped(np.exp))
    return tuple(out)


def _negligible(posterior: Posterior, priors: Priors) -> float:
    odds = np.exp(np.clip(posterior.log_evidence - posterior.log_null, -700, 700))
    return float(priors.negligible / (priors.negligible + (1 - priors.negligible) * odds))


def _unprinted(posterior: Posterior, literature: Literature) -> GridDistribution:
    """1 - k/Σ_i 1/Π_i with Π_i = Σ_j w_j A_ij: a printed result stands for 1/Π_i conducted ones."""
    _, chances = mixed(literature, mu=posterior.mu, tau=posterior.tau)
    per_design = np.bincount(literature.design, minlength=chances.shape[0]).astype(float)
    conducted = np.empty_like(posterior.joint)
    for w, log_w in enumerate(posterior.log_weights):
        printed = np.tensordot(np.exp(log_w), chances, axes=(0, 1))
        conducted[:, :, w] = np.tensordot(per_design, 1.0 / printed, axes=1)
    share = 1.0 - literature.design.size / conducted
    edges = np.linspace(0.0, 1.0, 201)
    mass, _ = np.histogram(np.clip(share, 0, 1), bins=edges, weights=posterior.joint)
    return _along(mass, edges)


def _shrunken(
    posterior: Posterior, literature: Literature, edges: Array
) -> tuple[GridDistribution | None, ...]:
    """Density of θ_i ∝ L_i(θ) Σ [P(μ,τ)/M_i(μ,τ)] N(θ; μ, τ²), on the cells of the new study's."""
    share = posterior.joint.sum(axis=2)
    points = (edges[1:] + edges[:-1]) / 2
    size = literature.owner.size
    log_own = literature.curves(points).T[:size]
    top = log_own.max(axis=1, keepdims=True)
    log_mixed, _ = mixed(literature, mu=posterior.mu, tau=posterior.tau)
    density = np.zeros((size, points.size))
    for t, tau in enumerate(posterior.tau):
        cells = np.diff(
            normal_cdf(edges, posterior.mu, tau, half_line=literature.half_line), axis=1
        )
        density += (share[t] / np.exp(log_mixed[:, t] - top)) @ cells
    density *= np.exp(log_own - top)
    counts = np.bincount(literature.owner, minlength=literature.weights.size)
    where = {int(owner): row for row, owner in enumerate(literature.owner)}
    return tuple(
        _along(density[where[i]], edges) if counts[i] == 1 else None
        for i in range(literature.weights.size)
    )
