"""The exact selection model: likelihood of what got printed, given mean, spread and selection.

With L_i(θ) the likelihood of result i and P_ij(θ) the probability of its p-band j,

    M_i(μ,τ) = ∫ L_i(θ) N(θ; μ, τ²) dθ,    A_ij(μ,τ) = ∫ P_ij(θ) N(θ; μ, τ²) dθ,
    log L(μ,τ,ω) = Σ_i c_i log[ w_{j(i)} M_i / Σ_j w_j A_ij ],

w_0 = 1 for the significant band and w_j = ω_j for the others: the chance of being printed relative
to a significant result. c_i = 1/(1+(m-1)ρ) where m results share a sample. The weight-function form
is that of Hedges (1992) and Vevea & Hedges (1995), here with the exact distributions of t, F, r and
chi-square in place of the normal.
"""

from __future__ import annotations

from collections import Counter
from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
from scipy.interpolate import CubicSpline, PPoly

from netsize.effect_sizes import curves
from netsize.effect_sizes.metrics import Metric
from netsize.effect_sizes.records import Evidence
from netsize.numerics.arrays import Array, IntArray
from netsize.synthesis.mixing import LOG_FLOOR, mix

__all__ = ["Literature", "Priors", "dependence_weights", "effect_grid", "literatures", "surface"]

# Exact curves are computed at every third grid point and splined between: the logarithms are so
# smooth that at three quarters of a standard error this costs less than 1e-4.
_THINNING = 3
_MAX_POINTS = 40_000
# Probabilities below these are levelled: tails that far out are noise or zero in double precision,
# and a spline through their jump would ring. ω ≥ 0.001 hides the first, the data the second.
_BAND_FLOOR, _INTERVAL_FLOOR = -30.0, -60.0


@dataclass(frozen=True, slots=True, kw_only=True)
class Priors:
    """What is believed before the evidence, on the pooling metric.

    Attributes
    ----------
    effect_scale : s > 0, standard deviation of μ ~ N(0, s²) (half-normal where θ ≥ 0).
    heterogeneity_scale : s_τ > 0 of τ ~ half-normal(s_τ).
    printing_floor : lowest relative chance of being printed, in (0, 1); ω is log-uniform from it
        to 1.
    negligible : prior probability, in [0, 1), of the component μ = τ = 0.
    """

    effect_scale: float
    heterogeneity_scale: float
    printing_floor: float = 0.01
    negligible: float = 0.5

    @classmethod
    def default(cls, metric: Metric) -> Priors:
        """s = 0.8 and s_τ = 0.25 on mean differences; half of that on Fisher z and Cohen's f."""
        return cls(
            effect_scale=0.8 * metric.prior_scale, heterogeneity_scale=0.25 * metric.prior_scale
        )


@dataclass(frozen=True, slots=True, eq=False)
class Literature:
    """The curves of one literature, ready for mixing.

    Attributes
    ----------
    theta : (G,) uniform grid of effects, fine enough for every curve. half_line : θ ≥ 0.
    curves : one spline of m + U(J-1) logarithms over θ: first the likelihoods of the m pieces,
        usually one a result, more where an inequality straddles p-bands; then log P_ij of all
        bands but the last, design by design, for the U different designs.
    owner, band : (m,) the result and the p-band of each piece.
    weights : (k,) dependence weights c_i.
    design : (k,) which of the U designs each result has.
    bands : number J of p-bands.
    """

    theta: Array
    half_line: bool
    curves: PPoly
    owner: IntArray
    band: IntArray
    weights: Array
    design: IntArray
    bands: int


def dependence_weights(samples: Sequence[str], *, correlation: float) -> Array:
    """c_i = 1/(1+(m-1)ρ), shape (k,), for m results on the sample that result i came from."""
    sizes = Counter(samples)
    return np.array([1.0 / (1.0 + (sizes[s] - 1) * correlation) for s in samples])


def effect_grid(
    evidence: Sequence[Evidence], priors: Priors, *, half_line: bool, fineness: float = 4.0
) -> Array:
    """A uniform grid of effects, `fineness` steps to the smallest standard error.

    It spans four prior standard deviations of μ, or every estimate, and three of τ beyond, and has
    at most 40,000 points, so for studies of millions it is coarser than asked.
    """
    centres = np.array([_centre(e) for e in evidence])
    margin = 3 * priors.heterogeneity_scale
    high = max(4 * priors.effect_scale, float(centres.max())) + margin
    low = 0.0 if half_line else min(-4 * priors.effect_scale, float(centres.min())) - margin
    step = min(_standard_error(e) for e in evidence) / fineness
    points = min(int(np.ceil((high - low) / step)) + 1, _MAX_POINTS)
    return np.linspace(low, high, max(points, 60))


def literatures(
    groups: Sequence[Sequence[Evidence]],
    weights: Sequence[Array],
    *,
    theta: Array,
    half_line: bool,
) -> list[Literature]:
    """Several literatures on one grid; curves of all are computed together."""
    support = theta[::_THINNING]
    if support[-1] != theta[-1]:
        support = np.append(support, theta[-1])
    pieces = [[_pieces(e) for e in group] for group in groups]
    flat = [piece for group in pieces for result in group for _, piece in result]
    floor = np.array([LOG_FLOOR if e.low == e.high else _INTERVAL_FLOOR for e in flat])
    likelihood = np.maximum(curves.log_likelihood(flat, support), floor[:, None])
    designs = list(dict.fromkeys(_design(e) for group in groups for e in group))
    index = {design: u for u, design in enumerate(designs)}
    chances = curves.band_probabilities(designs, support)[:, :-1]
    open_bands = chances.shape[1]
    log_bands = np.maximum(np.log(np.maximum(chances, 1e-300)), _BAND_FLOOR)
    stack = np.concatenate([likelihood, log_bands.reshape(-1, support.size)])
    spline = CubicSpline(support, stack.T)
    out = []
    start = 0
    for group, parts, c in zip(groups, pieces, weights, strict=True):
        owner = np.array([i for i, result in enumerate(parts) for _ in result])
        used, design = np.unique([index[_design(e)] for e in group], return_inverse=True)
        bands_of_used = len(flat) + (used[:, None] * open_bands + np.arange(open_bands)).ravel()
        rows = np.concatenate([np.arange(start, start + owner.size), bands_of_used])
        out.append(
            Literature(
                theta=theta,
                half_line=half_line,
                curves=PPoly.construct_fast(spline.c[:, :, rows], spline.x),
                owner=owner,
                band=np.array([band for result in parts for band, _ in result]),
                weights=c,
                design=design,
                bands=open_bands + 1,
            )
        )
        start += owner.size
    return out


def surface(literature: Literature, *, mu: Array, tau: Array, log_weights: Array) -> Array:
    """log L(μ, τ, ω) up to a constant, shape (T, M, W).

    mu : (M,). tau : (T,). log_weights : (W, J) log w_j of each combination, w_0 = 1 included.
    """
    return combine(literature, *mixed(literature, mu=mu, tau=tau), log_weights)


def mixed(literature: Literature, *, mu: Array, tau: Array) -> tuple[Array, Array]:
    """log M of the m pieces, (m, T, M), and A_j of the U designs, (U, J, T, M), summing to 1."""
    logs = mix(literature.curves, literature.theta, mu, tau, half_line=literature.half_line)
    size = literature.owner.size
    open_bands = literature.bands - 1
    chances = np.exp(logs[size:]).reshape(-1, open_bands, tau.size, mu.size)
    last = np.maximum(1.0 - chances.sum(axis=1, keepdims=True), 0.0)
    return logs[:size], np.concatenate([chances, last], axis=1)


def combine(literature: Literature, pieces: Array, chances: Array, log_weights: Array) -> Array:
    """Σ_i c_i log[ Σ_pieces w M / Σ_j w_j A_ij ] from mixed pieces and bands; (T, M, W)."""
    shape = pieces.shape[1:]
    pieces = pieces.reshape(pieces.shape[0], -1)
    chances = chances.reshape(*chances.shape[:2], -1)
    counts = np.bincount(literature.owner, minlength=literature.weights.size)
    single = counts[literature.owner] == 1
    c = literature.weights[literature.owner]
    numerator = c[single] @ pieces[single]
    in_band = np.bincount(literature.band[single], weights=c[single], minlength=literature.bands)
    shared = np.bincount(literature.design, weights=literature.weights)
    split = [np.flatnonzero(literature.owner == i) for i in np.flatnonzero(counts > 1)]
    out = np.empty((numerator.size, log_weights.shape[0]))
    for w, log_w in enumerate(log_weights):
        printed = np.exp(log_w) @ chances
        out[:, w] = numerator + in_band @ log_w - shared @ np.log(printed)
        for mine in split:
            terms = pieces[mine] + log_w[literature.band[mine], None]
            out[:, w] += c[mine[0]] * np.logaddexp.reduce(terms, axis=0)
    return out.reshape(*shape, -1)


def _centre(e: Evidence) -> float:
    """Rough location of one result's likelihood, to place the grid."""
    ends = [x for x in (e.low, e.high) if np.isfinite(x)]
    x = 0.0 if e.two_sided or not ends else float(np.mean(ends))
    if e.kernel == "r":
        return float(np.arctanh(np.clip(x, -0.999, 0.999)))
    if e.kernel in ("f", "chi2"):
        return float(np.sqrt(max(x * (e.df[0] if e.kernel == "f" else 1.0), 0.0))) / e.scale
    return x / e.scale


def _standard_error(e: Evidence) -> float:
    """Standard error of one result near no effect, on the metric."""
    return float(1 / np.sqrt(e.df[0])) if e.kernel == "r" else 1.0 / e.scale


def _design(e: Evidence) -> Evidence:
    """What the band probabilities of a result depend on: everything but the observed value."""
    return replace(e, low=0.0, high=0.0, two_sided=False, band=None)


def _pieces(e: Evidence) -> list[tuple[int, Evidence]]:
    """The result as (band, evidence) pieces, each inside one p-band."""
    if e.band is not None:
        return [(e.band, e)]
    edges = (np.inf, *e.cuts, -np.inf)
    ranges = [(e.low, e.high)] + ([(-e.high, -e.low)] if e.two_sided else [])
    out = []
    for j in range(len(edges) - 1):
        for low, high in ranges:
            a, b = max(low, edges[j + 1]), min(high, edges[j])
            if a < b:
                out.append((j, replace(e, low=a, high=b, two_sided=False, band=j)))
    return out
