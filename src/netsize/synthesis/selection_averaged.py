"""The averaged reading of the exact selection model: what its posterior says.

The posterior comes from `selection_posterior`, refined until the answer rests; here it is turned
into distributions of the mean effect, of a new study's, of τ, ω and each result's own effect.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from scipy.interpolate import CubicSpline, PchipInterpolator

from netsize.effect_sizes.metrics import Metric
from netsize.effect_sizes.records import Evidence
from netsize.numerics.arrays import Array, IntArray
from netsize.numerics.grid import GridDistribution
from netsize.synthesis.mixing import normal_cdf
from netsize.synthesis.selection import (
    Literature,
    Priors,
    literatures,
    mixed,
    own_likelihoods,
    range_of_means,
)
from netsize.synthesis.selection_posterior import (
    Posterior,
    integrate,
    negligible,
    total_evidence,
)

__all__ = ["AveragedFit", "BriefFit", "fit_averaged", "fit_averaged_many", "log_evidence"]

_LEVELS = (1.0, 1.5, 2.25, 3.5)  # refinements tried until the answer rests
_CELLS = 80  # points, evenly spaced, at which a new study's distribution is summed, and
_SPREAD = 4  # finer cells splined between them
_NEGLIGIBLE = 1e-8  # lattice points below this share of the posterior are not summed
_WATCHED = (0.05, 0.2, 0.5)  # quantiles that must rest


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class AveragedFit:
    """What the averaged reading concludes, on the pooling metric.

    Attributes
    ----------
    mean : of μ given that there is an effect. new_study : of θ ~ N(μ, τ²) for the new study, given
        an effect.
    probability_negligible : posterior probability of μ = τ = 0.
    log_bayes_factor : natural logarithm of the evidence for an effect over that for none.
    log_evidence : of the whole model, both components averaged over their priors.
    error : how far the watched numbers moved in the last refinement of the grids.
    rested : whether that is within the tolerance asked.
    posterior, literature : what the properties are computed from, at each call.
    """

    priors: Priors
    mean: GridDistribution
    new_study: GridDistribution
    probability_negligible: float
    log_bayes_factor: float
    log_evidence: float
    error: float
    rested: bool
    posterior: Posterior
    literature: Literature

    @property
    def heterogeneity(self) -> GridDistribution:
        """Distribution of τ, given an effect."""
        lattice = self.posterior.lattice
        return _along(self.posterior.joint.sum(axis=(1, 2)), lattice.tau_edges)

    @property
    def printing(self) -> tuple[GridDistribution, ...]:
        """Distribution of each ω_j, given an effect."""
        return _printing(self.posterior)

    @property
    def unprinted(self) -> GridDistribution:
        """Distribution of the share of conducted results never printed, given an effect."""
        return _unprinted(self.posterior, self.literature)

    @property
    def shrunken(self) -> tuple[GridDistribution | None, ...]:
        """Distribution of each true effect; None where an inequality straddles p-bands."""
        return _shrunken(self.posterior, self.literature, self.new_study.edges)


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
        posterior = integrate(literature, priors, level)
        mean, new = _mean(posterior), _new_study(posterior, literature)
        share = negligible(posterior, priors)
        quantiles = [mean.quantile(_WATCHED), new.quantile(_WATCHED)]
        watched = np.concatenate([*quantiles, [share]])
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
        probability_negligible=share,
        log_bayes_factor=posterior.log_evidence - posterior.log_null,
        log_evidence=total_evidence(posterior, priors),
        error=error,
        rested=rested,
        posterior=posterior,
        literature=literature,
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
        posterior = integrate(literature, priors, _LEVELS[0])
        out.append(
            BriefFit(
                mean=_mean(posterior),
                new_study=_new_study(posterior, literature),
                probability_negligible=negligible(posterior, priors),
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
    return total_evidence(integrate(literature, priors, _LEVELS[0], selection=selection), priors)


def _literature(
    groups: Sequence[Sequence[Evidence]],
    weights: Sequence[Array],
    metric: Metric,
    priors: Priors,
    level: float,
) -> list[Literature]:
    everything = [e for group in groups for e in group]
    half_line = not metric.signed
    return literatures(
        groups,
        weights,
        mu_range=range_of_means(everything, half_line=half_line, prior_scale=priors.effect_scale),
        margin=3 * priors.heterogeneity_scale,
        half_line=half_line,
        fineness=4.0 * level,
    )


def _along(mass: Array, edges: Array) -> GridDistribution:
    return GridDistribution(edges=edges, mass=mass / mass.sum())


def _mean(posterior: Posterior) -> GridDistribution:
    """Distribution of μ, its density interpolated between lattice points without overshoot."""
    lattice = posterior.lattice
    density = posterior.joint.sum(axis=(0, 2)) / lattice.mu_weights
    even = np.linspace(lattice.mu[0], lattice.mu[-1], _CELLS * _SPREAD + 1)
    edges = np.union1d(even, lattice.mu)
    fine = PchipInterpolator(lattice.mu, density)((edges[1:] + edges[:-1]) / 2)
    return _along(fine * np.diff(edges), edges)


def _new_study(posterior: Posterior, literature: Literature) -> GridDistribution:
    """Distribution of θ ~ N(μ, τ²), truncated at 0 on a half line."""
    share = posterior.joint.sum(axis=2)
    widest = posterior.lattice.tau[np.flatnonzero(share.sum(axis=1) > 1e-6)[-1]]
    low = max(float(posterior.lattice.mu[0] - 4 * widest), float(literature.theta[0]))
    high = min(float(posterior.lattice.mu[-1] + 4 * widest), float(literature.theta[-1]))
    points = np.linspace(low, high, _CELLS + 1)
    cdf = np.zeros(points.size)
    for tau, part in zip(posterior.lattice.tau, share, strict=True):
        felt = part > _NEGLIGIBLE
        if felt.any():
            half_line = literature.half_line
            cdf += part[felt] @ normal_cdf(
                points, posterior.lattice.mu[felt], tau, half_line=half_line
            )
    cdf = (cdf - cdf[0]) / (cdf[-1] - cdf[0])
    edges = np.linspace(low, high, _CELLS * _SPREAD + 1)
    return GridDistribution.from_cdf(edges, CubicSpline(points, cdf)(edges))


def _printing(posterior: Posterior) -> tuple[GridDistribution, ...]:
    shape = tuple(o.size for o in posterior.lattice.log_omega)
    cube = posterior.joint.sum(axis=(0, 1)).reshape(shape)
    out = []
    for j, edges in enumerate(posterior.lattice.omega_edges):
        others = tuple(a for a in range(cube.ndim) if a != j)
        out.append(_along(cube.sum(axis=others), edges).mapped(np.exp))
    return tuple(out)


def _unprinted(posterior: Posterior, literature: Literature) -> GridDistribution:
    """1 - k/Σ_i 1/Π_i with Π_i = Σ_j w_j A_ij: a printed result stands for 1/Π_i conducted ones."""
    _, chances = mixed(literature, mu=posterior.lattice.mu, tau=posterior.lattice.tau)
    per_design = np.bincount(literature.design, minlength=chances.shape[0]).astype(float)
    conducted = np.empty_like(posterior.joint)
    for w, log_w in enumerate(posterior.lattice.log_weights):
        printed = np.tensordot(np.exp(log_w), chances, axes=(0, 1))
        conducted[:, :, w] = np.tensordot(per_design, 1.0 / printed, axes=1)
    share = 1.0 - literature.design.size / conducted
    edges = np.linspace(0.0, 1.0, 201)
    mass, _ = np.histogram(np.clip(share, 0, 1), bins=edges, weights=posterior.joint)
    return _along(mass, edges)


def _shrunken(
    posterior: Posterior, literature: Literature, edges: Array
) -> tuple[GridDistribution | None, ...]:
    """Density of θ_i ∝ L_i(θ) Σ [P(μ,τ)/M_i(μ,τ)] N(θ; μ, τ²), one a result.

    Ordinary results share the cells `edges`; a precise one gets cells of its own, as narrow as it.
    """
    log_mixed, _ = mixed(literature, mu=posterior.lattice.mu, tau=posterior.lattice.tau)
    counts = np.bincount(literature.owner, minlength=literature.weights.size)
    out: list[GridDistribution | None] = [None] * literature.weights.size
    ordinary = np.flatnonzero(~literature.precise)
    parts = [(ordinary, edges)] if ordinary.size else []
    for piece, (at, width, _) in zip(
        np.flatnonzero(literature.precise), literature.bumps.T, strict=True
    ):
        parts.append((np.array([piece]), at + width * np.linspace(-6.0, 6.0, _CELLS + 1)))
    for pieces, cells in parts:
        density = _own_density(posterior, literature, log_mixed[pieces], pieces, cells)
        for piece, mass in zip(pieces, density, strict=True):
            owner = int(literature.owner[piece])
            if counts[owner] == 1:
                out[owner] = _along(mass, cells)
    return tuple(out)


def _own_density(
    posterior: Posterior, literature: Literature, log_mixed: Array, pieces: IntArray, edges: Array
) -> Array:
    """Unnormalised masses of the true effects of some pieces on cells, (len(pieces), C)."""
    share = posterior.joint.sum(axis=2)
    log_own = own_likelihoods(literature, (edges[1:] + edges[:-1]) / 2)[pieces]
    top = log_own.max(axis=1, keepdims=True)
    density = np.zeros(log_own.shape)
    for t, tau in enumerate(posterior.lattice.tau):
        felt = share[t] > _NEGLIGIBLE
        cdf = normal_cdf(edges, posterior.lattice.mu[felt], tau, half_line=literature.half_line)
        weight = share[t][felt] / np.exp(log_mixed[:, t, felt] - top)
        density += weight @ np.diff(cdf, axis=1)
    return np.asarray(density * np.exp(log_own - top))
