"""Estimates from the significant results alone, conditional on their being significant; exact.

If only significant results get printed, what they say is the distribution of the statistic X beyond
its critical value c, with one common effect θ:

    log L(θ) = Σ_i c_i [log f_i(x_i; θ) - log P_i(X beyond c_i; θ)]      (Hedges 1984),
    q_i(θ) = P(X > x_i; θ) / P(X > c_i; θ), uniform at the true θ  (Simonsohn et al. 2014;
                                                                    van Assen et al. 2015).

"Beyond" means X > c for significance in the predicted direction, |X| > c for either direction.

Just above the cut the first likelihood has its maximum at a large effect of the wrong sign, or none
at all (z = 2.0 against 1.96 gives -23). Such a maximum is a statement about the shape of a far tail
and no estimate; it is reported as 0, at a boundary, as van Assen et al. (2015) do, while the
interval keeps whatever lower end the likelihood gives, -inf included. Selection in either direction
has its maximum near 0 there.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace
from typing import Literal, TypeAlias

import numpy as np
from scipy.interpolate import CubicSpline
from scipy.special import chdtri, comb, gammaln, ndtr

from netsize.effect_sizes import curves
from netsize.effect_sizes.records import Evidence
from netsize.numerics.arrays import Array, BoolArray
from netsize.numerics.grid import GridDistribution
from netsize.numerics.roots import increasing_root
from netsize.synthesis.confidence import unusable
from netsize.synthesis.records import Estimate

__all__ = [
    "Domain",
    "Sides",
    "conditional_likelihood",
    "conditional_quantiles",
    "irwin_hall",
    "likelihood_maximum",
    "search_domain",
    "tail_shares",
]

Sides: TypeAlias = Literal["predicted", "either"]

# Beyond 5 standard errors against the direction the chance of significance is below 1e-12 and the
# library's noncentral tails lose their relative accuracy.
_AGAINST = 5.0
_BEYOND = 8.0
_COARSE, _FINE = 101, 401
_DEPTH = 25.0  # log-likelihood below the maximum at which nothing is left to see
_NOTHING = 1e-12
_EXACT_SUM = 16  # terms up to which the Irwin-Hall sum keeps ten digits


@dataclass(frozen=True, slots=True)
class Domain:
    """Effects searched, on the metric."""

    low: float
    high: float

    @property
    def floor(self) -> float:
        """The lowest effect there is: 0 without a sign, else none."""
        return 0.0 if self.low == 0 else -np.inf


def search_domain(
    estimates: Array, null_variances: Array, *, signed: bool, sides: Sides = "predicted"
) -> Domain:
    """From 5 of the smallest standard errors below 0 to 8 beyond all results.

    Where either sign is printed both ends lie 8 beyond all; without a sign effects start at 0.
    """
    se = np.sqrt(null_variances)
    high = float((estimates + _BEYOND * se).max())
    if not signed:
        return Domain(0.0, high)
    if sides == "either":
        return Domain(float((estimates - _BEYOND * se).min()), high)
    return Domain(-_AGAINST * float(se.min()), high)


def likelihood_maximum(
    evidence: Sequence[Evidence], shares: Array, domain: Domain, *, sides: Sides
) -> tuple[float, float]:
    """The θ in the domain with the highest conditional likelihood, and log L there."""
    return _highest(_likelihood_curve(evidence, shares, domain, sides))


def conditional_likelihood(
    evidence: Sequence[Evidence],
    shares: Array,
    domain: Domain,
    *,
    sides: Sides,
    level: float = 0.95,
) -> Estimate:
    """Maximum of the conditional likelihood with its likelihood-ratio interval.

    Parameters
    ----------
    evidence : exact results beyond their first cut, all of them. shares : c_i, shape (k,).
    domain : effects searched. sides : which results selection lets through.
    """
    key = "conditional-likelihood" if sides == "predicted" else "conditional-either-sign"
    label = "Conditional likelihood" if sides == "predicted" else "Conditional (either sign)"
    used = len(evidence)
    if used == 0:
        return unusable(key, label, level=level, used=0, reason="no exact significant result")
    curve = _likelihood_curve(evidence, shares, domain, sides)
    top, highest = _highest(curve)

    def signed_root(theta: Array) -> Array:
        drop = 2 * np.maximum(highest - curve(theta), 0.0)
        return np.asarray(np.sign(theta - top) * np.sqrt(drop))

    theta = np.unique(np.append(curve.x, top))
    root = np.maximum.accumulate(signed_root(theta))
    limit = float(np.sqrt(chdtri(1, 1 - level)))
    low = _zero(lambda x: signed_root(x) + limit, theta, root + limit)
    high = _zero(lambda x: signed_root(x) - limit, theta, root - limit)
    low = max(low, domain.floor)
    distribution = _confidence(theta, np.asarray(ndtr(root)), domain)
    if top > 0 or sides == "either":
        se = float(1 / np.sqrt(-curve(top, 2)))
        return Estimate(
            key=key, label=label, estimate=top, se=se, low=low, high=high, level=level, used=used,
            reason=_caveat(used), distribution=distribution,
        )  # fmt: skip
    return _at_zero(key, label, low, high, level, used, distribution)


def conditional_quantiles(
    evidence: Sequence[Evidence], domain: Domain, *, level: float = 0.95
) -> Estimate:
    """The θ at which the conditional tail shares q_i have their expected sum k/2.

    Their sum is Irwin-Hall at the true effect, which gives an exact interval and, for one result,
    the median-unbiased estimate.
    """
    key, label, used = "conditional-quantiles", "Uniform p-values", len(evidence)
    if used == 0:
        return unusable(key, label, level=level, used=0, reason="no exact significant result")

    def cdf(theta: Array) -> Array:
        return irwin_hall(np.clip(curve(theta), 0.0, used), terms=used)

    theta = np.linspace(domain.low, domain.high, _COARSE)
    law = irwin_hall(tail_shares(evidence, theta).sum(axis=0), terms=used)
    theta = _around(theta, (law > _NOTHING) & (law < 1 - _NOTHING))
    curve = CubicSpline(theta, tail_shares(evidence, theta).sum(axis=0))
    law = np.maximum.accumulate(cdf(theta))
    tail = (1 - level) / 2

    def at(probability: float) -> float:
        return _zero(lambda x: cdf(x) - probability, theta, law - probability)

    low, middle, high = max(at(tail), domain.floor), at(0.5), at(1 - tail)
    distribution = _confidence(theta, law, domain)
    if middle > 0:
        return Estimate(
            key=key, label=label, estimate=middle, low=low, high=high, level=level, used=used,
            reason=_caveat(used), distribution=distribution,
        )  # fmt: skip
    return _at_zero(key, label, low, high, level, used, distribution)


def tail_shares(evidence: Sequence[Evidence], theta: Array) -> Array:
    """q_i(θ), shape (k, G): how much of the significant tail lies beyond the observed value."""
    beyond = curves.band_probabilities([_cut_at(e, (e.low,)) for e in evidence], theta)[:, 0]
    significant = curves.band_probabilities([_cut_at(e, e.cuts[:1]) for e in evidence], theta)[:, 0]
    with np.errstate(all="ignore"):
        return np.clip(np.nan_to_num(beyond / significant), 0.0, 1.0)


def irwin_hall(total: Array, *, terms: int) -> Array:
    """P(U₁ + ... + U_k ≤ total) for k uniform variables; normal beyond 16 of them."""
    total = np.asarray(total, dtype=float)
    if terms > _EXACT_SUM:
        return np.asarray(ndtr((total - terms / 2) / np.sqrt(terms / 12)))
    lower = np.minimum(total, terms - total)  # the sum is symmetric; the short side loses no digits
    j = np.arange(terms + 1)[:, None]
    pieces = (-1.0) ** j * comb(terms, j) * np.maximum(lower.ravel() - j, 0.0) ** terms
    tail = (pieces.sum(axis=0) * np.exp(-gammaln(terms + 1))).reshape(total.shape)
    return np.asarray(np.where(total <= terms / 2, tail, 1 - tail))


def _log_likelihood(
    evidence: Sequence[Evidence], shares: Array, theta: Array, sides: Sides
) -> Array:
    printed = _significant(evidence, theta, sides)
    with np.errstate(divide="ignore"):
        log_printed = np.log(printed)
    value = np.asarray(shares @ (curves.log_likelihood(evidence, theta) - log_printed))
    return np.where(np.isfinite(value), value, -np.inf)


def _significant(evidence: Sequence[Evidence], theta: Array, sides: Sides) -> Array:
    """P(X > c), or P(|X| > c) for either sign, shape (k, G)."""
    if sides == "predicted":
        bands = curves.band_probabilities([_cut_at(e, e.cuts[:1]) for e in evidence], theta)
        return np.asarray(bands[:, 0])
    both = [_cut_at(e, (e.cuts[0], -e.cuts[0])) for e in evidence]
    bands = curves.band_probabilities(both, theta)
    return np.asarray(bands[:, 0] + bands[:, 2])


def _cut_at(e: Evidence, cuts: tuple[float, ...]) -> Evidence:
    return replace(e, cuts=cuts, band=None)


def _likelihood_curve(
    evidence: Sequence[Evidence], shares: Array, domain: Domain, sides: Sides
) -> CubicSpline:
    """log L(θ) where it is within `_DEPTH` of its maximum: a coarse look, then a fine spline."""
    theta = np.linspace(domain.low, domain.high, _COARSE)
    value = _log_likelihood(evidence, shares, theta, sides)
    theta = _around(theta, value > value.max() - _DEPTH)
    value = _log_likelihood(evidence, shares, theta, sides)
    kept = value > value.max() - 4 * _DEPTH
    return CubicSpline(theta[kept], value[kept])


def _around(theta: Array, wanted: BoolArray) -> Array:
    """A fine grid over the wanted part of a coarse one and one step beyond on either side."""
    places = np.flatnonzero(wanted)
    if not places.size:  # all of it falls between two points
        return np.linspace(theta[0], theta[-1], 5 * _FINE)
    low, high = max(int(places[0]) - 1, 0), min(int(places[-1]) + 1, theta.size - 1)
    return np.linspace(theta[low], theta[high], _FINE)


def _highest(curve: CubicSpline) -> tuple[float, float]:
    candidates = np.append(curve.derivative().roots(extrapolate=False), curve.x[[0, -1]])
    values = curve(candidates)
    best = int(np.argmax(values))
    return float(candidates[best]), float(values[best])


def _zero(function: Callable[[Array], Array], theta: Array, value: Array) -> float:
    """Zero of an increasing function tabulated on a grid; ±inf where it lies outside."""
    if value[0] > 0:
        return -np.inf
    if value[-1] < 0:
        return np.inf
    place = int(np.clip(np.searchsorted(value, 0.0), 1, theta.size - 1))
    return float(increasing_root(function, theta[place - 1], theta[place]))


def _confidence(theta: Array, cdf: Array, domain: Domain) -> GridDistribution:
    """From a distribution function; what lies below 0 on a scale without a sign is put at 0."""
    if domain.floor == 0:
        return GridDistribution(
            edges=np.append(0.0, theta),
            mass=np.diff(cdf, prepend=0.0),
            above=float(1.0 - cdf[-1]),
        )
    return GridDistribution.from_cdf(theta, cdf)


def _caveat(used: int) -> str:
    return "one result" if used == 1 else "takes all results to share one effect"


def _at_zero(
    key: str,
    label: str,
    low: float,
    high: float,
    level: float,
    used: int,
    distribution: GridDistribution,
) -> Estimate:
    return Estimate(
        key=key,
        label=label,
        estimate=0.0,
        low=low,
        high=max(high, 0.0),
        level=level,
        used=used,
        status="at a boundary",
        reason="so close to the significance threshold, the results fit an effect of 0 or against "
        "the prediction best; shown as 0",
        distribution=distribution,
    )
