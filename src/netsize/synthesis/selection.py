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
from netsize.numerics.arrays import Array, BoolArray, IntArray
from netsize.synthesis.mixing import LOG_FLOOR, mix
from netsize.synthesis.precise import (
    bump,
    centre,
    is_precise,
    mixed_bumps,
    mixed_tails,
    spread,
    standard_error,
    tail,
)

__all__ = [
    "Literature",
    "Priors",
    "combine",
    "dependence_weights",
    "literatures",
    "mixed",
    "own_likelihoods",
    "range_of_means",
    "surface",
]

# Exact curves are computed at every third grid point, three quarters of a standard error apart, and
# splined between: their logarithms are smooth on that scale (the brute-force test bounds the cost).
_THINNING = 3
_MIN_POINTS, _MAX_POINTS = 60, 40_000
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
    mu_range : between which values μ is sought.
    curves : one spline of logarithms over θ: the likelihoods of the ordinary pieces, then log P_ij
        of all bands but the last, design by design, for the ordinary designs. A result is one
        piece, or several where an inequality straddles p-bands. values : the same on `theta`.
    bumps : (3, q) centre, width and log area of the precise pieces, whose likelihood is a normal
        curve. tails : (2, J-1, v) edges and widths of the precise designs, for which
        P(X > cut_j) = Φ((θ - edge)/width).
    precise, precise_design : (m,) and (U,) which pieces and designs those are.
    owner, band : (m,) the result and the p-band of each piece.
    weights : (k,) dependence weights c_i.
    design : (k,) which of the U designs each result has.
    bands : number J of p-bands.
    """

    theta: Array
    half_line: bool
    mu_range: tuple[float, float]
    curves: PPoly
    values: Array
    bumps: Array
    tails: Array
    precise: BoolArray
    precise_design: BoolArray
    owner: IntArray
    band: IntArray
    weights: Array
    design: IntArray
    bands: int


def dependence_weights(samples: Sequence[str], *, correlation: float) -> Array:
    """c_i = 1/(1+(m-1)ρ), shape (k,), for m results on the sample that result i came from."""
    sizes = Counter(samples)
    return np.array([1.0 / (1.0 + (sizes[s] - 1) * correlation) for s in samples])


def range_of_means(
    evidence: Sequence[Evidence], *, half_line: bool, prior_scale: float | None
) -> tuple[float, float]:
    """Between which values μ is sought.

    Ten standard errors beyond every estimate, and four prior standard deviations. Without a prior,
    twelve of the largest standard error below the lowest estimate: there selection lets a
    likelihood level off but not fall, and it has to be followed until it does.
    """
    high = max(centre(e) + 10 * spread(e) for e in evidence)
    if prior_scale is None:
        widest = max(standard_error(e) for e in evidence)
        low = min(centre(e) for e in evidence) - 12 * widest
    else:
        high = max(high, 4 * prior_scale)
        low = min(-4 * prior_scale, min(centre(e) - 10 * spread(e) for e in evidence))
    return 0.0 if half_line else float(low), float(high)


def literatures(
    groups: Sequence[Sequence[Evidence]],
    weights: Sequence[Array],
    *,
    mu_range: tuple[float, float],
    margin: float,
    half_line: bool,
    fineness: float,
) -> list[Literature]:
    """Several literatures on one grid; curves of all are computed together.

    The grid reaches `margin` beyond `mu_range` and has `fineness` steps to the smallest standard
    error among the ordinary results.
    """
    pieces = [[_pieces(e) for e in group] for group in groups]
    flat = [piece for group in pieces for result in group for _, piece in result]
    designs = list(dict.fromkeys(_design(e) for group in groups for e in group))
    precise = np.array([is_precise(e) and e.low == e.high for e in flat])
    precise_design = np.array([is_precise(e) for e in designs])
    ordinary = [e for e, p in zip(flat, precise, strict=True) if not p]
    theta = _grid(ordinary, mu_range, margin, half_line=half_line, fineness=fineness)
    support = theta[::_THINNING]
    if support[-1] != theta[-1]:
        support = np.append(support, theta[-1])
    spline = _spline(
        ordinary,
        [e for e, p in zip(designs, precise_design, strict=True) if not p],
        support,
        half_line=half_line,
    )
    values = spline(theta)
    bumps = bump([e for e, p in zip(flat, precise, strict=True) if p])
    tails = tail([e for e, p in zip(designs, precise_design, strict=True) if p])
    index = {design: u for u, design in enumerate(designs)}
    open_bands = len(designs[0].cuts)
    # places of pieces and designs among the ordinary, and among the precise, ones
    column = np.where(precise, np.cumsum(precise) - 1, np.cumsum(~precise) - 1)
    row = np.where(precise_design, np.cumsum(precise_design) - 1, np.cumsum(~precise_design) - 1)
    out = []
    start = 0
    for group, parts, c in zip(groups, pieces, weights, strict=True):
        owner = np.array([i for i, result in enumerate(parts) for _ in result])
        used, design = np.unique([index[_design(e)] for e in group], return_inverse=True)
        mine = slice(start, start + owner.size)
        plain = row[used[~precise_design[used]]]
        bands = len(ordinary) + (plain[:, None] * open_bands + np.arange(open_bands)).ravel()
        rows = np.concatenate([column[mine][~precise[mine]], bands]).astype(np.int64)
        out.append(
            Literature(
                theta=theta,
                half_line=half_line,
                mu_range=mu_range,
                curves=PPoly.construct_fast(spline.c[:, :, rows], spline.x),
                values=values[:, rows],
                bumps=bumps[:, column[mine][precise[mine]]],
                tails=tails[:, :, row[used[precise_design[used]]]],
                precise=precise[mine],
                precise_design=precise_design[used],
                owner=owner,
                band=np.array([band for result in parts for band, _ in result]),
                weights=c,
                design=design,
                bands=open_bands + 1,
            )
        )
        start += owner.size
    return out


def _grid(
    ordinary: Sequence[Evidence],
    mu_range: tuple[float, float],
    margin: float,
    *,
    half_line: bool,
    fineness: float,
) -> Array:
    low = 0.0 if half_line else mu_range[0] - margin
    high = mu_range[1] + margin
    step = min((standard_error(e) for e in ordinary), default=np.inf) / fineness
    points = min((high - low) / step + 1, _MAX_POINTS)
    return np.linspace(low, high, max(int(np.ceil(points)), _MIN_POINTS))


def _spline(
    ordinary: Sequence[Evidence],
    designs: Sequence[Evidence],
    support: Array,
    *,
    half_line: bool,
) -> PPoly:
    """Log-likelihoods of the results, then log band probabilities of the designs, splined."""
    stack = np.empty((0, support.size))
    if ordinary:
        floor = np.array([LOG_FLOOR if e.low == e.high else _INTERVAL_FLOOR for e in ordinary])
        stack = np.maximum(curves.log_likelihood(ordinary, support), floor[:, None])
    if designs:
        chances = curves.band_probabilities(designs, support)[:, :-1]
        logs = np.maximum(np.log(np.maximum(chances, 1e-300)), _BAND_FLOOR)
        stack = np.concatenate([stack, logs.reshape(-1, support.size)])
    if not len(stack):
        return PPoly.construct_fast(np.empty((4, support.size - 1, 0)), support)
    # curves of an unsigned effect depend on θ², so they are flat at 0
    flat = (1, np.zeros(len(stack)))
    ends = (flat, "not-a-knot") if half_line else "not-a-knot"
    return CubicSpline(support, stack.T, bc_type=ends)


def surface(literature: Literature, *, mu: Array, tau: Array, log_weights: Array) -> Array:
    """log L(μ, τ, ω) up to a constant, shape (T, M, W).

    mu : (M,). tau : (T,). log_weights : (W, J) log w_j of each combination, w_0 = 1 included.
    """
    return combine(literature, *mixed(literature, mu=mu, tau=tau), log_weights)


def mixed(literature: Literature, *, mu: Array, tau: Array) -> tuple[Array, Array]:
    """log M of the m pieces, (m, T, M), and A_j of the U designs, (U, J, T, M), summing to 1."""
    half_line = literature.half_line
    logs = mix(literature.curves, literature.values, literature.theta, mu, tau, half_line=half_line)
    plain, plain_design = ~literature.precise, ~literature.precise_design
    size, open_bands = int(plain.sum()), literature.bands - 1
    pieces = np.empty((plain.size, tau.size, mu.size))
    pieces[plain] = logs[:size]
    chances = np.empty((plain_design.size, literature.bands, tau.size, mu.size))
    bands = np.exp(logs[size:]).reshape(-1, open_bands, tau.size, mu.size)
    chances[plain_design, :-1] = bands
    chances[plain_design, -1] = np.maximum(1.0 - bands.sum(axis=1), 0.0)
    if not plain.all():
        pieces[literature.precise] = mixed_bumps(literature.bumps, mu, tau)
    if not plain_design.all():
        chances[literature.precise_design] = mixed_tails(literature.tails, mu, tau)
    return pieces, chances


def own_likelihoods(literature: Literature, theta: Array) -> Array:
    """log L of each piece at single effects (G,), shape (m, G)."""
    out = np.empty((literature.owner.size, theta.size))
    out[~literature.precise] = literature.curves(theta).T[: int((~literature.precise).sum())]
    if literature.precise.any():
        out[literature.precise] = mixed_bumps(literature.bumps, theta, np.zeros(1))[:, 0]
    return out


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
